package cli

import (
	"math"
	"testing"
)

// TestSizeSums holds polarities and sums against what the literature says of drivers as resistances.
func TestSizeSums(t *testing.T) {
	for _, c := range []struct {
		name, shape string
		order       string
		polarity    string
		levelDB     float64 // of each way at the crossover
		highest     float64 // dB, of the sum
		tolerance   float64
	}{
		// S. H. Linkwitz, JAES 24(1), 1976, and for the higher orders S. P. Lipshitz and J. Vanderkooy, JAES 34(5),
		// 1986: 6.02 dB down each, flat, one way reversed where half the order is odd.
		{"LR2", "linkwitz-riley", "2", "reversed", -6.0206, 0, 1e-3},
		{"LR4", "linkwitz-riley", "4", "normal", -6.0206, 0, 1e-3},
		{"LR6", "linkwitz-riley", "6", "reversed", -6.0206, 0, 1e-3},
		{"LR8", "linkwitz-riley", "8", "normal", -6.0206, 0, 1e-3},
		// The same authors: a Butterworth of odd order adds up flat either way round, since |1 ± (jx)^n|² = 1 + x^2n;
		// one of even order has both ways in phase with one polarity, 3.01 dB too loud at the crossover. Of the two
		// flat sums of order 3, the reversed one is an all-pass of first order, the other of second: less delay.
		{"Butterworth 1", "butterworth", "1", "normal", -3.0103, 0, 1e-3},
		{"Butterworth 2", "butterworth", "2", "reversed", -3.0103, 3.0103, 1e-3},
		{"Butterworth 3", "butterworth", "3", "reversed", -3.0103, 0, 1e-3},
		{"Butterworth 4", "butterworth", "4", "normal", -3.0103, 3.0103, 1e-3},
	} {
		t.Run(c.name, func(t *testing.T) {
			var a sizedCrossover
			runJSON(t, &a, "size", "--shape", c.shape, "--order", c.order, "--at", "1 kHz", "--load", "8 ohm")
			if a.Low.Polarity != "normal" || a.High.Polarity != c.polarity {
				t.Errorf("polarities are %s and %s, want normal and %s", a.Low.Polarity, a.High.Polarity, c.polarity)
			}
			for _, w := range []sizedWay{a.Low, a.High} {
				if len(w.CrossoverDB) != 1 || math.Abs(w.CrossoverDB[0]-c.levelDB) > c.tolerance {
					t.Errorf("levels at the crossover are %v, want %v", w.CrossoverDB, c.levelDB)
				}
			}
			// None of these sums dips. The lowest level that is looked at is six octaves out, where (1 + x²)/√(1 + x⁴) of
			// the second order is still 0.0021 dB.
			if math.Abs(a.Sum.HighestDB-c.highest) > c.tolerance || a.Sum.LowestDB < -c.tolerance || a.Sum.LowestDB > 0.0022 {
				t.Errorf("the sum lies from %v to %v dB, want 0 to %v", a.Sum.LowestDB, a.Sum.HighestDB, c.highest)
			}
		})
	}
}

