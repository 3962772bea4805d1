package cli

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"time"

	"github.com/spf13/cobra"

	"sixdown/cmd/sixdown/internal/atomicfile"
	"sixdown/sim"
	"sixdown/sim/tune"
	"sixdown/xover"
	"sixdown/xover/preferred"
	"sixdown/xover/quantity"
)

// tuneOptions are what tune is asked.
type tuneOptions struct {
	design  designOptions
	form    answerForm
	stock   string
	pairs   bool
	out     string
	inPlace bool
	explain bool
	yield   bool
	turns   bool
	starts  int
	seed    uint64
}

func newTuneCmd(s *streams) *cobra.Command {
	var o tuneOptions
	cmd := &cobra.Command{
		Use:   "tune DESIGN [--stock E24|FILE] [--out FILE | --in-place]",
		Short: "Move the values until it meets its targets, in parts that can be bought",
		Long: `Tune moves the values of the parts until the sum at the ear is even over the band of
[tune] and each way follows its target there, where that is above -20 dB. What it
lowers is the mean square of the sum about its level plus that of each way about its
target, in dB². Parts with hold = true stay; same = "L1" follows another; range = [a, b]
bounds a value, else 0.1-100 ohm, 0.1-470 uF and 0.02-15 mH do. min_impedance in
[tune] is a hard limit on the load from 20 Hz to 20 kHz: give one that suits the
amplifier, since an even sum can be had from networks that short it. Where it is not
held, nothing is written and the exit code is 1.

Further keys of [tune]: level, tilt (dB per octave), curve (a table of Hz and dB),
weights = { sum, ways, phase, angles } (phase: that of neighbouring ways, 10 degrees
counting as 1 dB), and angles = ["h=30", "v=-10"], other places of the
ear at which the sum should be even. All keys of a design: sixdown help design.

With --stock it then looks for the best set that can be bought: of a series of preferred
values, or of a list (CSV or TOML: kind, value, tol, dcr, price, count, name). A coil
has the resistance that the list gives or, without one, that of the design's coil if it
were wound of the same wire, or 0.35 ohm for 1 mH if the design gives none either.

The output of a tone network is tuned to the curve and the tilt of [tune] over its band,
by the parts and with --settings by the controls. Potentiometers stay as they are.

Without --out and --in-place nothing is written. Interrupted, it keeps the best so far, and
the exit code is 3.`,
		Example: `  sixdown tune harbour.toml --stock E12 --out tuned.toml
  sixdown tune harbour.toml --stock shelf.csv --explain
  sixdown predict harbour.toml tuned.toml`,
		Args:              oneDesign,
		ValidArgsFunction: designFiles,
		RunE: func(cmd *cobra.Command, args []string) error {
			o.design.path = args[0]
			return runTune(cmd.Context(), s, &o)
		},
	}
	f := cmd.Flags()
	f.StringVar(&o.stock, "stock", "", "buy the parts: `E24` or another series, or the file of a list")
	f.BoolVar(&o.pairs, "pairs", false, "with --stock: two parts in series or in parallel may make one")
	f.StringVar(&o.out, "out", "", "write the design with the new values to this `file`")
	f.BoolVar(&o.inPlace, "in-place", false, "write the new values into the design itself")
	f.BoolVar(&o.explain, "explain", false, "say what changed, and what each change does")
	f.BoolVar(&o.yield, "yield", false, "move on to where more builds stay within the limit of [spread]; the objective may rise by half")
	f.BoolVar(&o.turns, "settings", false, "turn the controls too; hold parts that should stay")
	f.IntVar(&o.starts, "starts", 0, "places to begin at; without it, as many as usually suffice")
	f.Uint64Var(&o.seed, "seed", 1, "of these places")
	o.design.addTo(cmd)
	o.form.addJSON(cmd)
	return cmd
}

// A tuning is the answer of tune.
type tuning struct {
	design  *xover.Design
	problem *tune.Problem
	vars    []tune.Variable
	result  *tune.Result
	worths  []tune.Worth
	bought  *tune.Bought  // nil without --stock
	centred *tune.Centred // nil without --yield
	explain *tune.Explanation
	stock   string
	seconds float64
	written string // the file; "": none
}

