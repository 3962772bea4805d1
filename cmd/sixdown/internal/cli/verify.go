package cli

import (
	"cmp"
	"context"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"sixdown/audioio"
	"sixdown/cmd/sixdown/internal/table"
	"sixdown/sim"
	"sixdown/xover"
	"sixdown/xover/quantity"
)

type verifyOptions struct {
	designOptions
	signalOptions
	answerForm
	from     string
	limitDB  float64
	limitDeg float64
}

func newVerifyCmd(s *streams) *cobra.Command {
	var o verifyOptions
	cmd := &cobra.Command{
		Use:   "verify DESIGN [--from DIR]",
		Short: "Measure a rendering and hold it against the prediction",
		Long: `Verify reads the WAV file that render wrote, measures every way against channel 1,
and compares level and phase with the prediction for the design as it stands now.
Where a driver is known by an impedance table, sound files are of a circuit fitted
to it, and so is this prediction; how much that changes is said.
Without --from it renders tones first, into a folder that it removes again.

Points count where the way is predicted above -60 dB (tones) or -50 dB (sweep,
noise). It passes if the worst of them is within the limits; else it says where
it is worst and which single part, at another value, would explain it.`,
		Example: `  sixdown render harbour.toml --out sound
  sixdown verify harbour.toml --from sound`,
		Args:              oneDesign,
		ValidArgsFunction: designFiles,
		RunE: func(cmd *cobra.Command, args []string) error {
			o.path = args[0]
			if cmd.Flags().Changed("from") {
				if o.from == "" {
					return usageFault("--from", "it is empty", "name the folder that render wrote, or leave it out to render anew")
				}
				for _, name := range []string{"rate", "bits"} {
					if cmd.Flags().Changed(name) {
						return usageFault("--"+name, "it has no meaning beside --from", "leave it out: the file has its own")
					}
				}
			}
			if err := cmp.Or(checkLimit(cmd, "limit-gain", o.limitDB), checkLimit(cmd, "limit-phase", o.limitDeg)); err != nil {
				return err
			}
			return runVerify(cmd.Context(), s, &o)
		},
	}
	f := cmd.Flags()
	f.StringVar(&o.from, "from", "", "folder that render wrote")
	f.Float64Var(&o.limitDB, "limit-gain", 0, "largest error in dB that passes; without it, what the file's resolution allows")
	f.Float64Var(&o.limitDeg, "limit-phase", 0, "largest error in degrees that passes; without it, what the file's resolution allows")
	f.IntVar(&o.rate, "rate", 48000, "without --from: samples a second, in Hz")
	f.StringVar(&o.bits, "bits", "24", "without --from: 16, 24, 32 or float")
	o.designOptions.addTo(cmd)
	o.answerForm.addTo(cmd)
	o.signal, o.seed = "tones", 1
	return cmd
}

// checkLimit refuses a limit that is given and that nothing, or everything, would pass.
func checkLimit(cmd *cobra.Command, flag string, limit float64) error {
	if !cmd.Flags().Changed(flag) || limit > 0 && !math.IsInf(limit, 1) {
		return nil
	}
	return usageFault("--"+flag, fmt.Sprintf("%v is no limit", limit), "give a positive number, or leave the flag out")
}

func runVerify(ctx context.Context, s *streams, o *verifyOptions) error {
	if err := o.answerForm.check(); err != nil {
		return err
	}
	d, sys, err := o.loadSystem(s)
	if err != nil {
		return err
	}
	dir := o.from
	if dir == "" {
		if dir, err = os.MkdirTemp("", "sixdown-"); err != nil {
			return machineFault("temporary folder", err, "make room on the disk")
		}
		defer os.RemoveAll(dir)
		if _, err := renderTo(ctx, s, d, sys, &o.signalOptions, dir); err != nil {
			return err
		}
	}
	v, err := verifyFrom(ctx, s, sys, dir, audioio.Limits{GainDB: o.limitDB, PhaseDeg: o.limitDeg})
	if err != nil {
		return err
	}
	switch {
	case o.json:
		err = s.answerJSON(verifyAnswer(v))
	case o.csv:
		err = s.answerCSV(verifyRecords(v))
	default:
		err = s.answer(verifyText(d, v))
	}
	if err == nil && !v.Pass {
		err = errCheckFailed
	}
	return err
}

// verifyFrom verifies what lies in a folder.
func verifyFrom(ctx context.Context, s *streams, sys *sim.System, dir string, lim audioio.Limits) (*audioio.Verification, error) {
	planPath, soundPath := filepath.Join(dir, scheduleFile), filepath.Join(dir, soundFile)
	plan, err := os.Open(planPath)
	if err != nil {
		return nil, inputFault(planPath, err)
	}
	defer plan.Close()
	rec, err := audioio.ReadRecording(plan)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", planPath, err)
	}
	sound, err := os.Open(soundPath)
	if err != nil {
		return nil, inputFault(soundPath, err)
	}
	defer sound.Close()
	v, err := audioio.Verify(ctx, sys, rec, sound, lim)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", soundPath, err)
	}
	for _, w := range v.Warnings {
		s.warn(soundPath + ": " + w)
	}
	return v, nil
}

