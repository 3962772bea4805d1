package xover

import (
	"fmt"
	"slices"

	"sixdown/xover/quantity"
)

// way reads one [[way]] table.
func (p *parser) way(r *tableReader) {
	w := Way{Pos: p.pos(r.table.at)}
	if !r.text("name", &w.Name) {
		r.missing("name", `give it, such as name = "low"`)
	} else if w.Name != "" {
		r.label = fmt.Sprintf("way %q", shortened(w.Name))
		p.wayName(&w, r)
	}
	p.networkFault = p.networkFault || w.Name == "" // its nodes could not be told from others
	if !r.text("driver", &w.Driver) {
		r.missing("driver", `give the name of a [driver.NAME] table, such as driver = "woofer"`)
	} else if w.Driver != "" {
		p.wayDrivers(&w, r)
	}
	polarity, _ := r.word("polarity", "normal", "reversed")
	w.Reversed = polarity == "reversed"
	p.targets(&w, r)
	w.Network = p.network(r, true)
	p.design.Ways = append(p.design.Ways, w)
}

func (p *parser) wayName(w *Way, r *tableReader) {
	at := p.pos(r.table.index["name"].value.at)
	if fault := nameFault(w.Name); fault != "" {
		p.fail(at, r.label+": "+fault, nameMend)
		return
	}
	if isTerminal(w.Name) {
		p.fail(at, fmt.Sprintf("a way is called %q, which is the amplifier's terminal", w.Name), `give it another name, such as "low"`)
	}
	if slices.ContainsFunc(p.design.Ways, func(other Way) bool { return other.Name == w.Name }) {
		p.fail(at, fmt.Sprintf("two ways are called %q", w.Name), "give each a name of its own")
	}
}

// tone reads [tone].
func (p *parser) tone(r *tableReader) {
	t := &Tone{Pos: p.pos(r.table.at)}
	r.quantity("source", quantity.Ohm, notNegative, &t.Source)
	r.quantity("load", quantity.Ohm, positive, &t.Load)
	t.Network = p.network(r, false)
	p.design.Tone = t
}

// control reads one [control.NAME] table.
func (p *parser) control(name string, r *tableReader) {
	c := Control{Name: name, At: DefaultTurn, Pos: p.pos(r.table.at)}
	if !r.text("part", &c.Part) {
		r.missing("part", `give the potentiometer that it turns, such as part = "P1"`)
	} else if c.Part != "" {
		p.controlPart(&c, r)
	}
	if !r.number("at", 0, 1, "a number from 0 to 1", &c.At) {
		r.missing("at", "give how far it is turned, from 0 to 1, such as at = 0.5")
	} else if n := r.table.index["at"].value; n.kind == numberNode {
		p.file.controls[name] = span{n.at + p.offset, n.end + p.offset}
	}
	p.design.Controls = append(p.design.Controls, c)
}

func (p *parser) controlPart(c *Control, r *tableReader) {
	at := p.pos(r.table.index["part"].value.at)
	part := p.design.Part(c.Part)
	switch {
	case part == nil:
		p.fail(at, fmt.Sprintf("%s turns %q, which [parts] does not define", r.label, shortened(c.Part)),
			didYouMean(c.Part, p.design.partNames(), p.design.partList()))
	case part.Kind != Potentiometer && !p.faulty[c.Part]:
		p.fail(at, fmt.Sprintf("%s turns %s, which is %s", r.label, c.Part, part.Kind.withArticle()),
			`name a potentiometer: a part that has a taper, or a name with P and a value in ohm`)
	}
	for _, other := range p.design.Controls {
		if other.Part == c.Part {
			p.fail(at, fmt.Sprintf("%s turns %s, which [control.%s] turns already", r.label, shortened(c.Part), shortened(other.Name)), "keep one of them")
			return
		}
	}
}

// network reads the array of steps of a way or a tone network.
func (p *parser) network(r *tableReader, drivers bool) []Step {
	e := r.take("network")
	if e == nil {
		p.networkFault = true
		r.missing("network", `give its steps, such as network = ["series C1", "shunt L1"]; [] is a plain wire`)
		return nil
	}
	if e.value.kind != listNode {
		p.networkFault = true
		r.wrongType("network", e.value, `write an array of steps, such as ["series C1", "shunt L1"]`)
		return nil
	}
	if len(e.value.items) > MaxSteps {
		p.networkFault = true
		p.fail(p.pos(e.at), fmt.Sprintf("%s has more than %d steps", r.label, MaxSteps), "leave some out")
		return nil
	}
	steps := make([]Step, 0, len(e.value.items))
	before := len(p.errors)
	for _, item := range e.value.items {
		if item.kind != textNode {
			r.wrongType("a step", item, `write each step in quotes, such as "series C1"`)
		} else if p.checkText("a step", item) {
			if step, ok := p.step(item, drivers); ok {
				steps = append(steps, step)
			}
		}
		if p.full() {
			break
		}
	}
	p.networkFault = p.networkFault || len(p.errors) > before || p.full()
	return steps
}
