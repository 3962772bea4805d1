package cli

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"github.com/spf13/cobra"

	"sixdown/audioio"
	"sixdown/cmd/sixdown/internal/caution"
	"sixdown/cmd/sixdown/internal/demo"
	"sixdown/sim"
	"sixdown/xover"
	"sixdown/xover/quantity"
)

func newDemoCmd(s *streams) *cobra.Command {
	out := "sixdown-demo"
	cmd := &cobra.Command{
		Use:   "demo",
		Short: "Show the whole job on a built-in, invented loudspeaker",
		Long: `Demo takes an invented two-way through the whole job: it sizes a textbook network,
predicts what that does to real drivers, predicts a network that was tuned to them,
renders it to WAV files, and verifies it from these files. Everything that it makes
is left in a folder to look at, listen to and change.`,
		Example: "  sixdown demo --out example",
		Args:    noArguments,
		RunE: func(cmd *cobra.Command, _ []string) error {
			d := &demonstration{s: s, dir: out}
			return d.run(cmd.Context())
		},
	}
	cmd.Flags().StringVar(&out, "out", out, "`folder` for all that is made")
	return cmd
}

// A demonstration is a run of demo.
type demonstration struct {
	s    *streams
	dir  string
	step int
	err  error // of printing
}

// say prints; the first error stays.
func (d *demonstration) say(format string, args ...any) {
	if d.err == nil {
		d.err = d.s.answer(fmt.Sprintf(format, args...))
	}
}

// begin announces a step and the command that does the same.
func (d *demonstration) begin(title, command string) {
	d.step++
	d.say("\n%d. %s\n   $ sixdown %s\n\n", d.step, title, command)
}

func (d *demonstration) path(name ...string) string {
	return filepath.Join(append([]string{d.dir}, name...)...)
}

// indent sets a text under its step.
func indent(text string) string {
	var b strings.Builder
	for line := range strings.Lines(text) {
		if line != "\n" {
			line = "   " + line
		}
		b.WriteString(line)
	}
	return b.String()
}

// The textbook is the same crossover for the same drivers, sized as if they were resistances.
const (
	textbookFile = "textbook.toml"
	demoShape    = "linkwitz-riley"
	demoOrder    = 4
)

func (d *demonstration) run(ctx context.Context) error {
	if err := d.prepare(); err != nil {
		return err
	}
	design, sys, err := d.load(demo.HarbourFile)
	if err != nil {
		return err
	}
	d.say("Harbour is a two-way loudspeaker that nobody has built: drivers, cabinet and network are\ninvented. Its design file is %s.\n", d.path(demo.HarbourFile))
	for _, step := range []func() error{
		func() error { return d.textbook(design) },
		func() error { return d.predict(design, sys) },
		func() error { return d.render(ctx, design, sys) },
		func() error { return d.verify(ctx, design, sys) },
		func() error { return d.mistake(ctx) },
	} {
		if err := step(); err != nil {
			return err
		}
	}
	d.say("\n%s\n%s", caution.Text(caution.Sound()), d.next())
	return d.err
}

// prepare makes the folder and writes the design.
func (d *demonstration) prepare() error {
	if err := os.MkdirAll(d.dir, 0o777); err != nil {
		return machineFault(d.dir, err, "name a folder that can be made, with --out")
	}
	return d.writeDesign(demo.HarbourFile, demo.Harbour)
}

// writeDesign writes a design file, unless there is one that the user has changed.
func (d *demonstration) writeDesign(name, text string) error {
	path := d.path(name)
	old, err := os.ReadFile(path)
	switch {
	case err == nil && !bytes.Equal(old, []byte(text)):
		return usageFault(path, "it has been changed since demo wrote it", "give another folder with --out, or delete this file to have the original back")
	case err == nil:
		return nil
	case !errors.Is(err, fs.ErrNotExist):
		return machineFault(path, err, "give another folder with --out")
	}
	return writeWhole(path, text)
}

func (d *demonstration) load(name string) (*xover.Design, *sim.System, error) {
	o := designOptions{path: d.path(name)}
	return o.loadSystem(d.s)
}

// textbook puts a network that is sized as by start in front of the same drivers, and tells what they make
// of it.
func (d *demonstration) textbook(design *xover.Design) error {
	o := startOptions{}
	o.crossover.shape, o.crossover.order, o.crossover.arrangement = demoShape, demoOrder, plainArrangement
	o.crossover.at = []float64{design.Ways[0].Targets[0].Frequency}
	for i := range design.Drivers {
		o.drivers = append(o.drivers, startSpec(&design.Drivers[i]))
	}
	d.begin("Size: a textbook network for these drivers",
		fmt.Sprintf("start --at %s --shape %s --order %d --driver %s --driver %s",
			strings.ReplaceAll(quantity.Format(o.crossover.at[0], quantity.Hertz), " ", ""), demoShape, demoOrder, o.drivers[0], o.drivers[1]))
	plan, err := o.plan()
	if err != nil {
		return err
	}
	text, err := demo.ByTheBook("Harbour, by the book", plan.text())
	if err != nil {
		return err
	}
	if err := d.writeDesign(textbookFile, text); err != nil {
		return err
	}
	book, sys, err := d.load(textbookFile)
	if err != nil {
		return err
	}
	p, err := predictAt(d.s, book, sys, thirdOctaves(book, audible[0], audible[1]))
	if err != nil {
		return err
	}
	for _, w := range book.Ways {
		var steps []string
		for _, x := range w.Network {
			steps = append(steps, x.String())
		}
		d.say("   %-5s %s\n", w.Name, strings.Join(steps, ", "))
	}
	var parts []string
	for _, x := range book.Parts {
		parts = append(parts, x.Name+" "+quantity.Round(x.Value, x.Kind.Unit(), 3))
	}
	d.say("   parts %s\n\n   Into resistors, at one place, these ways add up flat. With these drivers, in their cabinet and\n   at their places, they do not (%s):\n\n%s", strings.Join(parts, ", "), d.path(textbookFile), indent(p.summaryText()))
	return nil
}

