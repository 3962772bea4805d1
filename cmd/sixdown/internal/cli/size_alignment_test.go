package cli

import (
	"fmt"
	"math"
	"math/cmplx"
	"strconv"
	"strings"
	"testing"
)

// An alignmentCase is an alignment as the command line names it, and the magnitude of its low-pass at x times
// its frequency by the definition that the literature gives.
type alignmentCase struct {
	name  string
	args  []string
	lower func(x float64) float64
}

// alignmentCases are all shapes and orders.
func alignmentCases() []alignmentCase {
	var all []alignmentCase
	add := func(name string, order int, lower func(x float64) float64, args ...string) {
		shape, _, _ := strings.Cut(name, " ")
		all = append(all, alignmentCase{
			name: fmt.Sprintf("%s %d", name, order),
			args: append([]string{"--shape", shape, "--order", strconv.Itoa(order)}, args...), lower: lower,
		})
	}
	for n := 1; n <= 8; n++ {
		add("butterworth", n, func(x float64) float64 { return butterworth(n, x) })
		for _, reference := range []string{"magnitude", "phase", "delay"} {
			scale := besselScale(n, reference)
			add("bessel "+reference, n, func(x float64) float64 { return bessel(n, scale*x) }, "--reference", reference)
		}
		for _, ripple := range []float64{0.1, 0.5, 1, 3} {
			add(fmt.Sprintf("chebyshev %g dB", ripple), n, func(x float64) float64 { return chebyshev(n, ripple, x) }, "--ripple", fmt.Sprintf("%g dB", ripple))
		}
	}
	for _, n := range []int{2, 4, 6, 8} {
		// S. H. Linkwitz, "Active Crossover Networks for Noncoincident Drivers", JAES 24(1), 1976: a Butterworth
		// of half the order, twice.
		add("linkwitz-riley", n, func(x float64) float64 { return math.Pow(butterworth(n/2, x), 2) })
	}
	return all
}

// butterworth returns |H|: S. Butterworth, "On the Theory of Filter Amplifiers", Experimental Wireless 7, 1930.
func butterworth(n int, x float64) float64 { return 1 / math.Hypot(1, math.Pow(x, float64(n))) }

// chebyshev returns |H| = √((1 + ε²·Tn(0)²)/(1 + ε²·Tn(x)²)), 1 at DC, with Tn in its trigonometric form (M.
// Abramowitz and I. A. Stegun, "Handbook of Mathematical Functions", 1964, 22.3.15) and ε² = 10^(ripple/10) - 1.
func chebyshev(n int, ripple, x float64) float64 {
	e := math.Pow(10, ripple/10) - 1
	tn := math.Cos(float64(n) * math.Acos(min(x, 1)))
	if x > 1 {
		tn = math.Cosh(float64(n) * math.Acosh(x))
	}
	atDC := 0.0
	if n%2 == 0 {
		atDC = 1 // Tn(0)² is 0 for an odd order and 1 for an even one
	}
	return math.Sqrt((1 + e*atDC) / (1 + e*tn*tn))
}

// bessel returns |H| = θn(0)/|θn(jx)|, x the frequency times the delay at DC. The reverse Bessel polynomial
// θn(s) = Σ (2n-k)!/((n-k)! k! 2^(n-k)) s^k is that of W. E. Thomson, "Delay Networks having Maximally Flat
// Frequency Characteristics", Proc. IEE 96(3), 1949; the closed form is H. L. Krall and O. Frink's, "A New Class
// of Orthogonal Polynomials", Trans. AMS 65, 1949.
func bessel(n int, x float64) float64 {
	var sum complex128
	for k := n; k >= 0; k-- {
		sum = sum*complex(0, x) + complex(besselCoefficient(n, k), 0)
	}
	return besselCoefficient(n, 0) / cmplx.Abs(sum)
}

func besselCoefficient(n, k int) float64 {
	return factorial(2*n-k) / (factorial(n-k) * factorial(k) * math.Exp2(float64(n-k)))
}

func factorial(n int) float64 {
	f := 1.0
	for i := 2; i <= n; i++ {
		f *= float64(i)
	}
	return f
}

