package cli

import (
	"fmt"
	"slices"

	"github.com/spf13/cobra"

	"sixdown/sim"
	"sixdown/xover"
)

// predictOptions are what predict is asked.
type predictOptions struct {
	design  designOptions
	against string // a design to compare with; "": none
	grid    gridOptions
	form    answerForm
	chart   chartOptions
	around  aroundOptions
	family  familyOptions
}

func newPredictCmd(s *streams) *cobra.Command {
	var o predictOptions
	cmd := &cobra.Command{
		Use:   "predict DESIGN [OTHER]",
		Short: "Predict what each driver gets, what adds up at the ear, and the load",
		Long: `Predict computes, for a design file:

- each way's gain and phase: the voltage across its driver over the open-circuit
  voltage of the amplifier, wiring polarity included;
- its level at the ear, in dB SPL for the drive's level, if the design says how the
  drivers sound; the sum of all ways; and the sum's group delay, without the
  flight time over the listening distance;
- the load: what the amplifier sees after its own source resistance, and the
  resistor that would heat the amplifier's output stage as much (EPDR);
- in short, where the ways cross and how well they are in step there, how even the
  sum is, and where the load is lowest.

What a design file may say: sixdown help design.

Without --at or a grid, the table is in third-octaves with the design's targets
among them; JSON and CSV are in 24 points an octave from 20 Hz to 20 kHz.

With two designs, A and B, both are set side by side with their difference; --set
and --turn then change B alone, so that one file named twice shows what a change
does.

With --angle the ear is turned about the cabinet's origin, for all of these. --polar
and --around print other tables: the sum at every 10 degrees of a plane, and the
means over many angles of ANSI/CTA-2034-A with the directivity indexes, and whether
the drivers' directivity is measured (responses) or from the model. Its sound power is
by the weights that the standard prints, by which a beam has up to 1 dB more than it
truly radiates: compare it with curves of that standard.

With --chart the answer is drawn too, over the grid's span: the response with each
way and its target, phase, group delay, the load, the phasors at each crossing, the
sum with one side reversed, the step response, which needs frequencies up to
64 kHz (beyond its end a driver's table is carried on by its slope), and the polar
maps; with --around, the means over many angles.`,
		Example: `  sixdown predict harbour.toml
  sixdown predict harbour.toml --at "1 kHz,2.2 kHz" --set C3=5.6uF
  sixdown predict harbour.toml --from 100Hz --to 10kHz --per-octave 48 --csv
  sixdown predict harbour.toml --chart harbour.svg
  sixdown predict harbour.toml harbour.toml --set C3=5.6uF --chart change.png
  sixdown predict tone.toml --family treble --chart treble.svg`,
		Args:              oneOrTwoDesigns,
		ValidArgsFunction: twoDesignFiles,
		RunE: func(cmd *cobra.Command, args []string) error {
			o.design.path = args[len(args)-1]
			if len(args) > 1 {
				o.against = args[0]
			}
			if err := o.grid.read(cmd); err != nil {
				return err
			}
			if err := o.chart.check(cmd); err != nil {
				return err
			}
			if err := o.around.check(o.against, o.chart.path, o.chart.panels); err != nil {
				return err
			}
			if err := o.family.check(cmd, o.against, &o.around); err != nil {
				return err
			}
			return runPredict(s, &o)
		},
	}
	o.grid.addTo(cmd)
	o.design.addTo(cmd)
	o.form.addTo(cmd)
	o.chart.addTo(cmd)
	o.around.addTo(cmd)
	o.family.addTo(cmd)
	return cmd
}

// A prediction is the answer of predict.
type prediction struct {
	*sim.Response
	design    *xover.Design
	system    *sim.System
	summary   *sim.Summary
	alignment []sim.Alignment // of the summary's crossings; nil without a sum
	noise     *sim.Noise      // of a tone network; nil of a loudspeaker
	level     float64         // V rms, what SPL is for
	distance  float64         // m
	warnings  []string
}

// splConditions says at what distance and for what voltage SPL is, "SPL at 2 m for 2.83 V"; of two designs that differ, of each.
func splConditions(ps []*prediction) string {
	at := func(p *prediction) string {
		return fmt.Sprintf("at %s m for %s V", figures(p.distance, 4), figures(p.level, 4))
	}
	if len(ps) == 2 && at(ps[0]) != at(ps[1]) {
		return fmt.Sprintf("SPL of A %s, of B %s", at(ps[0]), at(ps[1]))
	}
	return "SPL " + at(ps[0])
}

func runPredict(s *streams, o *predictOptions) error {
	if err := o.form.check(); err != nil {
		return err
	}
	if o.against != "" {
		return runCompare(s, o)
	}
	d, sys, err := o.around.turned(o.design.loadSystem(s))
	if err != nil {
		return err
	}
	freqs := o.grid.frequencies(d, !o.form.json && !o.form.csv)
	if o.family.control != "" {
		return runFamily(s, o, d, freqs)
	}
	switch o.around.table() {
	case "--polar":
		return runPolar(s, o, sys, freqs)
	case "--around":
		return runCurves(s, o, d, sys, freqs)
	}
	p, err := predictAt(s, d, sys, freqs)
	if err != nil {
		return err
	}
	if o.chart.path != "" {
		if err := o.chart.draw(s, []*prediction{p}, &o.grid, o.design.path); err != nil {
			return err
		}
	}
	switch {
	case o.form.json:
		return s.answerJSON(p.document())
	case o.form.csv:
		return s.answerCSV(p.records())
	}
	text := p.text()
	if width, ok := isTerminal(s.out); ok {
		curve, err := p.curve(width, colourful())
		if err != nil {
			return err
		}
		text += curve
	}
	return s.answer(text)
}

// roomKelvin is 20 °C.
const roomKelvin = 293.15

// predictAt predicts at freqs, sums up, and prints the warnings that come with it.
func predictAt(s *streams, d *xover.Design, sys *sim.System, freqs []float64) (*prediction, error) {
	p := &prediction{design: d, system: sys, level: sys.Level(), distance: d.Listen.Distance, warnings: sys.Warnings()}
	var err error
	if p.Response, err = sys.Predict(freqs); err != nil {
		return nil, err
	}
	if p.summary, err = sys.Summary([2]float64{}); err != nil {
		return nil, err
	}
	if p.alignment, err = sys.Alignment(p.summary.Band); err != nil {
		return nil, err
	}
	if d.Tone != nil {
		if p.noise, err = sys.Noise(roomKelvin); err != nil {
			return nil, err
		}
	}
	for _, w := range slices.Concat(lowHighPasses(d), p.Response.Warnings, p.summary.Warnings) {
		p.warnOnce(s, w)
	}
	return p, nil
}

// warnOnce prints a warning that has not been printed yet.
func (p *prediction) warnOnce(s *streams, w string) {
	if !slices.Contains(p.warnings, w) {
		p.warnings = append(p.warnings, w)
		s.warn(w)
	}
}
