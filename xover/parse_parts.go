package xover

import (
	"fmt"
	"slices"
	"unicode"

	"sixdown/xover/quantity"
)

// keywords are the words of the arrangement language; no part may be called so.
var keywords = []string{"series", "shunt", "mark", "couple", "driver", "from", "to", "wiper", "opamp", "plus", "minus"}

// parts reads [parts].
func (p *parser) parts(r *tableReader) {
	r.open = true
	for i, e := range r.table.keys {
		if p.full() {
			return
		}
		if i >= MaxParts {
			p.fail(p.pos(e.at), fmt.Sprintf("[parts] has more than %d parts", MaxParts), "leave some out")
			return
		}
		before := len(p.errors)
		part := Part{Name: e.name, Tol: -1, Kind: kindByName(e.name), Pos: p.pos(e.at)}
		if fault := nameFault(e.name); fault != "" {
			p.fail(part.Pos, fmt.Sprintf("part %q: %s", shortened(e.name), fault), nameMend)
		} else if slices.Contains(keywords, e.name) {
			p.fail(part.Pos, fmt.Sprintf("a part is called %q, a word of the arrangement", e.name), "give it another name, such as R1")
		}
		switch e.value.kind {
		case tableNode:
			inner := p.read(e.value.table, "part", e.name)
			p.partTable(&part, inner)
			inner.done()
		default:
			p.partValue(&part, e.value)
		}
		if len(p.errors) > before {
			p.faulty[e.name] = true
		}
		p.partAt[e.name] = len(p.design.Parts)
		p.design.Parts = append(p.design.Parts, part)
	}
	p.follow()
}

// kindByName is what a part likely is; its unit tells for certain.
func kindByName(name string) Kind {
	switch {
	case name == "":
		return Resistor
	case name[0] == 'L':
		return Inductor
	case name[0] == 'C':
		return Capacitor
	case name[0] == 'P':
		return Potentiometer
	}
	return Resistor
}

// partValue reads the value of a part, whose unit tells the kind.
func (p *parser) partValue(part *Part, n *node) {
	example := quantity.Unit.Example(part.Kind.Unit())
	if n.kind != textNode {
		p.fail(p.pos(n.at), fmt.Sprintf("%s is %s", part.Name, n.kind), fmt.Sprintf("write its value with the unit in quotes, such as %q", example))
		return
	}
	v, unit, err := quantity.ParsePart(part.Name, n.text)
	if err != nil {
		p.failQuantity(part.Name, n, err)
		return
	}
	switch unit {
	case quantity.Ohm:
		part.Kind = Resistor
		if kindByName(part.Name) == Potentiometer {
			part.Kind = Potentiometer
		}
	case quantity.Henry:
		part.Kind = Inductor
	case quantity.Farad:
		part.Kind = Capacitor
	default:
		p.fail(p.pos(n.at), fmt.Sprintf("%s: %q is %s", part.Name, n.text, unit.Noun()), "a part is a resistance, an inductance or a capacitance; write ohm, H or F")
		return
	}
	if what, mend := valueFault(v, unit, positive); what != "" {
		p.fail(p.pos(n.at), part.Name+": "+what, mend)
		return
	}
	if looksLike := kindByName(part.Name); shortName(part.Name) && looksLike.Unit() != unit {
		p.warn(p.pos(n.at), fmt.Sprintf("%s is %s by its unit, though it is called like %s", part.Name, part.Kind.withArticle(), looksLike.withArticle()),
			"check the unit, or give it another name")
	}
	part.Value = v
	p.file.parts[part.Name] = span{n.at + p.offset, n.end + p.offset}
}

// keyPlace tells where the long form of a part has a key, or could have it.
func (p *parser) keyPlace(r *tableReader, key string) (place keyPlace, ok bool) {
	literal := func(key string) *node {
		if e := r.table.index[key]; e != nil && e.value.kind == textNode {
			return e.value
		}
		return nil
	}
	if n := literal(key); n != nil {
		return keyPlace{span{n.at + p.offset, n.end + p.offset}, "", ""}, true
	}
	n := literal("value")
	if n == nil {
		n = literal("same")
	}
	if n == nil {
		return keyPlace{}, false
	}
	before := "\n" + key + " = "
	if r.table.inline {
		before = ", " + key + " = "
	}
	return keyPlace{span{n.end + p.offset, n.end + p.offset}, before, ""}, true
}

// shortName tells a name such as R1, L12 or C3, whose letter says what the part is.
func shortName(name string) bool {
	if len(name) < 2 || !slices.Contains([]byte("RLCP"), name[0]) {
		return false
	}
	for _, c := range name[1:] {
		if !unicode.IsDigit(c) {
			return false
		}
	}
	return true
}