func (o *tuneOptions) check() error {
	switch {
	case o.out != "" && o.inPlace:
		return usageFault("command line", "both --out and --in-place are given", "give one of them")
	case o.inPlace && o.design.path == "-":
		return usageFault("--in-place", "the design is standard input", "give --out FILE")
	case o.out == "-":
		return usageFault("--out", "the design cannot be written between the answer's lines", "give the name of a file")
	case o.yield && o.stock != "":
		return usageFault("--yield", "it moves values to where no stock has them", "leave out --stock, or buy by the error alone")
	case o.turns && (o.stock != "" || o.yield):
		return usageFault("--settings", "controls are turned, not bought, and a yield is that of one setting", "leave out --stock and --yield")
	case o.pairs && o.stock == "":
		return usageFault("--pairs", "there is nothing to pair without --stock", "give --stock too")
	case o.starts < 0 || o.starts > 100000:
		return usageFault("--starts", fmt.Sprintf("%d places", o.starts), "give 1 to 100000, or leave it out")
	}
	return nil
}

func runTune(ctx context.Context, s *streams, o *tuneOptions) error {
	if err := o.check(); err != nil {
		return err
	}
	source, err := readSource(o.stock)
	if err != nil {
		return err
	}
	// The text is read once, so that what is written back is what was tuned, from standard input too.
	name, src, err := readDesign(s, o.design.path)
	if err != nil {
		return err
	}
	d, sys, err := o.design.systemOf(s, name, src)
	if err != nil {
		return err
	}
	if err := o.checkTarget(d); err != nil {
		return err
	}
	t := &tuning{design: d, stock: o.stock}
	if o.turns {
		tune.OffTheEnds(d)
		if sys, err = sim.New(d, tablesIn(o.design.folder())); err != nil {
			return err
		}
	}
	if t.problem, err = tune.New(d, sys, tablesIn(o.design.folder())); err != nil {
		return err
	}
	if o.turns {
		if err := t.problem.MoveSettings(); err != nil {
			return err
		}
	}
	t.vars = t.problem.Variables()
	for _, v := range t.vars {
		if v.Moved {
			unit := v.Kind.Unit()
			s.warn(fmt.Sprintf("%s is beyond %s to %s, and the search begins at the nearer of these", v.Part, quantity.Format(v.Low, unit), quantity.Format(v.High, unit)))
		}
	}
	began := time.Now()
	if err := t.work(ctx, s, o, source); err != nil {
		return err
	}
	t.seconds = time.Since(began).Seconds()
	if err := t.judgeLoad(ctx, s); err != nil {
		return err
	}
	var writing error // told behind the answer, which is not lost with it
	if !t.unmet() {
		writing = t.write(o, src)
	}
	if t.interrupted() {
		s.warn("interrupted: this is the best so far")
	}
	if o.form.json {
		err = s.answerJSON(t.document())
	} else {
		err = s.answer(t.text())
	}
	switch {
	case err != nil:
		return err
	case writing != nil:
		return writing
	case t.interrupted():
		return errInterrupted
	case t.unmet():
		return errCheckFailed
	}
	return nil
}

// interrupted reports whether some search was.
func (t *tuning) interrupted() bool {
	return t.result.Status == tune.Interrupted || t.bought != nil && t.bought.Status == tune.Interrupted || t.centred != nil && t.centred.Status == tune.Interrupted
}

// target is the file that is to be written; "": none.
func (o *tuneOptions) target() string {
	if o.inPlace {
		return o.design.path
	}
	return o.out
}

// inputs are the files that are read and must stay.
func (o *tuneOptions) inputs(d *xover.Design) []string {
	var all []string
	if !o.inPlace && o.design.path != "-" {
		all = append(all, o.design.path)
	}
	if _, err := preferred.ParseSeries(o.stock); o.stock != "" && err != nil {
		all = append(all, o.stock)
	}
	for _, name := range d.Files() {
		if path := filepath.FromSlash(name); filepath.IsAbs(path) {
			all = append(all, path)
		} else {
			all = append(all, filepath.Join(o.design.folder(), path))
		}
	}
	return all
}

