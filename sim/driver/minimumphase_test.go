package driver

import (
	"fmt"
	"math"
	"math/cmplx"
	"math/rand/v2"
	"strings"
	"testing"
)

// levelFile writes 20·lg|h| at freqs as a table of two columns.
func levelFile(freqs []float64, h func(f float64) complex128) string {
	var b strings.Builder
	for _, f := range freqs {
		fmt.Fprintf(&b, "%.12g %.12g\n", f, 20*math.Log10(cmplx.Abs(h(f))))
	}
	return b.String()
}

func mustMinimum(t testing.TB, src string) *MinimumResponse {
	t.Helper()
	table, err := ReadTable("w.frd", strings.NewReader(src))
	if err != nil {
		t.Fatal(err)
	}
	r, err := NewMinimumResponse(table)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// angleBetween returns the angle from b to a in degrees, within half a turn.
func angleBetween(a, b complex128) float64 { return cmplx.Phase(a/b) * 180 / math.Pi }

// worstAngle returns the largest angle in degrees between r and h from lo to hi in Hz, and where.
func worstAngle(r *MinimumResponse, h func(f float64) complex128, lo, hi float64) (worst, at float64) {
	for _, f := range grid(lo, hi, 1000) {
		if d := math.Abs(angleBetween(r.Pressure(f), h(f))); d > worst {
			worst, at = d, f
		}
	}
	return worst, at
}

// highPass and lowPass are second-order sections at f0 with the given Q.
func highPass(f0, q float64) func(f float64) complex128 {
	return func(f float64) complex128 {
		s := complex(0, f/f0)
		return s * s / (s*s + s*complex(1/q, 0) + 1)
	}
}

func lowPass(f0, q float64) func(f float64) complex128 {
	return func(f float64) complex128 {
		s := complex(0, f/f0)
		return 1 / (s*s + s*complex(1/q, 0) + 1)
	}
}

func product(hs ...func(f float64) complex128) func(f float64) complex128 {
	return func(f float64) complex128 {
		p := complex(1, 0)
		for _, h := range hs {
			p *= h(f)
		}
		return p
	}
}

// A stable filter without zeros to the right of the jω axis is its own minimum phase, so band-passes of fourth order
// and more, tabulated in 200 rows from 20 Hz to 20 kHz, must come out with the phase of their formula: within 1°
// from 40 Hz to 10 kHz is what a crossover needs. The bounds here are tighter: what the fit of the skirts is worth, by
// how much of the skirt is in the table. A corner an octave from the end leaves its own knee as the only skirt.
func TestBandPasses(t *testing.T) {
	butterworth := math.Sqrt2 / 2
	for _, tt := range []struct {
		name  string
		h     func(f float64) complex128
		bound float64 // degrees
	}{
		{"Butterworth 200 Hz, 3 kHz", product(highPass(200, butterworth), lowPass(3000, butterworth)), 0.05},
		{"Butterworth 60 Hz, 5 kHz", product(highPass(60, butterworth), lowPass(5000, butterworth)), 0.5},
		{"Q 0.5, 60 Hz, 5 kHz", product(highPass(60, 0.5), lowPass(5000, 0.5)), 0.5},
		{"Q 1.2, 80 Hz, 4 kHz", product(highPass(80, 1.2), lowPass(4000, 1.2)), 0.2},
		{"Q 0.5, 40 Hz, 8 kHz: an octave from the end", product(highPass(40, 0.5), lowPass(8000, 0.5)), 1},
		{"Q 5 at 1 kHz, both sides", product(highPass(1000, 5), lowPass(1000, 5)), 0.5},
		{"first order, 100 Hz", func(f float64) complex128 { return complex(0, f/100) / complex(1, f/100) }, 0.1},
		{"eighth order, 80 Hz, 4 kHz", product(highPass(80, butterworth), highPass(80, butterworth), lowPass(4000, butterworth), lowPass(4000, butterworth)), 0.2},
		{"tweeter, 900 Hz, coil 12 kHz: within an octave of the end", product(highPass(900, 0.9), func(f float64) complex128 { return 1 / complex(1, f/12000) }), 1},
		{"a notch of Q 3 and 6 dB", product(highPass(100, 1), func(f float64) complex128 {
			s := complex(0, f/1500)
			return (s*s + s*complex(0.333, 0) + 1) / (s*s + s*complex(0.667, 0) + 1)
		}), 0.2},
	} {
		r := mustMinimum(t, levelFile(grid(20, 20e3, 200), tt.h))
		if worst, at := worstAngle(r, tt.h, 40, 10e3); worst > tt.bound {
			t.Errorf("%s: off by %.3f° at %.0f Hz, want at most %g°", tt.name, worst, at, tt.bound)
		}
	}
}

// What the corners' angles are, by hand: atan of first-order sections, and of second-order ones.
func TestPublishedAngles(t *testing.T) {
	rc := func(f float64) complex128 { return 1 / complex(1, f/1000) }
	b2 := lowPass(1000, math.Sqrt2/2)
	first, second := mustMinimum(t, levelFile(grid(10, 100e3, 400), rc)), mustMinimum(t, levelFile(grid(10, 100e3, 400), b2))
	for _, tt := range []struct {
		r       *MinimumResponse
		f, want float64
	}{
		{first, 1000, -45}, {first, 2000, -63.435}, {first, 500, -26.565},
		{second, 1000, -90}, {second, 500, -43.31}, {second, 2000, -136.69},
	} {
		if got := cmplx.Phase(tt.r.Pressure(tt.f)) * 180 / math.Pi; math.Abs(got-tt.want) > 0.02 { // printed to 0.01°, and the same for 40 rows a decade
			t.Errorf("%g Hz: %.3f°, want %g°", tt.f, got, tt.want)
		}
	}
}

// Bode's theorem for a constant slope: n times 6.02 dB an octave turns the phase by n quarter turns, everywhere,
// beyond the ends of the table too.
func TestConstantSlope(t *testing.T) {
	for n := -4; n <= 4; n++ {
		h := func(f float64) complex128 { return complex(math.Pow(f/1000, float64(n)), 0) }
		r := mustMinimum(t, levelFile(grid(20, 20e3, 31), h))
		for _, f := range []float64{1e-3, 1, 20, 777, 20e3, 1e5, 1e9} {
			want := cmplx.Rect(cmplx.Abs(h(f)), float64(n)*math.Pi/2)
			nearC(t, fmt.Sprintf("slope %d at %g Hz", n, f), r.Pressure(f)*(2.83/20e-6), want, 1e-7) // 12 figures were written, and 15 octaves beyond the end multiply them
		}
	}
}

// The sum of a fourth-order Linkwitz-Riley pair is an all-pass: its level is flat, and so is the phase of the
// least-phase system with that level.
func TestAllPassHasNoMinimumPhase(t *testing.T) {
	sum := func(f float64) complex128 {
		s := complex(0, f/2000)
		return (s*s - s*math.Sqrt2 + 1) / (s*s + s*math.Sqrt2 + 1)
	}
	r := mustMinimum(t, levelFile(grid(20, 20e3, 200), sum))
	for _, f := range grid(1, 100e3, 50) {
		if d := cmplx.Phase(r.Pressure(f)) * 180 / math.Pi; math.Abs(d) > 1e-8 {
			t.Errorf("at %g Hz: %g°, want none", f, d)
		}
	}
}

// The dilogarithms behind Bode's weight, at the points where they are known: Lewin, Polylogarithms and Associated
// Functions, 1981 (from memory), and the share of the weight within an octave and a decade either side (derived).
func TestLegendreChi2(t *testing.T) {
	golden := (math.Sqrt(5) - 1) / 2
	square := func(x float64) float64 { return x * x }
	for _, tt := range []struct{ x, want float64 }{
		{0, 0},
		{1, math.Pi * math.Pi / 8},
		{math.Sqrt2 - 1, math.Pi*math.Pi/16 - square(math.Log(math.Sqrt2+1))/4},
		{golden, math.Pi*math.Pi/12 - 0.75*square(math.Log(golden))},
		{math.Sqrt(5) - 2, math.Pi*math.Pi/24 - 0.75*square(math.Log(golden))},
	} {
		near(t, fmt.Sprintf("χ₂(%g)", tt.x), legendreChi2(tt.x), tt.want, 4e-15)
	}
	share := func(ratio float64) float64 { return 1 - legendreChi2(1/ratio)/(math.Pi*math.Pi/8) }
	near(t, "within an octave", share(2), 0.5823, 1e-4)
	near(t, "within a decade", share(10), 0.9189, 1e-4)
}

// Noise on the level is noise on the phase: Hilbert's transform keeps its power, 0.1 dB being 0.66°. The worst of a
// thousand points in five tables is some four times that, and near the lower end the slope's own error adds as much.
func TestNoisyLevel(t *testing.T) {
	h := product(highPass(80, 0.8), lowPass(4000, 0.7))
	rng := rand.New(rand.NewPCG(1, 2))
	for range 5 {
		noisy := func(f float64) complex128 { return h(f) * complex(math.Pow(10, 0.1*rng.NormFloat64()/20), 0) }
		r := mustMinimum(t, levelFile(grid(20, 20e3, 200), noisy))
		if worst, at := worstAngle(r, h, 40, 10e3); worst > 8*0.66 {
			t.Errorf("off by %.2f° at %.0f Hz", worst, at)
		}
	}
}

func TestMinimumResponseAllocatesNothing(t *testing.T) {
	r := mustMinimum(t, levelFile(grid(20, 20e3, 200), highPass(100, 1)))
	var sum complex128
	if n := testing.AllocsPerRun(100, func() { sum += r.Pressure(1) + r.Pressure(777) + r.Pressure(1e6) }); n != 0 {
		t.Errorf("%v allocations", n)
	}
	if cmplx.IsNaN(sum) {
		t.Error("the sum is not a number")
	}
}

func BenchmarkMinimumResponse(b *testing.B) {
	table := mustTable(b, levelFile(grid(20, 20e3, 200), highPass(100, 1)))
	b.Run("made", func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			if _, err := NewMinimumResponse(table); err != nil {
				b.Fatal(err)
			}
		}
	})
	r := mustMinimum(b, levelFile(grid(20, 20e3, 200), highPass(100, 1)))
	b.Run("asked", func(b *testing.B) {
		b.ReportAllocs()
		var sum complex128
		for b.Loop() {
			sum += r.Pressure(1234)
		}
		if cmplx.IsNaN(sum) {
			b.Fatal("the sum is not a number")
		}
	})
}
