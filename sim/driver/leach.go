package driver

import (
	"math"
	"math/cmplx"
	"strconv"
)

// A Leach is a voice coil on a pole piece in which eddy currents flow, without its resistance: the
// semi-inductance Z = K·sⁿ. With N = 1 it is an inductor of K henries.
//
// W. M. Leach Jr., "Loudspeaker Voice-Coil Inductance Losses: Circuit Models, Parameter Estimation, and Effect
// on Frequency Response", J. Audio Eng. Soc. 50(6), 442–450, 2002.
type Leach struct {
	K float64 // Ω·sᴺ; > 0
	N float64 // 0 < N ≤ 1
}

// Impedance returns K·sⁿ, s not on the negative real axis.
func (c Leach) Impedance(s complex128) complex128 {
	if s == 0 {
		return 0
	}
	return complex(c.K, 0) * cmplx.Pow(s, complex(c.N, 0))
}

// Elements returns the ladder of pairs, a resistor ∥ an inductor each, that stands for the coil in the time
// domain: within 0.3 % of |Z| from 20 Hz to 20 kHz.
func (c Leach) Elements() []Element {
	return chain(c.cells()).elements()
}

// A LossPair is a resistance and an inductance in parallel, in series with the rest of a voice coil.
type LossPair struct {
	R float64 // Ω; 0: none, the pair is the inductance alone
	L float64 // H
}

// cells returns the ladder as cells of a chain.
func (c Leach) cells() []cell {
	var cells []cell
	for i, p := range c.ladder() {
		cells = append(cells, cell{name: strconv.Itoa(i + 2), r: p.R, l: p.L})
	}
	return cells
}

// ladder returns the pairs. The semi-inductance is a continuum of them,
//
//	sⁿ = sin(nπ)/π · ∫₀^∞ s/(s + x) · x^(n-1) dx
//
// (I. S. Gradshteyn and I. M. Ryzhik, "Table of Integrals, Series, and Products", 3.222), x being the corner R/L
// of a pair in rad/s. With u = ln x the trapezoidal rule in steps of h is off by 2·sin(nπ)·e^(-π²/h) of |Z|, by
// Poisson's sum: 0.16 % at most for corners two octaves apart. Pairs whose corners lie far below the band, or far above
// it, are joined to one at either end that has their sum and their first moment.
func (c Leach) ladder() []LossPair {
	if c.N >= 1 {
		return []LossPair{{L: c.K}}
	}
	const (
		lowest = 2 * math.Pi * 10 // rad/s, the first corner
		pairs  = 7                // the last is at 41 kHz
		h      = 2 * math.Ln2
	)
	weight := func(x float64) float64 { return c.K * math.Sin(c.N*math.Pi) / math.Pi * h * math.Pow(x, c.N) }
	// Corners lowest·e^(-h), lowest·e^(-2h), …: each pair is R less R·x/s.
	x := lowest * math.Exp(-h)
	sum := weight(x) / (1 - math.Exp(-c.N*h))
	moment := weight(x) * x / (1 - math.Exp(-(c.N+1)*h))
	ps := []LossPair{{R: sum, L: sum * sum / moment}}
	x = lowest
	for range pairs {
		ps = append(ps, LossPair{R: weight(x), L: weight(x) / x})
		x *= math.Exp(h)
	}
	// The corners from x up: each pair is s·R/x less s²·R/x².
	sum = weight(x) / x / (1 - math.Exp((c.N-1)*h))
	moment = weight(x) / (x * x) / (1 - math.Exp((c.N-2)*h))
	return append(ps, LossPair{R: sum * sum / moment, L: sum})
}
