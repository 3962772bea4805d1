package tune

import (
	"context"
	"fmt"
	"math"
	"strings"
	"testing"

	"sixdown/sim"
	"sixdown/xover"
)

// A rung is a part of a ladder on a resistance: its value for a load of 1 Ω and a corner at 1 rad/s.
type rung struct {
	step string // "series L" and so on
	unit float64
}

// textbook are ladders from a voltage source into a resistor. A high-pass follows from its low-pass by s → 1/s: a series coil of g
// henry becomes a series capacitor of 1/g farad, and so on.
func textbook() map[string]struct {
	target string
	low    []rung
} {
	type entry = struct {
		target string
		low    []rung
	}
	r2 := math.Sqrt2
	return map[string]entry{
		// Denominator (s² + √2 s + 1)²; continued fraction of the odd over the even part, by hand: exact.
		"LR4": {"linkwitz-riley 4", []rung{{"series L", 4 * r2 / 3}, {"shunt C", 9 * r2 / 8}, {"series L", 2 * r2 / 3}, {"shunt C", r2 / 4}}},
		// Denominator s³ + 2s² + 2s + 1: 3/2, 4/3, 1/2, exact; also A. I. Zverev, "Handbook of Filter Synthesis", 1967, table
		// of Butterworth ladders with one resistor.
		"B3": {"butterworth 3", []rung{{"series L", 3. / 2}, {"shunt C", 4. / 3}, {"series L", 1. / 2}}},
		// Denominator s⁴ + 10 s³ + 45 s² + 105 s + 105, by hand: first with the variable scaled so that the delay is 1 s; the
		// corner at -3 dB is at 2.113917674904 rad/s, which besselCorner finds from the same polynomial. The continued fraction of
		// (s⁴ + 45s² + 105)/(10s³ + 105s) is s/10 + 1/(20s/69 + 1/(…)), worked out in ladderOf.
		"Bessel 4": {"bessel 4", ladderOf([]float64{105, 105, 45, 10, 1}, besselCorner())},
	}
}

// ladderOf returns the ladder of an even all-pole low-pass, from the source on, its denominator from s⁰ up; scaled so that
// corner in rad/s becomes 1. The input impedance of a ladder into 1 Ω seen from the load is odd over even; dividing one by the
// other in turn takes off a part at a time, the one nearest to the load first.
func ladderOf(den []float64, corner float64) []rung {
	var even, odd []float64 // in rising powers
	for k, c := range den {
		c *= math.Pow(corner, float64(k))
		e, o := 0.0, 0.0
		if k%2 == 0 {
			e = c
		} else {
			o = c
		}
		even, odd = append(even, e), append(odd, o)
	}
	var rungs []rung
	a, b := even, odd // of one degree more, and of one less
	for n := len(den) - 1; n > 0; n-- {
		g := a[n] / b[n-1]
		for k := n; k > 0; k-- {
			a[k] -= g * b[k-1]
		}
		step := "shunt C"
		if len(rungs)%2 == 1 {
			step = "series L"
		}
		rungs = append(rungs, rung{step, g})
		a, b = b, a
	}
	for i, j := 0, len(rungs)-1; i < j; i, j = i+1, j-1 {
		rungs[i], rungs[j] = rungs[j], rungs[i]
	}
	return rungs
}

// besselCorner is where |105/(s⁴ + 10s³ + 45s² + 105s + 105)|² = ½, by bisection.
func besselCorner() float64 {
	lo, hi := 1.0, 4.0
	for range 100 {
		w := (lo + hi) / 2
		re, im := w*w*w*w-45*w*w+105, 105*w-10*w*w*w
		if 105*105/(re*re+im*im) > 0.5 {
			lo = w
		} else {
			hi = w
		}
	}
	return lo
}

const (
	ohms   = 8.
	corner = 2000. // Hz
)

// resistive writes the two-way of a textbook entry on resistors of 8 Ω; start is what each part is multiplied by, and want
// what its value should become.
func resistive(name string, start func(i int) float64) (design string, want []float64) {
	e := textbook()[name]
	w := 2 * math.Pi * corner
	var parts, low, high []string
	add := func(steps *[]string, step string, value float64) {
		i := len(want)
		kind := step[len(step)-1:]
		part, unit := fmt.Sprintf("%s%d", kind, i+1), "H"
		if kind == "C" {
			unit = "F"
		}
		parts = append(parts, fmt.Sprintf("%s = \"%.17g %s\"", part, value*start(i), unit))
		*steps = append(*steps, fmt.Sprintf("%q", step[:len(step)-1]+part))
		want = append(want, value)
	}
	for _, r := range e.low {
		if strings.HasSuffix(r.step, "L") {
			add(&low, r.step, r.unit*ohms/w)
		} else {
			add(&low, r.step, r.unit/(ohms*w))
		}
	}
	for _, r := range e.low {
		if strings.HasSuffix(r.step, "L") {
			add(&high, "series C", 1/(r.unit*ohms*w))
		} else {
			add(&high, "shunt L", ohms/(r.unit*w))
		}
	}
	return fmt.Sprintf(`[parts]
%s
[driver.a]
impedance = "8 ohm"
[driver.b]
impedance = "8 ohm"
[[way]]
name = "low"
driver = "a"
target = ["low-pass %s at 2 kHz"]
network = [%s]
[[way]]
name = "high"
driver = "b"
target = ["high-pass %s at 2 kHz"]
network = [%s]
`, strings.Join(parts, "\n"), e.target, strings.Join(low, ", "), e.target, strings.Join(high, ", ")), want
}

// problem makes a Problem of a design without files.
func problem(t testing.TB, text string) *Problem {
	t.Helper()
	d, _, err := xover.Parse("test.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	sys, err := sim.New(d, nil)
	if err != nil {
		t.Fatal(err)
	}
	p, err := New(d, sys, nil)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// On resistors the tuner must land on the textbook's values from wherever it starts a decade away: each part ten times
// too large or too small, in every combination.
func TestResistiveLoadsGiveTheTextbook(t *testing.T) {
	for name := range textbook() {
		t.Run(name, func(t *testing.T) {
			_, want := resistive(name, func(int) float64 { return 1 })
			combinations := 1 << len(want)
			if testing.Short() {
				combinations = min(combinations, 16)
			}
			worst := 0.0
			for c := range combinations {
				text, _ := resistive(name, func(i int) float64 { return math.Pow(10, float64(c>>i&1)*2-1) })
				p := problem(t, text)
				r, err := p.Run(context.Background(), Search{})
				if err != nil {
					t.Fatal(err)
				}
				for i, w := range want {
					off := math.Abs(r.Values[i]/w - 1)
					worst = max(worst, off)
					// The grid holds the shape to rounding; 1e-6 is the promise.
					if !(off < 1e-6) {
						t.Fatalf("start %0*b: %s = %.9g, want %.9g (objective %g, %d evaluations)", len(want), c, p.vars[i].Part, r.Values[i], w, r.After.Objective, r.Evaluations)
					}
				}
			}
			t.Logf("%d starts, worst value off by %.1e", combinations, worst)
		})
	}
}