// TestSizeRounding holds what a preferred value does against the closed form of a second-order low-pass,
// H = 1/(1 + sL/R + s²LC): with one part changed, |H| at fc is that formula's.
func TestSizeRounding(t *testing.T) {
	const fc, r = 1000.0, 8.0
	var a struct {
		Low struct {
			Parts     map[string]float64
			Preferred []struct {
				Part    string
				Nearest float64
				Below   preferredOption
				Above   preferredOption
			}
			Rounded roundingEffect
		}
	}
	runJSON(t, &a, "size", "--shape", "butterworth", "--order", "2", "--at", "1 kHz", "--load", "8 ohm")
	level := func(f, l, c float64) float64 {
		w := 2 * math.Pi * f
		return -20 * math.Log10(math.Hypot(1-w*w*l*c, w*l/r))
	}
	l, c := a.Low.Parts["L1"], a.Low.Parts["C1"]
	// A Butterworth of order 2: L = √2·R/ω, C = 1/(√2·R·ω).
	if w := 2 * math.Pi * fc; math.Abs(l/(math.Sqrt2*r/w)-1) > 1e-12 || math.Abs(c*math.Sqrt2*r*w-1) > 1e-12 {
		t.Fatalf("L is %v H, C is %v F", l, c)
	}
	check := func(what string, got roundingEffect, newL, newC float64) {
		t.Helper()
		if want := level(fc, newL, newC) - level(fc, l, c); math.Abs(got.CrossoverDB-want) > 1e-9 {
			t.Errorf("%s changes the crossover by %v dB, want %v", what, got.CrossoverDB, want)
		}
		if want := level(got.WorstHz, newL, newC) - level(got.WorstHz, l, c); math.Abs(got.WorstDB-want) > 1e-9 {
			t.Errorf("%s changes %v Hz by %v dB, want %v", what, got.WorstHz, got.WorstDB, want)
		}
		// The worst is looked for on a grid; nothing on a finer one, within two octaves, is much worse.
		for f := fc / 4; f <= fc*4; f *= 1.001 {
			if d := level(f, newL, newC) - level(f, l, c); math.Abs(d) > math.Abs(got.WorstDB)+0.01 {
				t.Errorf("%s changes %v Hz by %v dB, and the worst is said to be %v", what, f, d, got.WorstDB)
				break
			}
		}
		// At the ends of the two octaves it is exact.
		for _, f := range []float64{fc / 4, fc * 4} {
			if d := level(f, newL, newC) - level(f, l, c); math.Abs(d) > math.Abs(got.WorstDB)+1e-9 {
				t.Errorf("%s changes %v Hz by %v dB, and the worst is said to be %v", what, f, d, got.WorstDB)
			}
		}
	}
	// 1.801 mH and 14.07 uF lie between these values of IEC 60063's E12.
	want := map[string][3]float64{"L1": {1.8e-3, 2.2e-3, 1.8e-3}, "C1": {12e-6, 15e-6, 15e-6}}
	if len(a.Low.Preferred) != 2 {
		t.Fatalf("%d parts", len(a.Low.Preferred))
	}
	for _, p := range a.Low.Preferred {
		if got := [3]float64{p.Below.Value, p.Above.Value, p.Nearest}; got != want[p.Part] {
			t.Errorf("%s: below, above and nearest are %v, want %v", p.Part, got, want[p.Part])
		}
		for _, o := range []preferredOption{p.Below, p.Above} {
			if p.Part == "L1" {
				check("L1", o.roundingEffect, o.Value, c)
			} else {
				check("C1", o.roundingEffect, l, o.Value)
			}
		}
	}
	check("rounding both", a.Low.Rounded, 1.8e-3, 15e-6)
}

type preferredOption struct {
	Value float64
	roundingEffect
}

type roundingEffect struct {
	CrossoverDB float64 `json:"crossover_db"`
	WorstDB     float64 `json:"worst_db"`
	WorstHz     float64 `json:"worst_hz"`
}

// TestSizeLoads: ways with loads of their own have the values that the same way has in a set of that load.
func TestSizeLoads(t *testing.T) {
	args := []string{"size", "--shape", "bessel", "--order", "3", "--at", "500 Hz, 4 kHz"}
	var mixed, six, four sizedCrossover
	runJSON(t, &mixed, append(args, "--load", "8ohm,6ohm,4ohm")...)
	runJSON(t, &six, append(args, "--load", "6ohm")...)
	runJSON(t, &four, append(args, "--load", "4ohm")...)
	for _, pair := range [][2]sizedWay{{mixed.Mid, six.Mid}, {mixed.High, four.High}} {
		if len(pair[0].Parts) == 0 || len(pair[0].Parts) != len(pair[1].Parts) {
			t.Fatalf("%d and %d parts", len(pair[0].Parts), len(pair[1].Parts))
		}
		for name, v := range pair[0].Parts {
			if v != pair[1].Parts[name] {
				t.Errorf("%s is %v, and %v in a set of that load", name, v, pair[1].Parts[name])
			}
		}
	}
}

