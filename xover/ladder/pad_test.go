package ladder

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"
)

// 8 Ω; derived, and the form of every textbook. Printed to five figures and four decimals: half a unit of the last.
func TestLPadTable(t *testing.T) {
	for _, row := range []struct{ db, series, shunt, seriesPower, shuntPower, loadPower float64 }{
		{1, 0.8700, 65.564, 0.1087, 0.0969, 0.7943},
		{2, 1.6454, 30.897, 0.2057, 0.1634, 0.6310},
		{3, 2.3364, 19.392, 0.2921, 0.2068, 0.5012},
		{4, 2.9523, 13.678, 0.3690, 0.2329, 0.3981},
		{6, 3.9905, 8.0381, 0.4988, 0.2500, 0.2512},
		{10, 5.4702, 3.6998, 0.6838, 0.2162, 0.1000},
		{12, 5.9905, 2.6836, 0.7488, 0.1881, 0.0631},
		{20, 7.2000, 0.8889, 0.9000, 0.0900, 0.0100},
	} {
		p, err := LPad(8, row.db)
		if err != nil {
			t.Fatal(err)
		}
		checkRow(t, row.db, []float64{p.SeriesR, p.SeriesPower, p.ShuntPower, p.LoadPower},
			[]float64{row.series, row.seriesPower, row.shuntPower, row.loadPower}, 0.5e-4)
		tol := 0.5e-4
		if row.shunt > 10 {
			tol = 0.5e-3
		}
		checkRow(t, row.db, []float64{p.ShuntR}, []float64{row.shunt}, tol)
	}
}

// What a pad is for, and that its powers are those of its two resistors. Rounding only.
func TestLPadKeepsItsLoad(t *testing.T) {
	for _, db := range []float64{MinAttenuationDB, 0.1, 1, 6.02, 20, MaxAttenuationDB} {
		p, err := LPad(5.5, db)
		if err != nil {
			t.Fatal(err)
		}
		gain, input := work(p.Network(), 5.5, 1000)
		if math.Abs(decibel(gain)+db) > 1e-12 || cmplx.Abs(input-5.5) > 1e-11 { // the shunt is 10^4 times the load at the least
			t.Errorf("%g dB: the gain is %.13f dB into %v", db, decibel(gain), input)
		}
		// One volt at the amplifier: 1/5.5 W in all.
		k := real(gain)
		series, shunt, load := (1-k)*(1-k)/p.SeriesR, k*k/p.ShuntR, k*k/5.5
		total := series + shunt + load
		for i, got := range []float64{p.SeriesPower, p.ShuntPower, p.LoadPower} {
			if want := []float64{series, shunt, load}[i] / total; math.Abs(got-want) > 1e-12 {
				t.Errorf("%g dB: power fraction %d is %v, want %v", db, i, got, want)
			}
		}
	}
}

func TestLPadRefuses(t *testing.T) {
	for _, test := range []struct {
		load, db float64
		want     string
	}{
		{-8, 6, "L-pad: load is -8 Ω; give a positive number"},
		{8, 0, "L-pad: attenuation is 0 dB; give 0.001 to 60 dB"},
		{8, -6, "L-pad: attenuation is -6 dB; give 0.001 to 60 dB"},
		{8, math.NaN(), "L-pad: attenuation is NaN dB; give 0.001 to 60 dB"},
		{8, 61, "L-pad: attenuation is 61 dB; give 0.001 to 60 dB"},
	} {
		p, err := LPad(test.load, test.db)
		if p != (Pad{}) || err == nil || err.Error() != test.want {
			t.Errorf("error is %v, want %s", err, test.want)
		}
	}
}

