package xover

import (
	"fmt"
	"slices"
	"strconv"
	"strings"

	"sixdown/xover/quantity"
)

func (p *parser) tune(r *tableReader) {
	t := &p.design.Tune
	band := t.Band
	if r.quantities("band", quantity.Hertz, positive, band[:], `band = ["200 Hz", "20 kHz"]`) {
		if band[0] < band[1] {
			t.Band = band
		} else {
			r.fail(r.pos(r.table.index["band"].value.at), "band does not rise", "write the lower frequency first")
		}
	}
	t.HasLevel = r.quantity("level", quantity.Decibel, anySign, &t.Level)
	r.quantity("min_impedance", quantity.Ohm, positive, &t.MinImpedance)
	r.quantity("tilt", quantity.Decibel, anySign, &t.Tilt)
	r.text("curve", &t.CurveFile)
	p.weights(r)
	p.earAngles(r)
}

// weights reads what the terms of the objective count for; those not stated keep their defaults.
func (p *parser) weights(r *tableReader) {
	w := &p.design.Tune.Weights
	at := r.table.index["weights"]
	r.inTable("weights", "weights = { sum = 1, ways = 0.5, phase = 0.2, angles = 1 }", func(r *tableReader) {
		r.label = "[tune] weights"
		for _, one := range []struct {
			key string
			dst *float64
		}{{"sum", &w.Sum}, {"ways", &w.Ways}, {"phase", &w.Phase}, {"angles", &w.Angles}} {
			r.number(one.key, 0, 1000, "a number from 0 to 1000", one.dst)
		}
	})
	if w.Sum == 0 && w.Ways == 0 {
		p.fail(p.pos(at.at), "weights: neither the sum nor the ways count", "give sum or ways a weight above 0")
	}
}

// earAngles reads the other places of the ear at which the sum should be even.
func (p *parser) earAngles(r *tableReader) {
	const example = `angles = ["h=30", "h=-15,v=10"]`
	e := r.take("angles")
	if e == nil {
		return
	}
	if e.value.kind != listNode {
		r.wrongType("angles", e.value, "write it like "+example)
		return
	}
	if len(e.value.items) > MaxAngles {
		p.fail(p.pos(e.at), fmt.Sprintf("angles are more than %d", MaxAngles), "leave some out")
		return
	}
	for _, item := range e.value.items {
		a, ok := ParseEarAngle(item.text)
		switch {
		case item.kind != textNode || !ok:
			p.fail(p.pos(item.at), "angles: this is no angle", "write degrees from -180 to 180 without a unit, like "+example)
		case a == EarAngle{}:
			p.fail(p.pos(item.at), "angles: this is straight ahead, which counts already", "leave it out; weights say for how much")
		case slices.Contains(p.design.Tune.Angles, a):
			p.fail(p.pos(item.at), "angles: this one is given twice", "leave one out")
		default:
			p.design.Tune.Angles = append(p.design.Tune.Angles, a)
		}
	}
}

// ParseEarAngle reads an angle of the ear, "h=30", "v=-10" or "h=30,v=-10": degrees from -180 to 180, to the right and up. It
// reports whether text is one.
func ParseEarAngle(text string) (a EarAngle, ok bool) {
	seen := ""
	for one := range strings.SplitSeq(text, ",") {
		axis, number, _ := strings.Cut(strings.TrimSpace(one), "=")
		deg, err := strconv.ParseFloat(number, 64)
		if axis != "h" && axis != "v" || strings.Contains(seen, axis) || err != nil || strings.Trim(number, "+-.0123456789") != "" || !(deg >= -180 && deg <= 180) {
			return EarAngle{}, false
		}
		seen += axis
		if axis == "h" {
			a.HorizontalDeg = deg
		} else {
			a.VerticalDeg = deg
		}
	}
	return a, true
}

func (p *parser) spread(r *tableReader) {
	s := &p.design.Spread
	r.inTable("tol", `tol = { R = "5 %", L = "5 %", C = "5 %" }`, func(r *tableReader) {
		r.label = "[spread] tol"
		r.quantity("R", quantity.Percent, notNegative, &s.TolR)
		r.quantity("L", quantity.Percent, notNegative, &s.TolL)
		r.quantity("C", quantity.Percent, notNegative, &s.TolC)
		r.quantity("P", quantity.Percent, notNegative, &s.TolP)
	})
	r.quantity("limit", quantity.Decibel, positive, &s.LimitDB)
	distribution, _ := r.word("distribution", "uniform", "normal")
	s.Normal = distribution == "normal"
	about, _ := r.word("about", "nominal", "level")
	s.AboutLevel = about == "level"
	r.quantity("match", quantity.Decibel, positive, &s.MatchDB)
}