// pointAnswer and the types below are the machine-readable answer.
type pointAnswer struct {
	Way               string `json:"way"`
	FrequencyHz       number `json:"frequency_hz"`
	PredictedGainDB   number `json:"predicted_gain_db"`
	MeasuredGainDB    number `json:"measured_gain_db"`
	PredictedPhaseDeg number `json:"predicted_phase_deg"`
	MeasuredPhaseDeg  number `json:"measured_phase_deg"`
	FitGainDB         number `json:"fit_gain_db"` // what the circuits fitted to impedance tables change of predicted
	FitPhaseDeg       number `json:"fit_phase_deg"`
	Counted           bool   `json:"counted"`
}

type worstAnswer struct {
	Way         string `json:"way"`
	FrequencyHz number `json:"frequency_hz"`
}

type suspectAnswer struct {
	Part      string `json:"part"`
	Fault     string `json:"fault"`
	Nominal   number `json:"nominal"`
	Estimate  number `json:"estimate"`
	Sigma     number `json:"sigma"`
	Explained number `json:"explained"`
	Passes    bool   `json:"passes"` // with it, the recording would pass
}

type verificationAnswer struct {
	Points        []pointAnswer   `json:"points"`
	WorstGainDB   *number         `json:"worst_gain_error_db"`
	WorstGainAt   *worstAnswer    `json:"worst_gain_at"`
	WorstPhaseDeg *number         `json:"worst_phase_error_deg"`
	WorstPhaseAt  *worstAnswer    `json:"worst_phase_at"`
	LimitGainDB   number          `json:"limit_gain_db"`
	LimitPhaseDeg number          `json:"limit_phase_deg"`
	FloorDB       number          `json:"floor_db"`
	Pass          bool            `json:"pass"`
	Suspects      []suspectAnswer `json:"suspects"`
}

func pointOf(p *audioio.Point) pointAnswer {
	return pointAnswer{p.Way, number(p.Hz), number(sim.DB(p.Predicted)), number(sim.DB(p.Measured)),
		number(sim.PhaseDeg(p.Predicted)), number(sim.PhaseDeg(p.Measured)),
		number(p.FitGainDB()), number(p.FitPhaseDeg()), p.Counted}
}

func verifyAnswer(v *audioio.Verification) verificationAnswer {
	a := verificationAnswer{
		Points: []pointAnswer{}, Suspects: []suspectAnswer{},
		LimitGainDB: number(v.LimitGainDB), LimitPhaseDeg: number(v.LimitPhaseDeg), FloorDB: number(v.FloorDB), Pass: v.Pass,
	}
	for i := range v.Points {
		a.Points = append(a.Points, pointOf(&v.Points[i]))
	}
	if p := v.WorstGain; p != nil {
		e := number(p.GainErrorDB())
		a.WorstGainDB, a.WorstGainAt = &e, &worstAnswer{p.Way, number(p.Hz)}
	}
	if p := v.WorstPhase; p != nil {
		e := number(p.PhaseErrorDeg())
		a.WorstPhaseDeg, a.WorstPhaseAt = &e, &worstAnswer{p.Way, number(p.Hz)}
	}
	for _, x := range v.Suspects {
		a.Suspects = append(a.Suspects, suspectAnswer{x.Part, string(x.Fault), number(x.Nominal), number(x.Estimate), number(x.Sigma), number(x.Explained), x.Passes})
	}
	return a
}

func verifyRecords(v *audioio.Verification) [][]string {
	rows := [][]string{{"way", "frequency_hz", "predicted_gain_db", "measured_gain_db", "predicted_phase_deg", "measured_phase_deg", "fit_gain_db", "fit_phase_deg", "counted"}}
	for i := range v.Points {
		p := pointOf(&v.Points[i])
		rows = append(rows, []string{p.Way, p.FrequencyHz.csv(), p.PredictedGainDB.csv(), p.MeasuredGainDB.csv(),
			p.PredictedPhaseDeg.csv(), p.MeasuredPhaseDeg.csv(), p.FitGainDB.csv(), p.FitPhaseDeg.csv(), fmt.Sprint(p.Counted)})
	}
	return rows
}

// longTable is how many points a way are printed at most; what is left out lies between those that are printed.
const longTable = 40

// verifyText is the answer for people: a table a way, and the verdict.
func verifyText(d *xover.Design, v *audioio.Verification) string {
	var b strings.Builder
	for first := 0; first < len(v.Points); {
		last := first
		for last < len(v.Points) && v.Points[last].Way == v.Points[first].Way {
			last++
		}
		b.WriteString(pointsTable(v.Points[first:last]).Text(pageWidth))
		b.WriteByte('\n')
		first = last
	}
	b.WriteString(verdict(d, v))
	return b.String()
}