// checkTarget reports, before any work is done, a file that cannot be written or is read too.
func (o *tuneOptions) checkTarget(d *xover.Design) error {
	path := o.target()
	if path == "" {
		return nil
	}
	for _, in := range o.inputs(d) {
		if atomicfile.Same(path, in) {
			return usageFault(path, "it is also what is read", "give another name or folder")
		}
	}
	if at, err := os.Stat(path); err == nil && at.IsDir() {
		return usageFault(path, "it is a folder", "give the name of a file")
	}
	if at, err := os.Stat(filepath.Dir(path)); err != nil || !at.IsDir() {
		return usageFault(path, "its folder is not there", "make the folder, or give another")
	}
	return nil
}

// work does all the searching. An interrupt ends each search with the best so far.
func (t *tuning) work(ctx context.Context, s *streams, o *tuneOptions, source tune.Source) error {
	bar := newProgress(s, "tuning")
	var err error
	t.result, err = t.problem.Run(ctx, tune.Search{Starts: o.starts, Seed: o.seed, Progress: func(done, _ float64) { bar.at(done) }})
	bar.done()
	if err != nil {
		return err
	}
	if t.result.Status != tune.Interrupted { // what is no optimum says nothing of its parts
		if t.worths, err = t.problem.Worths(t.result.Values); err != nil {
			return err
		}
	}
	if source != nil {
		bar := newProgress(s, "buying")
		t.bought, err = t.problem.Buy(ctx, t.result.Values, source, tune.BuySettings{Pairs: o.pairs, Progress: func(done, _ float64) { bar.at(done) }})
		bar.done()
		if err != nil {
			return err
		}
	}
	if o.yield {
		bar := newProgress(s, "centring")
		t.centred, err = t.problem.Centre(ctx, t.result.Values, tune.CentreSettings{Seed: o.seed, Progress: bar.at})
		bar.done()
		if err != nil {
			return err
		}
	}
	if o.explain {
		var ohms []float64
		if t.bought != nil {
			ohms = t.bought.Ohms
		}
		t.explain, err = t.problem.Explain(t.problem.DesignValues(), t.chosen(), ohms)
	}
	return err
}

// chosen returns the values that would be written: those that can be bought if that was asked for.
func (t *tuning) chosen() []float64 {
	switch {
	case t.bought != nil:
		return t.bought.Values
	case t.centred != nil:
		return t.centred.Values
	}
	return t.result.Values
}

// unmet reports whether what would be written breaks the limit on the impedance.
func (t *tuning) unmet() bool {
	if t.bought != nil {
		return t.bought.Unmet
	}
	return t.result.Unmet
}

// judgeLoad warns of a network that an amplifier may not stand and, where the design sets no limit, finds out what one would cost.
func (t *tuning) judgeLoad(ctx context.Context, s *streams) error {
	after := t.chosenScore()
	limit := t.design.Tune.MinImpedance
	usual := math.Floor(10*min(lowLoad*t.design.Drive.RatedLoad, t.result.Before.MinImpedance)) / 10
	switch {
	case t.unmet() && t.interrupted():
		s.warn(fmt.Sprintf("min_impedance %s is not held by what was found before the interrupt: the load is %s ohm at least; nothing is written; let it go on for longer", quantity.Format(limit, quantity.Ohm), ohms(after.MinImpedance)))
	case t.unmet():
		s.warn(fmt.Sprintf("min_impedance %s is not held by any values that were tried: the load is %s ohm at least; nothing is written; lower the limit, widen a range, or give other parts", quantity.Format(limit, quantity.Ohm), ohms(after.MinImpedance)))
	case limit == 0 && t.design.Tone == nil && after.MinImpedance < usual:
		warning := fmt.Sprintf("the load falls to %s ohm at %s, which amplifiers may not stand; give [tune] min_impedance a value that yours does", ohms(after.MinImpedance), hertz(after.MinImpedanceAt))
		if ctx.Err() != nil || usual <= 0 {
			s.warn(warning)
			return nil
		}
		safe, err := t.problem.WithLimit(usual).Run(ctx, tune.Search{Seed: 1})
		if err != nil && ctx.Err() == nil {
			return err
		}
		if err == nil && !safe.Unmet && safe.Status != tune.Interrupted {
			warning += fmt.Sprintf(": with %s the error would be %s instead of %s", quantity.Format(usual, quantity.Ohm), decibels(rms(safe.After.Objective)), decibels(rms(t.result.After.Objective)))
		}
		s.warn(warning)
	}
	return nil
}

