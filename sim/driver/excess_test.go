package driver

import (
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"strings"
	"testing"
)

// phaseFile writes h at freqs as a table of three columns, the phase wrapped.
func phaseFile(freqs []float64, h func(f float64) complex128) string {
	var b strings.Builder
	for _, f := range freqs {
		v := h(f)
		fmt.Fprintf(&b, "%.12g %.12g %.6f\n", f, 90+20*math.Log10(cmplx.Abs(v)), cmplx.Phase(v)*180/math.Pi)
	}
	return b.String()
}

func mustTable(t testing.TB, src string) *Table {
	t.Helper()
	table, err := ReadTable("w.frd", strings.NewReader(src))
	if err != nil {
		t.Fatal(err)
	}
	return table
}

// Delays put into tables of minimum-phase drivers come out, whatever the rows are: at 1/20 octave 3 ms turns the phase
// by two whole turns from row to row at the top, so unwrapping alone cannot find it. The bound is 5 µs, 1.7 mm: what
// the fit of the skirts leaves.
func TestExcessDelay(t *testing.T) {
	woofer := product(highPass(45, 0.7), lowPass(2500, 0.9))
	tweeter := product(highPass(900, 0.8), lowPass(18000, 0.7))
	bins := func(from, to, step float64) (fs []float64) {
		for f := from; f <= to; f += step {
			fs = append(fs, f)
		}
		return fs
	}
	for _, tt := range []struct {
		name  string
		h     func(f float64) complex128
		freqs []float64
		delay float64 // s
	}{
		{"none", woofer, grid(20, 20e3, 200), 0},
		{"1 m, a woofer at 1/20 octave", woofer, grid(20, 20e3, 200), 2.92e-3},
		{"1 m, a tweeter at 1/20 octave", tweeter, grid(200, 40e3, 153), 2.92e-3},
		{"an acoustic centre 22 mm back", woofer, grid(20, 20e3, 480), 64.1e-6},
		{"too much taken out", tweeter, grid(200, 40e3, 480), -0.3e-3},
		{"10 m", woofer, grid(20, 20e3, 960), 29.15e-3},
		{"bins of 20 Hz, which repeat after 50 ms", tweeter, bins(200, 30e3, 20), 1e-3},
		{"reversed", func(f float64) complex128 { return -woofer(f) }, grid(20, 20e3, 200), 2e-3},
	} {
		late := func(f float64) complex128 { return tt.h(f) * cmplx.Rect(1, -2*math.Pi*f*tt.delay) }
		got, spread := ExcessDelay(mustTable(t, phaseFile(tt.freqs, late)))
		if math.Abs(got-tt.delay) > 5e-6 || !(spread < 5e-6) {
			t.Errorf("%s: got %.2f µs ± %.2f, want %.2f", tt.name, got*1e6, spread*1e6, tt.delay*1e6)
		}
	}
}

// With 0.2 dB and 2° of noise the delay must lie within four of the standard deviations that come with it, and these
// must be small: for white noise the textbook's least-squares figure, σ/(2π·√Σ w(f-f̄)²), is some 0.3 µs here.
func TestExcessDelayInNoise(t *testing.T) {
	h := product(highPass(900, 0.8), lowPass(15000, 0.7))
	rng := rand.New(rand.NewPCG(3, 4))
	for range 10 {
		noisy := func(f float64) complex128 {
			return h(f) * cmplx.Rect(math.Pow(10, 0.2*rng.NormFloat64()/20), -2*math.Pi*f*2.92e-3+2*math.Pi/180*rng.NormFloat64())
		}
		got, spread := ExcessDelay(mustTable(t, phaseFile(grid(200, 20e3, 300), noisy)))
		if math.Abs(got-2.92e-3) > 4*spread+2e-6 || !(spread < 5e-6) {
			t.Errorf("got %.2f µs ± %.2f, want 2920", got*1e6, spread*1e6)
		}
	}
}

func TestNoExcessDelayToFind(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	for name, src := range map[string]string{
		"no phase":     levelFile(grid(20, 20e3, 200), highPass(100, 1)),
		"few rows":     phaseFile(grid(20, 20e3, 15), highPass(100, 1)),
		"all but soft": phaseFile(grid(20, 20e3, 60), func(f float64) complex128 { return complex(math.Pow(f/20e3, 9), 0) }),
		"noise":        phaseFile(grid(20, 20e3, 400), func(float64) complex128 { return cmplx.Rect(1, 7*rng.Float64()) }),
	} {
		if got, spread := ExcessDelay(mustTable(t, src)); got != 0 || !math.IsInf(spread, 1) {
			t.Errorf("%s: got %g s ± %g, want none", name, got, spread)
		}
	}
}

// A response table tells its delay, however short, and takes none for a thing to be told of.
func TestResponseTableTellsItsDelay(t *testing.T) {
	h := product(highPass(45, 0.7), lowPass(2500, 0.9))
	for _, delay := range []float64{0, 64e-6, 2.9155e-3, -0.6e-3} {
		late := func(f float64) complex128 { return h(f) * cmplx.Rect(1, -2*math.Pi*f*delay) }
		r := mustResponse(t, phaseFile(grid(20, 20e3, 960), late))
		if got, spread := r.ExcessDelay(); abs(got-delay) > 5e-6 || !(spread < 5e-6) { // as TestExcessDelay
			t.Errorf("got %.2f µs ± %.2f, want %.2f", got*1e6, spread*1e6, delay*1e6)
		}
		if n := r.Notes(); len(n) > 0 {
			t.Errorf("%g s: notes %q", delay, n)
		}
	}
}

// A metre of flight left in a table of 1/20 octave turns the phase by two turns between rows at the top. It must come
// back between the rows all the same: as smooth as the driver is, with the delay on it.
func TestFlightBetweenRows(t *testing.T) {
	h := product(highPass(45, 0.7), lowPass(2500, 0.9))
	late := func(f float64) complex128 { return h(f) * cmplx.Rect(1, -2*math.Pi*f*2.92e-3) }
	r := mustResponse(t, phaseFile(grid(20, 20e3, 200), late))
	for _, f := range grid(25, 18e3, 400) {
		want := late(f) * complex(pascal(90), 0)
		nearC(t, fmt.Sprintf("%g Hz", f), r.Pressure(f), want, 0.003) // Akima's curve through rows 1/20 octave apart
	}
}
