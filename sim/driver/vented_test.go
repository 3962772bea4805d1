package driver

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"
)

// An alignment of a vented box: what it takes, and |G|⁻² over Ω = f0/f, f0 = √(fs·fb), as a polynomial.
type ventedAlignment struct {
	name             string
	h, alpha, qt, ql float64
	omega6           float64 // coefficient of Ω⁶ beside 1 + Ω⁸
}

// Derived by hand from the response s⁴T⁴/(s⁴T⁴ + a1·s³T³ + a2·s²T² + a3·sT + 1), a1 = √h/QL + 1/(√h·QT),
// a2 = h + (1+α)/h + 1/(QT·QL), a3 = 1/(√h·QL) + √h/QT, of Small, "Vented-Box Loudspeaker Systems", Part I, J.
// Audio Eng. Soc. 21(5), 1973. B4, Butterworth, has a1 = a3 = √(4+2√2), a2 = 2+√2, so h = 1, QT = 1/(a1 - 1/QL),
// α = a2 - 2 - 1/(QT·QL). QB3 makes the coefficients of Ω² and Ω⁴ in |G|⁻² vanish, a1² = 2a2 and a2² + 2 =
// 2a1a3; with a2 = 4 chosen, a1 = √8, a3 = 9/√8 and that of Ω⁶ is a3² - 2a2 = 17/8. Without leaks that is h =
// a3/a1 = 9/8, QT = 1/√(a1a3) = 1/3, α = h(a2-h) - 1 = 143/64; with QL = 7 the two equations were solved by
// SciPy's fsolve.
var ventedAlignments = []ventedAlignment{
	{"B4 without leaks", 1, math.Sqrt2, 0.3826834323650898, math.Inf(1), 0},
	{"B4, QL = 7", 1, 1.0613180213880078, 0.40481424746361355, 7, 0},
	{"QB3 without leaks", 9. / 8, 143. / 64, 1. / 3, math.Inf(1), 17. / 8},
	{"QB3, QL = 7", 1.1390788779744105, 1.7940726055465368, 0.35014153730344016, 7, 17. / 8},
}

// driver returns a driver of 40 Hz in the alignment's box, Qms being ten times Qt.
func (a ventedAlignment) driver() DataSheet {
	d := DataSheet{Re: 6, Fs: 40, Qms: 10 * a.qt, Qes: a.qt / 0.9}
	return d.InVentedBox(100*a.alpha, 100, 40*a.h, a.ql)
}

func TestVentedAlignments(t *testing.T) {
	for _, a := range ventedAlignments {
		d := a.driver()
		f0 := 40 * math.Sqrt(a.h)
		for _, f := range grid(2, 2000, 40) {
			o2 := f0 * f0 / (f * f)
			want := 1 / math.Sqrt(1+o2*o2*o2*(a.omega6+o2))
			near(t, fmt.Sprintf("%s: |G| at %.3g Hz", a.name, f), cmplx.Abs(d.Acceleration(jw(f))), want, 1e-9) // digits of the constants above, lost where terms cancel
		}
		// 24 dB an octave far below, where Ω⁸ is all: 20·lg 2⁴.
		far := 20 * math.Log10(cmplx.Abs(d.Acceleration(jw(0.2)))/cmplx.Abs(d.Acceleration(jw(0.1))))
		near(t, a.name+": slope", far, 80*math.Log10(2), 1e-5)
	}
	// Thiele's first alignment, as it is usually printed: Qt 0.383, fb = f3 = fs, Vas/Vb 1.414 (from memory).
	b4 := ventedAlignments[0].driver()
	near(t, "B4 at f3", 20*math.Log10(cmplx.Abs(b4.Acceleration(jw(40)))), -3.0103, 1e-5)
}