// lowLoad is how much of the rated load the impedance may fall to: 80 %, IEC 60268-5, 16.1, on the rated impedance.
const lowLoad = 0.8

// write writes the design with the values chosen, if that was asked for.
func (t *tuning) write(o *tuneOptions, src []byte) error {
	path := o.target()
	if path == "" {
		return nil
	}
	if o.inPlace {
		if now, err := os.ReadFile(path); err != nil || !bytes.Equal(now, src) {
			return usageFault(path, "it was changed while the values were searched for", "run it again, or write the values in by hand")
		}
	}
	values, ohmsOf, tols, turns := map[string]float64{}, map[string]float64{}, map[string]float64{}, map[string]float64{}
	for v, value := range t.chosen() {
		if control := t.vars[v].Control; control != "" {
			turns[control] = fourDecimals(value)
		}
	}
	src, err := t.changed(src, values, turns)
	if err != nil {
		return err
	}
	for v, value := range t.chosen() {
		if t.vars[v].Control != "" {
			continue
		}
		values[t.vars[v].Part] = nineFigures(value)
		if t.bought == nil {
			continue
		}
		for _, name := range append([]string{t.vars[v].Part}, t.vars[v].Followers...) {
			if ohm := t.bought.Ohms[v]; ohm > 0 {
				ohmsOf[name] = ohm
			}
			if tol := t.bought.Choices[v].Tol(); tol >= 0 {
				tols[name] = tol
			}
		}
	}
	edited, err := xover.Edit(src, values)
	if err != nil {
		return err
	}
	if edited, err = xover.EditDCR(edited, ohmsOf); err != nil {
		return err
	}
	if edited, err = xover.EditTol(edited, tols); err != nil {
		return err
	}
	if err := writeOutput(path, edited, o.inputs(t.design)...); err != nil {
		return err
	}
	t.written = path
	return nil
}

// nineFigures rounds a value to more figures than any part has, and fewer than sums of two leave behind.
func nineFigures(v float64) float64 {
	rounded, err := strconv.ParseFloat(strconv.FormatFloat(v, 'e', 8, 64), 64)
	if err != nil {
		return v
	}
	return rounded
}

// fourDecimals rounds a setting to finer than any knob is set.
func fourDecimals(at float64) float64 { return math.Round(at*1e4) / 1e4 }

// changed adds to values what --set has made of parts, and turns the controls in src as --turn has: what is written is what was
// tuned.
func (t *tuning) changed(src []byte, values, turns map[string]float64) ([]byte, error) {
	before, _, err := xover.Parse("", src)
	if err != nil {
		return nil, err
	}
	for i := range t.design.Parts {
		if p := &t.design.Parts[i]; p.Same == "" && p.Value != before.Parts[i].Value {
			values[p.Name] = p.Value
		}
	}
	for i, c := range t.design.Controls {
		if _, moved := turns[c.Name]; !moved && c.At != before.Controls[i].At {
			turns[c.Name] = c.At
		}
	}
	return xover.EditControl(src, turns)
}

// readSource returns where parts are bought: nil for "".
func readSource(stock string) (tune.Source, error) {
	if stock == "" {
		return nil, nil
	}
	if series, err := preferred.ParseSeries(stock); err == nil {
		return preferred.Shop{Series: series}, nil
	}
	f, err := os.Open(stock)
	if err != nil {
		if errors.Is(err, os.ErrNotExist) && filepath.Ext(stock) == "" {
			return nil, usageFault("--stock", fmt.Sprintf("%q is neither a series nor a file", stock), "give E6, E12, E24, E48, E96, E192 or the name of a list")
		}
		return nil, inputFault(stock, err)
	}
	defer f.Close() // it was only read
	list, err := preferred.ReadStock(stock, f)
	if err != nil {
		return nil, err
	}
	return list, nil
}

// improvement returns how many per cent lower the objective is.
func improvement(before, after float64) float64 {
	if !(before > 0) {
		return 0
	}
	return 100 * (1 - after/before)
}

// rms is the square root of an objective, a mean of squares in dB².
func rms(objective float64) float64 { return math.Sqrt(objective) }