// TestAllPassSumsFlat: R. M. Bullock III, "Passive Three-Way All-Pass Crossover Networks", JAES 32(9), 1984: with
// the mid's polarity and level right, the magnitude of the sum is constant.
func TestAllPassSumsFlat(t *testing.T) {
	for _, order := range []string{"1", "2", "3", "4"} {
		var a sizedCrossover
		runJSON(t, &a, "size", "--arrangement", "all-pass", "--order", order, "--at", "300 Hz, 3 kHz", "--load", "8 ohm")
		if math.Abs(a.Sum.LowestDB) > 1e-9 || math.Abs(a.Sum.HighestDB) > 1e-9 {
			t.Errorf("order %s: the sum lies from %v to %v dB", order, a.Sum.LowestDB, a.Sum.HighestDB)
		}
	}
}

// TestPad holds the pad against its two conditions, with the resistances put in series and in parallel.
func TestPad(t *testing.T) {
	var a struct {
		Parts map[string]float64
		Facts map[string]float64
	}
	runJSON(t, &a, "size", "pad", "--load", "8 ohm", "--loss", "6 dB", "--power", "40 W")
	series, shunt := a.Parts["R1"], a.Parts["R2"]
	below := 1 / (1/shunt + 1.0/8)
	if math.Abs(series+below-8) > 1e-12 {
		t.Errorf("the pad shows %v Ω, want 8", series+below)
	}
	if got := 20 * math.Log10((series+below)/below); math.Abs(got-6) > 1e-12 {
		t.Errorf("the pad takes %v dB, want 6", got)
	}
	// 40 W into 8 Ω are √(320) V at the pad; what is left of them at the driver is 10^(-6/20) of that.
	v := math.Sqrt(40*8) * math.Pow(10, -6.0/20)
	for key, want := range map[string]float64{
		"load_power_w":   v * v / 8,
		"shunt_power_w":  v * v / shunt,
		"series_power_w": math.Pow(math.Sqrt(40*8)-v, 2) / series,
	} {
		if math.Abs(a.Facts[key]-want) > 1e-9 {
			t.Errorf("%s is %v, want %v", key, a.Facts[key], want)
		}
	}
}

// TestStartPredicts goes from start to predict without an edit: with the drivers made resistances and padded to
// one level, a Linkwitz-Riley pair sums flat as far as the values, written to four figures, let it.
func TestStartPredicts(t *testing.T) {
	text, stderr, code := run("", "start", "--at", "3 kHz", "--shape", "linkwitz-riley", "--order", "4", "--compensate",
		"--driver", "woofer=8ohm,sensitivity:87dB", "--driver", "tweeter=re:5.4ohm,le:0.04mH,sensitivity:92dB")
	if code != exitDone || stderr != "" {
		t.Fatalf("exit code %d, %s", code, stderr)
	}
	design := writeFile(t, "start.toml", text)
	var doc struct {
		Sum struct {
			SPLDB []float64 `json:"spl_db"`
		} `json:"sum"`
	}
	runJSON(t, &doc, "predict", design, "--from", "100 Hz", "--to", "10 kHz", "--per-octave", "12")
	if len(doc.Sum.SPLDB) == 0 {
		t.Fatal("no sum")
	}
	for _, level := range doc.Sum.SPLDB {
		// 87 dB less the 0.05 Ω of amplifier and cable before at least 5 Ω, 0.08 dB.
		if math.Abs(level-87) > 0.1 {
			t.Errorf("the sum is %v dB, want 87 within 0.1", level)
		}
	}
}