// besselScale returns what x must be multiplied by for it to be 1 at the reference.
func besselScale(n int, reference string) float64 {
	switch reference {
	case "delay":
		return 1
	case "phase": // far above, θn(0)/x^n is 1 where x is θn(0)^(1/n)
		return math.Pow(besselCoefficient(n, 0), 1/float64(n))
	}
	// |H| falls throughout, so halving finds where |H|² is ½.
	low, high := 0.0, 100.0
	for range 200 {
		if middle := (low + high) / 2; bessel(n, middle) > math.Sqrt2/2 {
			low = middle
		} else {
			high = middle
		}
	}
	return low
}

// sizedCrossover is what the tests read of the answer of size.
type sizedCrossover struct {
	Low  sizedWay `json:"low"`
	Mid  sizedWay `json:"mid"`
	High sizedWay `json:"high"`
	Sum  struct {
		LowestDB  float64 `json:"lowest_db"`
		HighestDB float64 `json:"highest_db"`
	} `json:"sum"`
}

type sizedWay struct {
	Network     []string           `json:"network"`
	Parts       map[string]float64 `json:"parts"`
	Polarity    string             `json:"polarity"`
	CrossoverDB []float64          `json:"crossover_db"`
}

// predicted is what the test reads of the answer of predict.
type predicted struct {
	FrequencyHz []float64 `json:"frequency_hz"`
	Ways        []struct {
		Name   string    `json:"name"`
		GainDB []float64 `json:"gain_db"`
	} `json:"ways"`
}

// TestSizeReproducesAlignments goes from one end of the program to the other: size gives the values of every
// alignment, a design file is written with them, and predict, which knows nothing of alignments, must find the
// magnitude that the alignment's definition gives. Nothing is rounded on the way, so the tolerance is that of
// float64 through a continued fraction, a ladder and 320 dB of attenuation.
func TestSizeReproducesAlignments(t *testing.T) {
	const fc, load, tolerance = 1700, 8, 1e-9
	for _, c := range alignmentCases() {
		t.Run(c.name, func(t *testing.T) {
			var sized sizedCrossover
			runJSON(t, &sized, append([]string{"size", "--at", "1.7 kHz", "--load", "8 ohm"}, c.args...)...)
			design := writeFile(t, "sized.toml", sized.design(load))
			var p predicted
			runJSON(t, &p, "predict", design, "--from", "17 Hz", "--to", "170 kHz", "--per-octave", "5")
			if len(p.FrequencyHz) < 60 || len(p.Ways) != 2 {
				t.Fatalf("%d frequencies, %d ways", len(p.FrequencyHz), len(p.Ways))
			}
			for _, way := range p.Ways {
				for k, f := range p.FrequencyHz {
					x := f / fc
					if way.Name == "high" {
						x = fc / f // the high-pass is the mirror image
					}
					got, want := math.Pow(10, way.GainDB[k]/20), c.lower(x)
					if !(math.Abs(got-want) <= tolerance*want) {
						t.Errorf("%s at %g Hz: |H| is %.12g, want %.12g", way.Name, f, got, want)
					}
				}
			}
		})
	}
}

// design writes the design file of the answer, each way ending in a resistance of load Ω.
func (c *sizedCrossover) design(load float64) string {
	var parts, networks strings.Builder
	for _, way := range []struct {
		name string
		sizedWay
	}{{"low", c.Low}, {"high", c.High}} {
		for part, v := range way.Parts {
			unit := map[byte]string{'R': "ohm", 'L': "H", 'C': "F"}[part[0]]
			fmt.Fprintf(&parts, "%s = \"%s %s\"\n", part, strconv.FormatFloat(v, 'g', -1, 64), unit)
		}
		fmt.Fprintf(&networks, "[driver.%[1]s]\nimpedance = \"%[3]g ohm\"\n[[way]]\nname = %[1]q\ndriver = %[1]q\nnetwork = [\"%[2]s\"]\n", way.name, strings.Join(way.Network, `", "`), load)
	}
	return "[parts]\n" + parts.String() + networks.String()
}
