package xover

import (
	"fmt"
	"slices"
	"strconv"
	"strings"

	"sixdown/xover/quantity"
)

// shapes are the alignments that a target may name.
var shapes = []string{"butterworth", "linkwitz-riley", "bessel", "chebyshev"}

const targetForm = `write it like "low-pass linkwitz-riley 4 at 2.2 kHz"`

// targets reads the `target` array of a way.
func (p *parser) targets(w *Way, r *tableReader) {
	e := r.take("target")
	if e == nil {
		return
	}
	if e.value.kind != listNode {
		r.wrongType("target", e.value, `write an array, such as target = ["low-pass linkwitz-riley 4 at 2.2 kHz"]`)
		return
	}
	for i, item := range e.value.items {
		switch {
		case i >= MaxTargets:
			p.fail(p.pos(item.at), fmt.Sprintf("%s has more than %d targets", r.label, MaxTargets), "leave some out")
			return
		case item.kind != textNode:
			r.wrongType("a target", item, targetForm)
		case p.checkText("a target", item):
			if t, ok := p.target(item); ok {
				w.Targets = append(w.Targets, t)
			}
		}
	}
}

// target reads one target. Where what a wrong one means is plain, the error says it whole.
func (p *parser) target(n *node) (Target, bool) {
	before := len(p.errors)
	t, ok := p.cursor(n).target()
	if !ok && len(p.errors) > before {
		if right := targetMend(n.text); right != "" {
			p.errors[before].Mend = fmt.Sprintf("write %q", right)
		}
	}
	return t, ok
}

// target reads `low-pass SHAPE ORDER [ripple X dB] [reference R] at F`.
func (c *cursor) target() (t Target, ok bool) {
	pass := c.take()
	switch pass.text {
	case "high-pass":
		t.HighPass = true
	case "low-pass":
	default:
		c.failAt(pass, fmt.Sprintf("a target begins with %s", found(pass)),
			didYouMean(pass.text, []string{"low-pass", "high-pass"}, "begin with low-pass or high-pass; a band-pass is two targets"))
		return t, false
	}
	shape := c.take()
	if !slices.Contains(shapes, shape.text) {
		c.failAt(shape, fmt.Sprintf("the alignment is %s", found(shape)), didYouMean(shape.text, shapes, "the alignments are "+listed(shapes)))
		return t, false
	}
	t.Shape = shape.text
	if t.Shape == "bessel" {
		t.Reference = "magnitude"
	}
	order := c.take()
	n, err := strconv.Atoi(order.text)
	switch {
	case err != nil:
		c.failAt(order, fmt.Sprintf("the order is missing before %s", found(order)), targetForm)
		return t, false
	case t.Shape == "linkwitz-riley" && !slices.Contains([]int{2, 4, 6, 8}, n):
		c.failAt(order, fmt.Sprintf("a Linkwitz-Riley alignment of order %d does not exist", n), "its order is 2, 4, 6 or 8")
		return t, false
	case n < 1 || n > 8:
		c.failAt(order, fmt.Sprintf("the order is %d", n), "write an order from 1 to 8")
		return t, false
	}
	t.Order = n
	return t, c.targetOptions(&t)
}

// targetOptions reads what follows the order.
func (c *cursor) targetOptions(t *Target) bool {
	for {
		switch option := c.take(); option.text {
		case "ripple":
			if t.Shape != "chebyshev" {
				c.failAt(option, fmt.Sprintf("a %s alignment has no ripple", t.Shape), "take ripple out, or write chebyshev")
				return false
			}
			if !c.targetQuantity(quantity.Decibel, &t.RippleDB, "ripple") {
				return false
			}
			if !(t.RippleDB >= 0.001 && t.RippleDB <= 10) { // what alignments are made for
				c.failAt(option, fmt.Sprintf("the ripple is %s", quantity.Format(t.RippleDB, quantity.Decibel)), "write a ripple from 0.001 to 10 dB")
				return false
			}
		case "reference":
			word := c.take()
			references := []string{"magnitude", "phase", "delay"}
			if t.Shape != "bessel" {
				c.failAt(option, fmt.Sprintf("a %s alignment has no reference", t.Shape), "take reference out, or write bessel")
				return false
			}
			if !slices.Contains(references, word.text) {
				c.failAt(word, fmt.Sprintf("the reference is %s", found(word)), didYouMean(word.text, references, "write magnitude, phase or delay"))
				return false
			}
			t.Reference = word.text
		case "at":
			if !c.targetQuantity(quantity.Hertz, &t.Frequency, "frequency") {
				return false
			}
			if rest := c.peek(); rest.text != "" {
				c.failAt(rest, fmt.Sprintf("the target is complete before %s", found(rest)), "write one target a string, the frequency last")
				return false
			}
			if t.Shape == "chebyshev" && t.RippleDB == 0 {
				c.failAt(c.tokens[0], "a chebyshev target has no ripple", `write it like "low-pass chebyshev 3 ripple 0.5 dB at 2.2 kHz"`)
				return false
			}
			return true
		default:
			c.failAt(option, fmt.Sprintf("\"at\" is missing before %s", found(option)), targetForm)
			return false
		}
	}
}

// targetQuantity reads a positive quantity, which ends before the next word of a target.
func (c *cursor) targetQuantity(unit quantity.Unit, dst *float64, what string) bool {
	first := c.peek()
	if first.text == "" {
		c.failAt(first, fmt.Sprintf("the %s is missing before the end", what), fmt.Sprintf("write %s such as %q", unit.Noun(), unit.Example()))
		return false
	}
	end := first.at
	for t := c.peek(); t.text != "" && !slices.Contains([]string{"ripple", "reference", "at"}, t.text); t = c.peek() {
		c.take()
		end = t.at + len(t.text)
	}
	v, err := quantity.ParseAs(strings.TrimSpace(c.n.text[first.at:end]), unit)
	if err != nil {
		c.failQuantityAt(first, "the "+what, err)
		return false
	}
	if what2, mend := valueFault(v, unit, positive); what2 != "" {
		c.failAt(first, fmt.Sprintf("the %s: %s", what, what2), mend)
		return false
	}
	*dst = v
	return true
}
