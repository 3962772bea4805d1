package xover

import (
	"fmt"
	"math"
	"slices"
	"unicode"
	"unicode/utf8"

	"sixdown/xover/quantity"
)

// A tableReader takes the known keys out of one table and reports the rest.
type tableReader struct {
	*parser
	table *table
	kind  string // "drive", "way", "part" …, for slips
	label string // for messages: `[drive]`, `way "low"`
	known []string
	open  bool // its keys are names of the builder's own: none is unknown
}

func (p *parser) read(t *table, kind, label string) *tableReader {
	return &tableReader{parser: p, table: t, kind: kind, label: label}
}

// take returns the entry of a key, nil if the table has none, and counts the key as known.
func (r *tableReader) take(key string) *entry {
	if !slices.Contains(r.known, key) {
		r.known = append(r.known, key)
	}
	return r.table.index[key]
}

// done reports every key that no one took.
func (r *tableReader) done() {
	if r.open {
		return
	}
	for _, e := range r.table.keys {
		if r.full() {
			return
		}
		if !slices.Contains(r.known, e.name) {
			r.fail(r.pos(e.at), fmt.Sprintf("%s has no key %q", r.label, shortened(e.name)), keyMend(r.kind, e.name, r.known))
		}
	}
}

// missing reports a key that must be there.
func (r *tableReader) missing(key, mend string) {
	r.fail(r.pos(r.table.at), fmt.Sprintf("%s has no %s", r.label, key), mend)
}

// wrongType reports a value that is not of the type it must have.
func (r *tableReader) wrongType(key string, n *node, mend string) {
	r.fail(r.pos(n.at), fmt.Sprintf("%s is %s", key, n.kind), mend)
}

// text reads a string that may not be empty. It tells whether the key is there, right or wrong.
func (r *tableReader) text(key string, dst *string) bool {
	e := r.take(key)
	if e == nil {
		return false
	}
	if e.value.kind != textNode {
		r.wrongType(key, e.value, "write text in double quotes")
		return true
	}
	if r.checkText(key, e.value) {
		*dst = e.value.text
	}
	return true
}

// checkText reports a string that is empty, too long or has control characters.
func (p *parser) checkText(key string, n *node) bool {
	switch {
	case n.text == "":
		p.fail(p.pos(n.at), key+" is empty", "write it, or leave it out")
	case len(n.text) > MaxTextBytes:
		p.fail(p.pos(n.at), fmt.Sprintf("%s is longer than %d bytes", key, MaxTextBytes), "shorten it")
	default:
		for _, c := range n.text {
			if unicode.IsControl(c) && c != '\t' || c == utf8.RuneError {
				p.fail(p.pos(n.at), fmt.Sprintf("%s has a control character, %U", key, c), "take it out")
				return false
			}
		}
		return true
	}
	return false
}

// word reads a string that must be one of a few.
func (r *tableReader) word(key string, choices ...string) (word string, ok bool) {
	e := r.take(key)
	if e == nil {
		return "", false
	}
	if e.value.kind == textNode && slices.Contains(choices, e.value.text) {
		return e.value.text, true
	}
	either := "write one of " + listed(quoted(choices))
	if e.value.kind != textNode {
		r.wrongType(key, e.value, either)
		return "", false
	}
	r.fail(r.pos(e.value.at), fmt.Sprintf("%s is %q", key, shortened(e.value.text)), wordMend(key, e.value.text, choices, either))
	return "", false
}

func quoted(words []string) []string {
	q := make([]string, len(words))
	for i, w := range words {
		q[i] = fmt.Sprintf("%q", w)
	}
	return q
}

// flag reads true or false.
func (r *tableReader) flag(key string, dst *bool) {
	if e := r.take(key); e != nil {
		if e.value.kind != booleanNode {
			r.wrongType(key, e.value, "write true or false, without quotes")
			return
		}
		*dst = e.value.text == "true"
	}
}

// number reads a bare number between two bounds; what says which they are. It tells whether the key is
// there, right or wrong.
func (r *tableReader) number(key string, least, most float64, what string, dst *float64) bool {
	e := r.take(key)
	if e == nil {
		return false
	}
	if e.value.kind != numberNode {
		r.wrongType(key, e.value, fmt.Sprintf("write %s, without quotes", what))
		return true
	}
	if v := e.value.number; v >= least && v <= most {
		*dst = v
	} else {
		r.fail(r.pos(e.value.at), fmt.Sprintf("%s is %s", key, shortened(e.value.text)), "write "+what)
	}
	return true
}

