package cli

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"sixdown/xover/ladder"
	"sixdown/xover/quantity"
)

// A startPlan is a design file about to be written.
type startPlan struct {
	title   string
	drivers []startDriver
	ways    []startWay

	warnings []string // a sentence each
}

// A startWay is a way of it.
type startWay struct {
	section
	reversed bool
	stages   []stage // from the amplifier to the driver
}

// A stage is some steps of a way that serve one end, or a remark without any.
type stage struct {
	what  string // a comment
	steps []string
	parts []ladder.NamedPart
}

// leastPadDB is the difference in level that is worth a pad.
const leastPadDB = 0.5

// fill makes the ways: the crossover's ladders, pads that make the levels alike, and networks across drivers.
func (p *startPlan) fill(c *crossover, o *startOptions) error {
	t, err := newTrial(c.sections)
	if err != nil {
		return err
	}
	reversed := t.bestSum(t.sized, c.scale()).Reversed
	if c.midReversed != nil {
		reversed = []bool{false, *c.midReversed, false}
	}
	levels := p.levelsDB(c)
	var namer ladder.Namer
	for i, s := range c.sections {
		w := startWay{section: s, reversed: reversed[i]}
		w.add(&namer, fmt.Sprintf("the crossover, into %s", quantity.Round(s.load, quantity.Ohm, 3)), s.network)
		d := &p.drivers[i]
		switch {
		case levels[i] <= -leastPadDB:
			w.note(fmt.Sprintf("%s is %s quieter than %s here: choose a louder driver, or accept it", d.name, quantity.Round(-levels[i], quantity.Decibel, 3), p.drivers[0].name))
		case levels[i] >= leastPadDB && !o.noPad:
			pad, err := ladder.LPad(s.load, levels[i])
			if err != nil {
				return fmt.Errorf("--driver %s: %w", d.name, err)
			}
			w.add(&namer, fmt.Sprintf("a pad of %s, since this way is louder than %s; it gets hot", quantity.Round(levels[i], quantity.Decibel, 3), c.sections[0].name), pad.Network())
		}
		highPass := 0.0
		if i > 0 {
			highPass = o.crossover.at[i-1]
		}
		if o.compensate {
			if err := w.compensate(&namer, d, highPass, i < len(o.crossover.at)); err != nil {
				return err
			}
		}
		if caution := lowHighPass(d.name, highPass, d.resonance()); caution != "" && i > 0 {
			w.note("caution: " + caution)
			p.warnings = append(p.warnings, fmt.Sprintf("way %q: %s", w.name, caution))
		}
		p.ways = append(p.ways, w)
	}
	return nil
}

// add appends a network as a stage, its values rounded to what is read with ease.
func (w *startWay) add(namer *ladder.Namer, what string, n ladder.Network) {
	steps, parts := n.Steps(namer)
	w.stages = append(w.stages, stage{what, steps, parts})
}

// note appends a remark.
func (w *startWay) note(what string) { w.stages = append(w.stages, stage{what: what}) }

// levelsDB returns by how much each way is louder than the lowest, which is never padded, a woofer wasting
// most power in a pad: its driver's sensitivity, if that of every driver is known, and what an all-pass
// arrangement makes the mid too loud by.
func (p *startPlan) levelsDB(c *crossover) []float64 {
	levels := make([]float64, len(p.drivers))
	known := !slices.ContainsFunc(p.drivers, func(d startDriver) bool { return d.value("sensitivity") == nil || d.value("response") != nil })
	for i, d := range p.drivers {
		if known {
			levels[i] = d.number("sensitivity") - p.drivers[0].number("sensitivity")
		}
		if i == 1 && c.midReversed != nil {
			levels[i] += c.midExcessDB
		}
	}
	return levels
}

// text writes the design file.
func (p *startPlan) text() string {
	var b strings.Builder
	b.WriteString(`# A design to begin with. The parts are sized for resistances; predict shows what they
# do to these drivers, and from there they are for you to change.

`)
	fmt.Fprintf(&b, "title = %s\n", tomlString(p.title))
	b.WriteString(`
[drive]
level  = "2.83 V"            # rms, open circuit; levels at the ear are for this
source = "0.05 ohm"          # amplifier and cable

[listen]
distance = "1 m"             # from the front of the cabinet
height   = "0 mm"            # of the ear above its origin

`)
	fmt.Fprintf(&b, `[tune]
min_impedance = %-12s # what your amplifier stands; tune keeps to it

[parts]
# A coil's wire has resistance. When you know it, write for example:
# L1 = { value = "1.1 mH", dcr = "0.3 ohm" }
`, tomlString(quantity.Format(p.leastLoad(), quantity.Ohm)))
	for _, w := range p.ways {
		for _, s := range w.stages {
			b.WriteByte('\n')
			for line := range strings.Lines(folded(w.name+": ", s.what)) {
				b.WriteString("# " + line)
			}
			for _, part := range s.parts {
				fmt.Fprintf(&b, "%s = %s\n", part.Name, tomlString(quantity.Format(fourFigures(part.Value), partUnit(part.Kind))))
			}
		}
	}
	for _, d := range p.drivers {
		p.writeDriver(&b, d)
	}
	for i, w := range p.ways {
		w.write(&b, p.drivers[i].name)
	}
	return b.String()
}

// leastLoad returns in Ω what the network should not fall below: 80 % of 4 ohm, as loudspeakers rated at that may (IEC 60268-5,
// from memory), or of the least driver where that is less.
func (p *startPlan) leastLoad() float64 {
	least := 4.0
	for _, w := range p.ways {
		least = min(least, w.load)
	}
	return fourFigures(0.8 * least)
}

func (p *startPlan) writeDriver(b *strings.Builder, d startDriver) {
	fmt.Fprintf(b, "\n[driver.%s]\n", tomlKey(d.name))
	for _, v := range d.values {
		fmt.Fprintf(b, "%s = %s\n", v.key, v.text)
	}
	switch {
	case d.value("response") != nil:
		b.WriteString("phase = \"measured\"\n")
	case d.value("sensitivity") == nil:
		b.WriteString("# sensitivity = \"88 dB\"    # at 2.83 V, 1 m; without it there is no level at the ear\n")
	}
	b.WriteString("at = [\"0 mm\", \"0 mm\", \"0 mm\"]   # acoustic centre: right, up, toward the listener\n")
}

func (w *startWay) write(b *strings.Builder, driver string) {
	fmt.Fprintf(b, "\n[[way]]\nname    = %s\ndriver  = %s\n", tomlString(w.name), tomlString(driver))
	if w.reversed {
		b.WriteString("polarity = \"reversed\"        # so that the ways add up\n")
	}
	if len(w.targets) > 0 {
		fmt.Fprintf(b, "target  = %s\n", tomlList(w.targets))
	}
	var steps []string
	for _, s := range w.stages {
		steps = append(steps, s.steps...)
	}
	fmt.Fprintf(b, "network = %s\n", tomlList(steps))
}

// fourFigures rounds a value to four figures.
func fourFigures(v float64) float64 {
	if v == 0 || math.IsInf(v, 0) || math.IsNaN(v) {
		return v
	}
	rounded, _ := strconv.ParseFloat(strconv.FormatFloat(v, 'e', 3, 64), 64) // its own text always parses
	return rounded
}