// Here the loudspeaker is solved by its mechanics and acoustics: the coil's force on mass, spring and friction,
// against the pressure in a box from which a vent and a leak lead out; what comes out is the sum of the three
// flows. Kinsler et al., "Fundamentals of Acoustics", has the elements.
func TestVentedBoxFromMechanics(t *testing.T) {
	const (
		rho, c              = 1.20, 343.0
		re, le, bl          = 5.7, 0.4e-3, 7.3
		mms, cms, rms, sd   = 0.021, 0.9e-3, 1.1, 0.0139
		vb, ventMass, leakR = 0.024, 46.0, 21e3 // m³; kg/m⁴; Pa·s/m³
	)
	cab, cas := vb/(rho*c*c), cms*sd*sd
	fs, fb := 1/(2*math.Pi*math.Sqrt(mms*cms)), 1/(2*math.Pi*math.Sqrt(ventMass*cab))
	vas := rho * c * c * cas
	d := DataSheet{Re: re, Le: le, Fs: fs, Qms: math.Sqrt(mms/cms) / rms, Qes: math.Sqrt(mms/cms) * re / (bl * bl)}
	d = d.InVentedBox(vas, vb, fb, 2*math.Pi*fb*cab*leakR)
	for _, f := range grid(3, 5000, 60) {
		s := jw(f)
		box := 1 / (s*complex(cab, 0) + 1/complex(leakR, 0) + 1/(s*complex(ventMass, 0))) // Pa·s/m³
		mech := s*complex(mms, 0) + complex(rms, 0) + 1/(s*complex(cms, 0)) + box*complex(sd*sd, 0)
		coil := complex(re, 0) + s*complex(le, 0)
		z := coil + complex(bl*bl, 0)/mech
		nearC(t, fmt.Sprintf("Z at %.3g Hz", f), d.Impedance(s), z, 1e-12) // rounding
		u := complex(bl, 0) / z / mech                                     // m/s for 1 V
		flow := u * complex(sd, 0)
		pressure := flow * box
		out := flow - pressure/complex(leakR, 0) - pressure/(s*complex(ventMass, 0))
		// Far above resonance and without inductance, the acceleration for 1 V is Bl/(Re·Mms).
		want := s * out / complex(sd*bl/(re*mms), 0)
		nearC(t, fmt.Sprintf("acceleration at %.3g Hz", f), d.Acceleration(s), want, 1e-9) // out is a difference
	}
}

// The two peaks of a box without losses and the dip between them: fL·fH = fs·fb, fL² + fH² = fs²(1+α) + fb²,
// and the dip at fb, from the zeros and poles of the motional branch; by hand, and in Thiele (1961).
func TestTwoPeaks(t *testing.T) {
	const alpha, fb = 1.7, 46.0
	d := DataSheet{Re: 6, Fs: 40, Qms: 1e6, Qes: 0.4}.InVentedBox(alpha, 1, fb, 1e6)
	cross := func(lo, hi float64) float64 { // where the reactance changes sign
		rising := imag(d.Impedance(jw(lo))) < 0
		for range 200 {
			mid := (lo + hi) / 2
			if (imag(d.Impedance(jw(mid))) < 0) == rising {
				lo = mid
			} else {
				hi = mid
			}
		}
		return lo
	}
	low, dip, high := cross(5, fb*0.9), cross(fb*0.9, fb*1.1), cross(fb*1.1, 400)
	near(t, "dip", dip, fb, 1e-9) // losses of one in a million squared
	near(t, "fL·fH", low*high, 40*fb, 1e-9)
	near(t, "fL² + fH²", low*low+high*high, 40*40*(1+alpha)+fb*fb, 1e-9)
	near(t, "α from the peaks", (high*high-fb*fb)*(fb*fb-low*low)/(high*high*low*low), alpha, 1e-8)
	for _, f := range []float64{low, high} {
		if z := cmplx.Abs(d.Impedance(jw(f))); z < 1000 {
			t.Errorf("at %g Hz: %g ohm is no peak", f, z)
		}
	}
	near(t, "|Z| in the dip", cmplx.Abs(d.Impedance(jw(dip))), 6, 1e-4) // what the leaks add is some 1e-5 of it
	nearC(t, "toward DC", d.Impedance(0), 6, 0)
}