// Its definition: the depth at fc, half of it where f - fc²/f is ±fc/q, nothing far away. Rounding only.
func TestTrap(t *testing.T) {
	for _, test := range []struct{ load, fc, q, depth float64 }{
		{8, 4000, 2, 6}, {6.2, 7300, 10, 20}, {4, 500, 0.5, 1},
	} {
		n, err := Trap(test.load, test.fc, test.q, test.depth)
		if err != nil {
			t.Fatal(err)
		}
		at := func(f float64) float64 {
			gain, _ := work(n, complex(test.load, 0), f)
			return decibel(gain)
		}
		if got := at(test.fc); math.Abs(got+test.depth) > 1e-11 {
			t.Errorf("%+v: at fc it is %v dB", test, got)
		}
		// f/fc - fc/f = ±1/q
		half := 1 / (2 * test.q)
		upper, lower := math.Sqrt(half*half+1)+half, math.Sqrt(half*half+1)-half
		if d := upper - lower - 1/test.q; math.Abs(d) > 1e-14 {
			t.Fatalf("the edges lie %v apart", upper-lower)
		}
		for _, edge := range []float64{lower, upper} {
			if got := at(test.fc * edge); math.Abs(got+test.depth/2) > 1e-11 {
				t.Errorf("%+v: at %g fc it is %v dB, want half the depth", test, edge, got)
			}
		}
		for _, far := range []float64{1e-6, 1e6} {
			if got := at(test.fc * far); math.Abs(got) > 1e-6 {
				t.Errorf("%+v: at %g fc it is %v dB, want none", test, far, got)
			}
		}
	}
}

// Its definition: nothing below, half of it at f, all of it above. Rounding only.
func TestBaffleStep(t *testing.T) {
	for _, test := range []struct{ load, f, db float64 }{{8, 500, 6}, {5.6, 380, 3}, {4, 700, 4.5}} {
		n, err := BaffleStep(test.load, test.f, test.db)
		if err != nil {
			t.Fatal(err)
		}
		for _, point := range []struct{ f, want, tol float64 }{
			{test.f * 1e-6, 0, 1e-9},
			{test.f, -test.db / 2, 1e-12},
			{test.f * 1e6, -test.db, 1e-9},
		} {
			gain, _ := work(n, complex(test.load, 0), point.f)
			if got := decibel(gain); math.Abs(got-point.want) > point.tol {
				t.Errorf("%+v: at %g Hz it is %v dB, want %v", test, point.f, got, point.want)
			}
		}
	}
	// 6.02 dB doubles the resistance: R equals the load, by hand.
	n, err := BaffleStep(8, 500, 20*math.Log10(2))
	if err != nil {
		t.Fatal(err)
	}
	if r := n[0].Expr.Args[1].Part; r.Kind != Resistor || relative(r.Value, 8) > 1e-14 {
		t.Errorf("for 6.02 dB the resistor is %+v, want 8 Ω", r)
	}
}

// 115 m/s over the width: common practice, no source; a front of 0.23 m gives 500 Hz.
func TestBaffleStepFrequency(t *testing.T) {
	if got := BaffleStepFrequency(0.23); relative(got, 500) > 1e-12 {
		t.Errorf("got %v Hz, want 500", got)
	}
}

// 20 dB is a tenth: 8·(1 - 0.1) = 7.2 Ω and 8·0.1/0.9 = 0.889 Ω.
func ExampleLPad() {
	p, err := LPad(8, 20)
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("series %.2f Ω, shunt %.3f Ω\n", p.SeriesR, p.ShuntR)
	// Output: series 7.20 Ω, shunt 0.889 Ω
}

// 6.0206 dB is a half: R equals the load, 8 Ω, and L = R/(2π·f·√2) = 1.80 mH.
func ExampleBaffleStep() {
	n, err := BaffleStep(8, 500, 6.0206)
	if err != nil {
		fmt.Println(err)
		return
	}
	steps, parts := n.Steps(new(Namer))
	fmt.Println(steps[0])
	for _, p := range parts {
		fmt.Printf("%s = %.3g\n", p.Name, p.Value)
	}
	// Output:
	// series L1 | R1
	// L1 = 0.0018
	// R1 = 8
}