// predict tells what the tuned network does, and leaves the tables.
func (d *demonstration) predict(design *xover.Design, sys *sim.System) error {
	path := d.path(demo.HarbourFile)
	d.begin("Predict: a network that was tuned to them, in parts that can be bought", "predict "+path)
	p, err := predictAt(d.s, design, sys, thirdOctaves(design, audible[0], audible[1]))
	if err != nil {
		return err
	}
	text, table := d.path("predict.txt"), d.path("predict.csv")
	if err := writeWhole(text, p.text()); err != nil {
		return err
	}
	if err := writeWhole(table, csvText(p.records())); err != nil {
		return err
	}
	d.say("%s\n   The tables are in %s and %s.\n", indent(p.summaryText()), text, table)
	return nil
}

// The signals that demo renders, each into a folder of its name.
const (
	demoTones = "tones"
	demoNoise = "noise"
)

func (d *demonstration) signal(kind string) signalOptions {
	return signalOptions{signal: kind, seconds: 10, rate: 48000, bits: "24", colour: "pink", seed: 1}
}

func (d *demonstration) render(ctx context.Context, design *xover.Design, sys *sim.System) error {
	path := d.path(demo.HarbourFile)
	d.begin("Render: tones through the network's differential equations", fmt.Sprintf("render %s --out %s", path, d.path(demoTones)))
	o := d.signal(demoTones)
	rec, err := renderTo(ctx, d.s, design, sys, &o, d.path(demoTones))
	if err != nil {
		return err
	}
	d.say("%s", indent(renderText(design, rec, &o, d.path(demoTones))))
	d.say("\n   And something to listen to:\n   $ sixdown render %s --signal noise --out %s\n\n", path, d.path(demoNoise))
	o = d.signal(demoNoise)
	if rec, err = renderTo(ctx, d.s, design, sys, &o, d.path(demoNoise)); err != nil {
		return err
	}
	d.say("%s", indent(renderText(design, rec, &o, d.path(demoNoise))))
	return nil
}

func (d *demonstration) verify(ctx context.Context, design *xover.Design, sys *sim.System) error {
	d.begin("Verify: measure the file, and hold it against the prediction",
		fmt.Sprintf("verify %s --from %s", d.path(demo.HarbourFile), d.path(demoTones)))
	v, err := verifyFrom(ctx, d.s, sys, d.path(demoTones), audioio.Limits{})
	if err != nil {
		return err
	}
	path := d.path("verify.txt")
	if err := writeWhole(path, verifyText(design, v)); err != nil {
		return err
	}
	d.say("%s\n   Tone by tone in %s.\n", indent(verdict(design, v)), path)
	if !v.Pass {
		return errCheckFailed
	}
	return nil
}

// mistake verifies the same file against a design in which one part is off, as if it had been built wrong.
func (d *demonstration) mistake(ctx context.Context) error {
	path := d.path(demo.HarbourFile)
	const change = "C3=5.1uF"
	d.begin("And if a wrong part were in it?", fmt.Sprintf("verify %s --from %s --set %s", path, d.path(demoTones), change))
	o := designOptions{path: path, set: []string{change}}
	design, sys, err := o.loadSystem(d.s)
	if err != nil {
		return err
	}
	v, err := verifyFrom(ctx, d.s, sys, d.path(demoTones), audioio.Limits{})
	if err != nil {
		return err
	}
	d.say("%s", indent(verdict(design, v)))
	if v.Pass {
		return errCheckFailed
	}
	return nil
}

func (d *demonstration) next() string {
	path := d.path(demo.HarbourFile)
	return fmt.Sprintf(`What to try next
  What if that coil were larger?   sixdown predict %[1]s --set L1=0.68mH
  Your own music through it:       sixdown render %[1]s --signal FILE.wav --out music
  Another alignment:               sixdown size --shape butterworth --order 3 --at 3kHz --load 6ohm
  For your own drivers:            sixdown start --help
%[1]s is meant to be opened in an editor and changed.

If you came here by go run, make the program first: go build -o sixdown ./cmd/sixdown
and write ./sixdown for sixdown. On Windows: go build -o sixdown.exe ./cmd/sixdown
and .\sixdown.exe
`, path)
}

// startSpec is a data-sheet driver as the --driver flag of start has it.
func startSpec(x *xover.Driver) string {
	var items []string
	add := func(key string, v float64, unit quantity.Unit) {
		if v == 0 {
			return
		}
		text := strings.ReplaceAll(quantity.Format(v, unit), " ", "")
		items = append(items, key+":"+text)
	}
	add("re", x.Re, quantity.Ohm)
	add("le", x.Le, quantity.Henry)
	add("fs", x.Fs, quantity.Hertz)
	add("qms", x.Qms, quantity.None)
	add("qes", x.Qes, quantity.None)
	add("diameter", x.Diameter, quantity.Metre)
	add("sensitivity", x.Sensitivity, quantity.Decibel)
	return x.Name + "=" + strings.Join(items, ",")
}