// pointsTable sets out the points of one way.
func pointsTable(points []audioio.Point) *table.Table {
	gain, phase, diff := points[0].Way+": gain", "phase", "measured - predicted"
	t := table.New(
		table.Column{Name: "f", Unit: "Hz"},
		table.Column{Group: gain, Name: "predicted", Unit: "dB"}, table.Column{Group: gain, Name: "measured", Unit: "dB"},
		table.Column{Group: phase, Name: "predicted", Unit: "deg"}, table.Column{Group: phase, Name: "measured", Unit: "deg"},
		table.Column{Group: diff, Name: "gain", Unit: "dB"}, table.Column{Group: diff, Name: "phase", Unit: "deg"})
	step := (len(points) + longTable - 1) / longTable
	for i := 0; i < len(points); i += step {
		p := &points[i]
		row := []string{fmt.Sprintf("%.5g", p.Hz), fixed(sim.DB(p.Fitted), 3), "", angle(p.Fitted), "", "quiet", ""}
		if p.Counted {
			row = []string{row[0], row[1], fixed(sim.DB(p.Measured), 3), row[3], angle(p.Measured),
				fixed(p.GainErrorDB(), 5), fixed(p.PhaseErrorDeg(), 5)}
		}
		t.Row(row...)
	}
	return t
}

// verdict is the summary of a verification.
func verdict(d *xover.Design, v *audioio.Verification) string {
	var b strings.Builder
	counted := 0
	for i := range v.Points {
		if v.Points[i].Counted {
			counted++
		}
	}
	fmt.Fprintf(&b, "%d of %d points count, those predicted above %.0f dB; the others are too quiet to judge\n", counted, len(v.Points), v.FloorDB)
	if v.WorstGain == nil {
		b.WriteString("FAILS: no point is loud enough to be judged\n")
		return b.String()
	}
	fmt.Fprintf(&b, "worst level  %9s dB   %s at %s   limit %.4g dB\n", fixed(v.WorstGain.GainErrorDB(), 5), v.WorstGain.Way, quantity.Round(v.WorstGain.Hz, quantity.Hertz, 4), v.LimitGainDB)
	fmt.Fprintf(&b, "worst phase  %9s °    %s at %s   limit %.4g°\n", fixed(v.WorstPhase.PhaseErrorDeg(), 5), v.WorstPhase.Way, quantity.Round(v.WorstPhase.Hz, quantity.Hertz, 4), v.LimitPhaseDeg)
	if p, q := v.WorstFitGain, v.WorstFitPhase; p != nil {
		b.WriteString(noteLines(v.FitNotes))
		b.WriteString(folded("  ", fmt.Sprintf("predicted is with these circuits; they change the prediction by at most %s dB (%s at %s) and %s° (%s at %s)",
			fixed(p.FitGainDB(), 4), p.Way, quantity.Round(p.Hz, quantity.Hertz, 4), fixed(q.FitPhaseDeg(), 4), q.Way, quantity.Round(q.Hz, quantity.Hertz, 4))))
	}
	if v.Pass {
		b.WriteString("PASSES: the recording says what the prediction says\n")
		return b.String()
	}
	b.WriteString("FAILS: the recording is not of this design\n")
	b.WriteString(suspectText(d, v.Suspects))
	return b.String()
}

// suspectText says what would explain a recording that fails, or that no one thing does.
func suspectText(d *xover.Design, suspects []audioio.Suspect) string {
	if len(suspects) == 0 {
		return "  no single part explains it: look for several wrong parts, a wrong connection, or drivers other than the design's\n"
	}
	var b strings.Builder
	for _, x := range suspects {
		if !x.Passes {
			fmt.Fprintf(&b, "  no single part explains it all; nearest, for %.0f %%:\n", 100*x.Explained)
		}
		fmt.Fprintf(&b, "  suspect: %s\n", accusation(d, x))
	}
	return b.String()
}

// accusation is what would explain the recording.
func accusation(d *xover.Design, x audioio.Suspect) string {
	unit := quantity.Ohm
	if p := d.Part(x.Part); p != nil && x.Fault == audioio.WrongValue {
		unit = p.Kind.Unit()
	}
	fits := func(digits int) string {
		return fmt.Sprintf("%s fits, the design says %s", quantity.Round(x.Estimate, unit, digits), quantity.Round(x.Nominal, unit, digits))
	}
	switch x.Fault {
	case audioio.WrongLoss:
		return fmt.Sprintf("%s: a series resistance of %s", x.Part, fits(3))
	case audioio.WrongTurn:
		return fmt.Sprintf("%s: %.4f of its track before the wiper fits, the design says %.4f", x.Part, x.Estimate, x.Nominal)
	case audioio.WrongPolar:
		return x.Part + " is connected the other way round"
	case audioio.SwappedSides:
		return "the channels of " + x.Part + " are exchanged"
	}
	return fmt.Sprintf("%s: %s", x.Part, fits(4))
}