// partTable reads a part in its long form. The value comes first, since the other keys depend on the kind.
func (p *parser) partTable(part *Part, r *tableReader) {
	value, same := r.take("value"), r.take("same")
	switch {
	case value != nil && same != nil:
		p.fail(p.pos(same.at), part.Name+" has both value and same", "keep one of them")
	case value != nil:
		p.partValue(part, value.value)
	case same != nil:
		if same.value.kind != textNode {
			r.wrongType("same", same.value, `write the name of a part in quotes, such as same = "L1"`)
			break
		}
		if part.Same = same.value.text; part.Same == "" {
			p.fail(p.pos(same.value.at), part.Name+" follows a part without a name", `name one of [parts], such as same = "L1"`)
		}
	default:
		r.missing("value", fmt.Sprintf("give it, such as value = %q", part.Kind.Unit().Example()))
	}
	if r.table.index["taper"] != nil && part.Kind == Resistor {
		part.Kind = Potentiometer
	}
	r.quantity("tol", quantity.Percent, notNegative, &part.Tol)
	r.flag("hold", &part.Hold)
	// Of a part that follows, the kind is known only when all are read; follow looks at its keys again.
	only := func(key string, kinds ...Kind) bool {
		e := r.take(key)
		if e == nil {
			return false
		}
		if part.Same == "" && part.Value > 0 && !slices.Contains(kinds, part.Kind) {
			p.fail(p.pos(e.at), fmt.Sprintf("%s is %s, which has no %s", part.Name, part.Kind.withArticle(), key), "take it out")
			return false
		}
		return true
	}
	for key, places := range map[string]map[string]keyPlace{"dcr": p.file.dcr, "tol": p.file.tol} {
		if place, ok := p.keyPlace(r, key); ok {
			places[part.Name] = place
		}
	}
	if only("dcr", Inductor) {
		r.quantity("dcr", quantity.Ohm, notNegative, &part.DCR)
	}
	if only("esr", Capacitor) {
		r.quantity("esr", quantity.Ohm, notNegative, &part.ESR)
	}
	if only("range", Resistor, Inductor, Capacitor, Potentiometer) {
		p.partRange(part, r)
	}
	if only("taper", Potentiometer) {
		word, _ := r.word("taper", "linear", "log", "reverse-log")
		part.Taper = map[string]Taper{"log": Log, "reverse-log": ReverseLog}[word]
	}
	if only("mid", Potentiometer) {
		r.number("mid", 0.001, 0.499, "a number from 0.001 to 0.499, the fraction of the track at half turn", &part.Mid)
		if part.Taper == Linear {
			p.warn(p.pos(r.table.index["mid"].at), part.Name+" has a linear taper, for which mid means nothing", `take mid out, or write taper = "log"`)
		}
	}
	if part.Kind == Potentiometer && part.Mid == 0 {
		part.Mid = DefaultMid
	}
	if part.Same != "" && (part.Hold || part.Range[1] != 0) {
		p.fail(part.Pos, fmt.Sprintf("%s follows %s and cannot have a hold or a range of its own", part.Name, part.Same), "take hold and range out")
	}
}

func (p *parser) partRange(part *Part, r *tableReader) {
	unit := part.Kind.Unit()
	var bounds [2]float64
	before := len(p.errors)
	if !r.quantities("range", unit, positive, bounds[:], fmt.Sprintf("range = [%q, %q]", quantity.Format(part.Value/2, unit), quantity.Format(part.Value*2, unit))) ||
		len(p.errors) > before {
		return
	}
	at := p.pos(r.table.index["range"].value.at)
	switch {
	case !(bounds[0] < bounds[1]):
		p.fail(at, part.Name+": the range does not rise", "write the smaller value first")
	case part.Value > 0 && (part.Value < bounds[0] || part.Value > bounds[1]):
		p.warn(at, fmt.Sprintf("%s is %s, which its range leaves out", part.Name, quantity.Format(part.Value, unit)), "widen the range, or change the value")
		fallthrough
	default:
		part.Range = bounds
	}
}

// follow gives each part that follows another one that one's kind and value.
func (p *parser) follow() {
	for i := range p.design.Parts {
		part := &p.design.Parts[i]
		if part.Same == "" || p.faulty[part.Name] {
			continue
		}
		at, ok := p.partAt[part.Same]
		leader := &Part{}
		if ok {
			leader = &p.design.Parts[at]
		}
		switch {
		case !ok:
			p.fail(part.Pos, fmt.Sprintf("%s follows %q, which [parts] does not define", part.Name, shortened(part.Same)),
				didYouMean(part.Same, p.design.partNames(), p.design.partList()))
		case part.Same == part.Name:
			p.fail(part.Pos, part.Name+" follows itself", "name another part, or give it a value")
		case leader.Same != "":
			p.fail(part.Pos, fmt.Sprintf("%s follows %s, which follows %s", part.Name, leader.Name, shortened(leader.Same)), fmt.Sprintf("write same = %q", shortened(leader.Same)))
		case part.DCR != 0 && leader.Kind != Inductor:
			p.fail(part.Pos, fmt.Sprintf("%s follows %s, %s, which has no dcr", part.Name, leader.Name, leader.Kind.withArticle()), "take it out")
		case part.ESR != 0 && leader.Kind != Capacitor:
			p.fail(part.Pos, fmt.Sprintf("%s follows %s, %s, which has no esr", part.Name, leader.Name, leader.Kind.withArticle()), "take it out")
		case (part.Mid != 0 && part.Kind != Potentiometer || part.Taper != Linear) && leader.Kind != Potentiometer:
			p.fail(part.Pos, fmt.Sprintf("%s follows %s, %s, which has no taper", part.Name, leader.Name, leader.Kind.withArticle()), "take it out")
		default:
			p.faulty[part.Name] = p.faulty[leader.Name]
			part.Kind, part.Value = leader.Kind, leader.Value
			if part.Kind == Potentiometer && part.Mid == 0 {
				part.Mid = DefaultMid
			}
			if part.Kind != Potentiometer {
				part.Mid = 0
			}
			continue
		}
		p.faulty[part.Name] = true
	}
}