// With fs = fb the driver's own reactances cancel at the tuning: Z = Re + Res ∥ ωLceb/QL, by hand.
func TestLeakShowsInTheDip(t *testing.T) {
	d := DataSheet{Re: 6, Fs: 30, Qms: 4, Qes: 0.4}.InVentedBox(60, 50, 30, 7)
	lceb, cmep, rel := d.BoxBranch()
	near(t, "Lceb", lceb, 66.3146e-3, 1e-6) // 6/(2π·30·0.4) · 50/60
	near(t, "Cmep", cmep, 424.413e-6, 1e-6) // 1/((2π·30)²·Lceb)
	near(t, "Rel", rel, 12.5/7, 1e-12)      // 2π·30·Lceb is 6/0.4 · 50/60 = 12.5 Ω exactly
	want := 6 + 60*(12.5/7)/(60+12.5/7)
	nearC(t, "Z at the tuning", d.Impedance(jw(30)), complex(want, 0), 1e-12)
}

// The elements, solved node by node, are the impedance, and the voltage across the box's air is the output.
func TestVentedElements(t *testing.T) {
	lossy := DataSheet{Re: 6.1, Le: 0.2e-3, LossR2: 20, LossL2: 1.6e-3, Fs: 48, Qms: 5, Qes: 0.6}
	for name, d := range map[string]DataSheet{
		"leaky":         lossy.InVentedBox(60, 20, 41, 7),
		"without leaks": lossy.InVentedBox(60, 20, 41, math.Inf(1)),
		"plain coil":    {Re: 6, Fs: 30, Qms: 4, Qes: 0.4, Vent: Vent{Alpha: 1.2, Tuning: 30, QL: 7}},
		"no motion":     DataSheet{Re: 6}.InVentedBox(60, 20, 41, 7),
	} {
		for _, e := range d.Elements() {
			if !(e.Value > 0) {
				t.Errorf("%s: %s is %g", name, e.Name, e.Value)
			}
		}
		for _, f := range []float64{5, 30, 41, 90, 1000} {
			nearC(t, fmt.Sprintf("%s at %g Hz", name, f), d.Impedance(jw(f)), nodalImpedance(t, d.Elements(), jw(f)), 1e-10) // rounding of the solution
		}
	}
}

// nodalImpedance solves the nodal equations of an equivalent circuit by Gaussian elimination: the voltage at
// Plus for 1 A into it.
func nodalImpedance(t *testing.T, es []Element, s complex128) complex128 {
	t.Helper()
	n := 0
	for _, e := range es {
		n = max(n, e.From, e.To)
	}
	a := make([][]complex128, n) // node k is row k-1; Minus is 0 V
	for i := range a {
		a[i] = make([]complex128, n+1)
	}
	a[Plus-1][n] = 1
	for _, e := range es {
		var y complex128
		switch e.Kind {
		case Resistor:
			y = complex(1/e.Value, 0)
		case Inductor:
			y = 1 / (s * complex(e.Value, 0))
		case Capacitor:
			y = s * complex(e.Value, 0)
		}
		for _, end := range [][2]int{{e.From, e.To}, {e.To, e.From}} {
			if end[0] == Minus {
				continue
			}
			a[end[0]-1][end[0]-1] += y
			if end[1] != Minus {
				a[end[0]-1][end[1]-1] -= y
			}
		}
	}
	for k := range a {
		for i := k + 1; i < n; i++ {
			if cmplx.Abs(a[i][k]) > cmplx.Abs(a[k][k]) {
				a[i], a[k] = a[k], a[i]
			}
		}
		if a[k][k] == 0 {
			t.Fatalf("node %d hangs loose", k+1)
		}
		for i := range a {
			if i == k {
				continue
			}
			m := a[i][k] / a[k][k]
			for j := k; j <= n; j++ {
				a[i][j] -= m * a[k][j]
			}
		}
	}
	return a[Plus-1][n] / a[Plus-1][Plus-1]
}

func ExampleDataSheet_InVentedBox() {
	woofer := DataSheet{Re: 5.8, Fs: 40, Qms: 4, Qes: 0.42}.InVentedBox(38, 36, 40, 7) // litres
	db := 20 * math.Log10(cmplx.Abs(woofer.Acceleration(jw(40))))
	fmt.Printf("%.1f dB at 40 Hz\n", db) // 1/(1/(Qts·QL) + Vas/Vb), by hand, since fs = fb
	// Output: -3.1 dB at 40 Hz
}
