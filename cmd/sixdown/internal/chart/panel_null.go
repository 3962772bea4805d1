package chart

import (
	"math"
	"math/cmplx"
	"strings"

	"sixdown/sim"
)

// nullRange is how many dB below the top the deepest null is shown.
const nullRange = 60

// Null draws the sum as it is, and for each crossing with the ways on one side of it reversed: the deeper the null
// at the crossing, the better the two are in step there. It needs a sum and a crossing.
func Null(s *Subject) Panel {
	f := s.Response.Freqs
	p := &plotPanel{high: 196, half: true, plot: plot{title: s.named("Reversed"), note: "the deeper the null, the better in step", x: frequencyAxis(ends([]*Subject{s}))}}
	normal := sumLevels(s)
	bottom := topOf(normal) - 20
	for k := range s.Crossing {
		reversed, names, colour := s.reversed(k)
		levels := sim.SPLs(reversed)
		p.series = append(p.series, series{x: f, y: levels, pen: pen{wayInk(colour), wayWidth, dashes(max(1, colour))}})
		at, depth := deepest(f, reversed, s.Response.Sum, s.Crossing[k].Frequency)
		level := max(depth+interpolated(f, normal, at), topOf(normal)-nullRange)
		bottom = min(bottom, level)
		p.callouts = append(p.callouts, callout{at, level, strings.Join(names, ", ") + " reversed: " + decimals(depth, 1) + " dB at " + hertz(at), wayInk(colour)})
	}
	p.series = append(p.series, series{name: "sum", x: f, y: normal, pen: pen{total, totalWidth, nil}, bold: true})
	p.y = linearAxis(5*math.Floor(bottom/5)-10, topOf(normal), 5, " dB", false)
	return p
}

// reversed returns the sum with the ways that lead below crossing k reversed, or, if these are the more, those that
// lead above; with their names, and the first of them.
func (s *Subject) reversed(k int) (sum []complex128, names []string, first int) {
	below := map[string]bool{}
	for _, c := range s.Crossing[:k+1] {
		below[c.Low] = true
	}
	turn := func(name string) bool { return below[name] == (2*len(below) < len(s.Response.Ways)) }
	sum = make([]complex128, len(s.Response.Freqs))
	first = -1
	for i, w := range s.Response.Ways {
		sign := complex128(1)
		if turn(w.Name) {
			sign = -1
			if names = append(names, w.Name); first < 0 {
				first = i
			}
		}
		for j, v := range w.P {
			sum[j] += sign * v
		}
	}
	return sum, names, max(first, 0)
}

// deepest finds where, within an octave of a crossing, the reversed sum is lowest relative to the normal one, and how
// deep in dB that is. Between grid points the ratio of the two is taken to move straight, so that a null that falls
// between two of them is not missed.
func deepest(f []float64, reversed, normal []complex128, crossing float64) (at, depth float64) {
	at, depth = crossing, math.Inf(1)
	for i := 1; i < len(f); i++ {
		if f[i] < crossing/2 || f[i-1] > crossing*2 {
			continue
		}
		a, b := reversed[i-1]/normal[i-1], reversed[i]/normal[i]
		t := 0.0
		if d := b - a; d != 0 {
			t = min(max(-real(a*cmplx.Conj(d))/real(d*cmplx.Conj(d)), 0), 1)
		}
		if l := sim.DB(a + complex(t, 0)*(b-a)); l < depth {
			at, depth = f[i-1]*math.Pow(f[i]/f[i-1], t), l
		}
	}
	return at, depth
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
