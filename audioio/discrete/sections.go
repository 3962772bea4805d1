package discrete

import (
	"math"
	"math/cmplx"
	"sort"
)

// A section is the recursion w[n] = x[n] + a1 w[n-1] + a2 w[n-2]: two poles, or one if a2 is 0.
type section struct {
	a1, a2 float64
	after  int // the section whose w is its x, or -1: the delayed input
}

// edgePoles lie on the negative real axis, ever closer to z = -1. A network's gain does not close over half
// the sample rate; a rational function turns that corner with poles that crowd toward it, where a polynomial needs many
// more terms (D. J. Newman, "Rational Approximation to |x|", Michigan Math. J. 11, 1964, 11–14).
// Where they lie matters little: these were chosen by trial, 20 kHz at 44.1 and 48 kHz.
var edgePoles = [...]float64{-0.2, -0.45, -0.65, -0.8, -0.9, -0.95}

const (
	// fastest is the size of a pole, e^{pT}, below which plain taps are as good.
	fastest = 0.05
	// near is the relative distance of two poles below which their sections are put one after the other. Side by side
	// they would work against each other with factors of 1/near, and a true double pole needs the chain.
	near = 1e-3
)

// newSections lays out the sections of a network with natural frequencies poles, rad/s, at rate Hz: its own poles, z = e^{p/rate}, by
// size, and then the edge poles. Poles that turn more than half a revolution a sample have no place below half the rate and are
// left to the taps.
func newSections(poles []complex128, rate float64) []section {
	var pairs []complex128
	var reals []float64
	for _, p := range poles {
		switch {
		case imag(p) < 0 || imag(p) >= math.Pi*rate || math.Exp(real(p)/rate) < fastest:
		case imag(p) == 0:
			reals = append(reals, real(p))
		default:
			pairs = append(pairs, p)
		}
	}
	// Two poles of a section, in rad/s; the second is NaN if there is none.
	type couple [2]complex128
	var couples []couple
	for _, p := range pairs {
		couples = append(couples, couple{p, cmplx.Conj(p)})
	}
	sort.Float64s(reals)
	for ; len(reals) >= 2; reals = reals[2:] {
		couples = append(couples, couple{complex(reals[0], 0), complex(reals[1], 0)})
	}
	if len(reals) == 1 {
		couples = append(couples, couple{complex(reals[0], 0), cmplx.NaN()})
	}
	sort.SliceStable(couples, func(i, j int) bool { return cmplx.Abs(couples[i][0]) < cmplx.Abs(couples[j][0]) })

	touch := func(a, b couple) bool {
		for _, p := range a {
			for _, q := range b {
				if cmplx.Abs(p-q) < near*cmplx.Abs(p) {
					return true
				}
			}
		}
		return false
	}
	var sections []section
	for i, c := range couples {
		z := cmplx.Exp(c[0] / complex(rate, 0))
		s := section{a1: real(z), after: -1}
		if !cmplx.IsNaN(c[1]) {
			z2 := cmplx.Exp(c[1] / complex(rate, 0))
			s.a1, s.a2 = real(z+z2), -real(z*z2)
		}
		for j := i - 1; j >= 0; j-- {
			if touch(c, couples[j]) {
				s.after = j
				break
			}
		}
		sections = append(sections, s)
	}
	for i := 0; i+1 < len(edgePoles); i += 2 {
		p, q := edgePoles[i], edgePoles[i+1]
		sections = append(sections, section{a1: p + q, a2: -p * q, after: -1})
	}
	return sections
}

// A term is one signal that an output is a sum of: a section's w or an earlier w, or an earlier input.
type term struct {
	section int // -1: the input itself
	delay   int // samples; 0 or 1 for a section
}

// newTerms lists all terms: two of each section, and the input at delays 0 … taps-1.
func newTerms(sections []section, taps int) []term {
	var terms []term
	for s := range sections {
		terms = append(terms, term{s, 0}, term{s, 1})
	}
	for j := range taps {
		terms = append(terms, term{-1, j})
	}
	return terms
}

// termGains stores in dst[i] the gain of terms[i] per volt of input at z = e^{jω}, sections being fed
// the input delay samples late; w is work space, one place a section.
func termGains(dst, w []complex128, sections []section, terms []term, delay int, omega float64) {
	back := cmplx.Rect(1, -omega) // z⁻¹
	late := cmplx.Rect(1, -omega*float64(delay))
	for i, s := range sections {
		x := late
		if s.after >= 0 {
			x = w[s.after]
		}
		w[i] = x / (1 - back*(complex(s.a1, 0)+back*complex(s.a2, 0)))
	}
	for i, t := range terms {
		switch {
		case t.section < 0:
			dst[i] = cmplx.Rect(1, -omega*float64(t.delay))
		case t.delay == 1:
			dst[i] = back * w[t.section]
		default:
			dst[i] = w[t.section]
		}
	}
}