// quantity reads a string with a unit. It tells whether the key is there, right or wrong.
func (r *tableReader) quantity(key string, unit quantity.Unit, rule sign, dst *float64) bool {
	e := r.take(key)
	if e == nil {
		return false
	}
	if v, ok := r.quantityOf(key, e.value, unit, rule); ok {
		*dst = v
	}
	return true
}

// quantities reads an array of as many strings with a unit as dst has places.
func (r *tableReader) quantities(key string, unit quantity.Unit, rule sign, dst []float64, example string) bool {
	e := r.take(key)
	if e == nil {
		return false
	}
	if e.value.kind != listNode || len(e.value.items) != len(dst) {
		r.fail(r.pos(e.value.at), fmt.Sprintf("%s is not an array of %d values", key, len(dst)), "write it like "+example)
		return true
	}
	for i, item := range e.value.items {
		if v, ok := r.quantityOf(key, item, unit, rule); ok {
			dst[i] = v
		}
	}
	return true
}

// quantityOf reads one string with a unit; on a fault it reports it and ok is false.
func (p *parser) quantityOf(key string, n *node, unit quantity.Unit, rule sign) (v float64, ok bool) {
	if n.kind == numberNode {
		p.fail(p.pos(n.at), fmt.Sprintf("%s is %s, a number without a unit", key, shortened(n.text)),
			fmt.Sprintf("write %s in quotes, such as %q", unit.Noun(), unit.Example()))
		return 0, false
	}
	if n.kind != textNode {
		p.fail(p.pos(n.at), fmt.Sprintf("%s is %s", key, n.kind), fmt.Sprintf("write %s in quotes, such as %q", unit.Noun(), unit.Example()))
		return 0, false
	}
	v, err := quantity.ParseAs(n.text, unit)
	if err != nil {
		p.failQuantity(key, n, err)
		return 0, false
	}
	if what, mend := valueFault(v, unit, rule); what != "" {
		p.fail(p.pos(n.at), key+": "+what, mend)
		return 0, false
	}
	return v, true
}

// A sign says which values a quantity may have.
type sign uint8

const (
	anySign sign = iota
	notNegative
	positive
)

// valueFault says what is wrong with a value in SI units, and how to mend it; "" if nothing is. Beside the
// sign it checks that the value is one that exists: a resistance of 1e12 Ω is a slip of the prefix.
func valueFault(v float64, unit quantity.Unit, rule sign) (what, mend string) {
	least, most := plausible(unit)
	switch {
	case math.IsNaN(v) || math.IsInf(v, 0):
		what, mend = "is not finite", "give a finite value"
	case rule == positive && !(v > 0):
		what, mend = "is not above zero", "give a positive value"
	case rule == notNegative && v < 0:
		what, mend = "is negative", "give zero or a positive value"
	case v != 0 && (math.Abs(v) < least || math.Abs(v) > most):
		what, mend = "is beyond what can be", fmt.Sprintf("check the prefix; %s is between %s and %s",
			unit.Noun(), quantity.Format(least, unit), quantity.Format(most, unit))
	default:
		return "", ""
	}
	return quantity.Format(v, unit) + " " + what, mend
}

// plausible returns the bounds of what a magnitude other than zero may be. They are generous; within them no
// room below overflows.
func plausible(unit quantity.Unit) (least, most float64) {
	switch unit {
	case quantity.Ohm:
		return 1e-6, 1e9
	case quantity.Henry:
		return 1e-12, 1e3
	case quantity.Farad:
		return 1e-15, 10
	case quantity.Hertz:
		return 1e-3, 1e7
	case quantity.Metre:
		return 1e-6, 1e4
	case quantity.SquareMetre:
		return 1e-8, 100
	case quantity.CubicMetre:
		return 1e-8, 1e4
	case quantity.Volt:
		return 1e-6, 1e4
	case quantity.Watt:
		return 1e-6, 1e6
	case quantity.Decibel:
		return 0, 300
	case quantity.Percent:
		return 0, 1
	case quantity.MetrePerSecond:
		return 1, 1e4
	case quantity.KilogramPerCubicMetre:
		return 1e-3, 1e3
	}
	return 0, math.MaxFloat64
}
