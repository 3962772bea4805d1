package chart

import (
	"math"
	"slices"
	"strings"

	"sixdown/sim"
)

// nullRange is how many dB below the top the deepest null is shown.
const nullRange = 60

// shallow is above what dB a hole is no null, as in the text of predict. Common practice, no source.
const shallow = -3

// Null draws the sum as it is, and for each crossing with the ways on one side of it reversed: the deeper the null
// at the crossing, the better the two are in step there. Where reversed is the better polarity, the null of the sum as it is
// wired is marked instead. It needs a sum and a crossing.
func Null(s *Subject) Panel {
	f := s.Response.Freqs
	p := &plotPanel{high: 196, half: true, plot: plot{title: s.named("Reversed"), note: s.nullNote(), x: frequencyAxis(ends([]*Subject{s}))}}
	normal := series{name: "sum", x: f, y: sumLevels(s), pen: pen{total, totalWidth, nil}, bold: true}
	top := topOf(normal.y)
	bottom := top - 20
	for k := range s.Crossing {
		c := &s.Crossing[k]
		names, first := s.turnable(c)
		reversed := series{x: f, y: sim.SPLs(s.reversed(names)), pen: pen{wayInk(first), wayWidth, dashes(max(1, first))}}
		// mark puts the bottom of a hole, so far below the curve of, onto the curve in.
		mark := func(in, of *series, h sim.Hole, ink ink, text string) {
			if h.DepthDB > shallow {
				h.Frequency = c.Frequency // nowhere is better than another
				p.callouts = append(p.callouts, callout{h.Frequency, interpolated(in.x, in.y, h.Frequency), text + ": no null", ink})
				return
			}
			level := max(h.DepthDB+interpolated(of.x, of.y, h.Frequency), top-nullRange)
			depth := decimals(h.DepthDB, 1) + " dB at "
			if h.DepthDB < -nullRange {
				depth = "below −60 dB at "
			}
			in.through(h.Frequency, level)
			bottom = min(bottom, level)
			p.callouts = append(p.callouts, callout{h.Frequency, level, text + ": " + depth + hertz(h.Frequency), ink})
		}
		switch {
		case !c.OneTimeBase:
		case c.ReversedIsBetter && c.AsWired.DepthDB <= shallow:
			mark(&normal, &reversed, c.AsWired, total, "as wired")
		default:
			text := strings.Join(names, ", ")
			if len(s.Crossing) == 1 { // there is room to say it again
				text += " reversed"
			}
			mark(&reversed, &normal, c.Null, wayInk(first), text)
		}
		p.series = append(p.series, reversed)
	}
	p.series = append(p.series, normal)
	p.y = linearAxis(5*math.Floor(bottom/5)-10, top, 5, " dB", false)
	return p
}

// nullNote says how the picture is to be read.
func (s *Subject) nullNote() string {
	var better []string
	for k := range s.Crossing {
		switch c := &s.Crossing[k]; {
		case !c.OneTimeBase:
			return c.Low + " and " + c.High + " are not on one time base"
		case c.ReversedIsBetter && c.AsWired.DepthDB <= shallow:
			names, _ := s.turnable(c)
			better = append(better, names...)
		}
	}
	switch {
	case len(better) == 0:
		return "the deeper the null, the better in step"
	case len(s.Crossing) == 1:
		return "reversed is better"
	}
	return "better reversed: " + strings.Join(better, ", ")
}

// turnable returns the ways on that side of a crossing which has fewer, in the order of the design, and which of all is the
// first of them. To turn the others does the same.
func (s *Subject) turnable(c *Crossing) (names []string, first int) {
	side := c.Upper
	if len(c.Lower) < len(c.Upper) {
		side = c.Lower
	}
	first = slices.IndexFunc(s.Response.Ways, func(w sim.WayResponse) bool { return slices.Contains(side, w.Name) })
	return side, max(first, 0)
}

// reversed returns the sum with the ways of those names turned.
func (s *Subject) reversed(names []string) []complex128 {
	sum := make([]complex128, len(s.Response.Freqs))
	for _, w := range s.Response.Ways {
		sign := complex128(1)
		if slices.Contains(names, w.Name) {
			sign = -1
		}
		for j, v := range w.P {
			sum[j] += sign * v
		}
	}
	return sum
}

// through puts a point into a curve, so that a null that falls between two of its points is not cut short.
func (c *series) through(x, y float64) {
	at, found := slices.BinarySearch(c.x, x)
	if found || at == 0 || at == len(c.x) {
		return
	}
	c.x, c.y = slices.Insert(slices.Clone(c.x), at, x), slices.Insert(slices.Clone(c.y), at, y)
}

// interpolated returns the value at x of a curve over rising xs.
func interpolated(xs, ys []float64, x float64) float64 {
	for i := 1; i < len(xs); i++ {
		if x <= xs[i] {
			return ys[i-1] + (ys[i]-ys[i-1])*(x-xs[i-1])/(xs[i]-xs[i-1])
		}
	}
	return ys[len(ys)-1]
}
