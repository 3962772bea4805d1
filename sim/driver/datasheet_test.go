package driver

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"
)

// Two invented woofers. Their motional branches below are derived by hand from Small (1972): Res = Re·Qms/Qes,
// Lces = Re/(2π·fs·Qes), Cmes = Qes/(2π·fs·Re).
var (
	wooferA = DataSheet{Re: 5.6, Le: 0.7e-3, Fs: 35, Qms: 3.5, Qes: 0.4}
	wooferB = DataSheet{Re: 6, Le: 0.5e-3, Fs: 40, Qms: 4, Qes: 0.5}
)

func TestMotionalBranch(t *testing.T) {
	const printed = 2e-5 // of five or six printed figures
	for _, tt := range []struct {
		name            string
		sheet           DataSheet
		res, lces, cmes float64
		peak            float64 // Ω at fs, Le left out: Re·(1 + Qms/Qes)
	}{
		{"A", wooferA, 49.000, 63.662e-3, 324.806e-6, 54.600},
		{"B", wooferB, 48.000, 47.7465e-3, 331.573e-6, 54.000},
	} {
		res, lces, cmes := tt.sheet.Motional()
		near(t, tt.name+" Res", res, tt.res, printed)
		near(t, tt.name+" Lces", lces, tt.lces, printed)
		near(t, tt.name+" Cmes", cmes, tt.cmes, printed)
		sheet := tt.sheet
		sheet.Le = 0
		// Exact but for rounding: the motional branch resonates at fs by construction.
		nearC(t, tt.name+" Z(fs)", sheet.Impedance(jw(sheet.Fs)), complex(tt.peak, 0), 1e-12)
	}
}

// Qs read back from the impedance curve as one reads them from a measured one: f1 and f2 are where |Z| = √r0·Re
// either side of fs, r0 = Zmax/Re; f1·f2 = fs², Qms = fs·√r0/(f2 - f1), Qes = Qms/(r0 - 1). Small (1972), from
// memory.
func TestQsFromTheCurve(t *testing.T) {
	sheet := wooferA
	sheet.Le = 0
	r0 := 1 + sheet.Qms/sheet.Qes
	level := math.Sqrt(r0) * sheet.Re
	find := func(lo, hi float64) float64 { // |Z| rises from lo to hi
		for range 100 {
			mid := (lo + hi) / 2
			if cmplx.Abs(sheet.Impedance(jw(mid))) < level {
				lo = mid
			} else {
				hi = mid
			}
		}
		return lo
	}
	f1, f2 := find(1, sheet.Fs), find(1000, sheet.Fs)
	// Rounding only: the relations are exact for this circuit.
	near(t, "f1·f2", f1*f2, sheet.Fs*sheet.Fs, 1e-10)
	near(t, "Qms", sheet.Fs*math.Sqrt(r0)/(f2-f1), sheet.Qms, 1e-10)
}

// The equivalent circuit and the formula are two writings of one thing: here the circuit is worked out branch
// by branch from its elements.
func TestElementsGiveTheImpedance(t *testing.T) {
	lossy := DataSheet{Re: 6.1, Le: 0.2e-3, LossR2: 20, LossL2: 1.6e-3, Fs: 48, Qms: 5, Qes: 0.6}
	for name, load := range map[string]Load{
		"woofer A":      wooferA,
		"lossy coil":    lossy,
		"no motion":     DataSheet{Re: 8, Le: 1e-3},
		"coil only":     DataSheet{Re: 8},
		"no inductance": DataSheet{Re: 6, Fs: 800, Qms: 2, Qes: 1},
		"resistance":    Resistance(8),
		"boxed":         lossy.InClosedBox(60, 20),
	} {
		for _, s := range []complex128{jw(5), jw(48), jw(1000), jw(2e4), complex(0.1, 0), complex(1e6, 0)} {
			// Every equivalent circuit here is a chain of groups of elements side by side.
			var z complex128
			node := Plus
			for done := false; !done; {
				var y complex128
				next := -1
				for _, e := range load.Elements() {
					if e.From != node {
						continue
					}
					next = e.To
					switch e.Kind {
					case Resistor:
						y += complex(1/e.Value, 0)
					case Inductor:
						y += 1 / (s * complex(e.Value, 0))
					case Capacitor:
						y += s * complex(e.Value, 0)
					}
				}
				if next < 0 {
					t.Fatalf("%s: the chain breaks off at node %d", name, node)
				}
				z += 1 / y
				node, done = next, next == Minus
			}
			nearC(t, name, load.Impedance(s), z, 1e-12) // rounding
		}
	}
}

func TestImpedanceLimits(t *testing.T) {
	// At DC the suspension shorts the motional branch and Re is left; far above all resonances, so does the
	// mass, and sLe is left to Re. By hand.
	nearC(t, "toward DC", wooferA.Impedance(complex(1e-9, 0)), 5.6, 1e-9)
	nearC(t, "at s = 0", wooferA.Impedance(0), 5.6, 0)
	nearC(t, "toward infinity", wooferA.Impedance(complex(1e12, 0)), complex(5.6+0.7e9, 0), 1e-9)
}

// Semi-inductor K·(jω)^n with K = 0.02, n = 0.7 (illustrative, derived): at 1 kHz 4.13812 + j8.12151 Ω, which
// is 20.0775 Ω in parallel with 1.62815 mH. The form is W. M. Leach Jr., J. Audio Eng. Soc. 50(6), 442–450,
// 2002.
func TestLossyCoil(t *testing.T) {
	d := DataSheet{Re: 1, LossR2: 20.0775, LossL2: 1.62815e-3}
	nearC(t, "Z(1 kHz) - Re", d.Impedance(jw(1000))-1, complex(4.13812, 8.12151), 1e-5) // six printed figures
}

// Closed boxes, derived from Small, "Closed-Box Loudspeaker Systems" (1972): fc = fs·√(1 + Vas/Vb), Qtc =
// Qts·√(1 + Vas/Vb).
func TestClosedBox(t *testing.T) {
	qts := func(d DataSheet) float64 { return d.Qms * d.Qes / (d.Qms + d.Qes) }
	sheet := func(fs, q float64) DataSheet { // any split of Qts does
		return DataSheet{Re: 6, Fs: fs, Qms: 5 * q, Qes: 1.25 * q}
	}
	for _, tt := range []struct{ fs, qts, vas, vb, fc, qtc, f3 float64 }{
		{35, 0.36, 60, 20, 70.000, 0.7200, 68.769},
		{25, 0.4, 100, 50, 43.301, 0.69282, 44.213},
	} {
		boxed := sheet(tt.fs, tt.qts).InClosedBox(tt.vas, tt.vb)
		near(t, "fc", boxed.Fs, tt.fc, 2e-5) // printed figures
		near(t, "Qtc", qts(boxed), tt.qtc, 1e-5)
		// Re(dB slope) there is some 6 dB an octave: half a unit of f3's last figure is 1e-4 dB.
		near(t, "level at f3", 20*math.Log10(cmplx.Abs(boxed.Acceleration(jw(tt.f3)))), -3.0103, 1e-4)
	}
	for _, tt := range []struct{ qtc, f3, peak, at float64 }{ // f3 and at over fc, peak in dB
		{0.5, 1.55377, 0, 0},
		{0.57735, 1.27202, 0, 0},
		{0.70711, 1.00000, 0, 0},
		{0.8, 0.89716, 0.2130, 2.1381},
		{1.0, 0.78615, 1.2494, 1.4142},
		{1.2, 0.73582, 2.4118, 1.2377},
		{1.5, 0.69935, 4.0334, 1.1339},
	} {
		d := sheet(100, tt.qtc)
		near(t, fmt.Sprintf("Qtc %g: level at f3", tt.qtc), 20*math.Log10(cmplx.Abs(d.Acceleration(jw(100*tt.f3)))), -3.0103, 1e-4)
		if tt.peak > 0 {
			near(t, fmt.Sprintf("Qtc %g: peak", tt.qtc), 20*math.Log10(cmplx.Abs(d.Acceleration(jw(100*tt.at)))), tt.peak, 3e-4) // printed to 1e-4 dB
		}
	}
}

// With no inductance the output is the second-order high-pass s²/(s² + s·ω0/Qts + ω0²), exactly (Small 1972).
func TestAccelerationIsAHighPass(t *testing.T) {
	d := wooferB
	d.Le = 0
	w0, q := 2*math.Pi*d.Fs, d.Qms*d.Qes/(d.Qms+d.Qes)
	near(t, "Qts", q, 0.44444, 2e-5)
	for _, f := range grid(1, 20e3, 30) {
		s := jw(f)
		nearC(t, fmt.Sprintf("%g Hz", f), d.Acceleration(s), s*s/(s*s+s*complex(w0/q, 0)+complex(w0*w0, 0)), 1e-12)
	}
}

func TestSensitivity(t *testing.T) {
	// By definition: 91 dB re 20 µPa for 2.83 V.
	want := complex(20e-6*math.Pow(10, 91.0/20), 0)
	nearC(t, "flat", NewFlat(91).Pressure(1234)*2.83, want, 1e-14)
	tweeter := NewSheet(DataSheet{Re: 5.4, Fs: 850, Qms: 3.1, Qes: 1.2}, 91)
	// A thousand times above resonance the high-pass is within (fs/f)/Qts of 1, in quadrature.
	nearC(t, "sheet, far above resonance", tweeter.Pressure(850e3)*2.83, want, 2e-3)
	nearC(t, "no resonance given", NewSheet(DataSheet{Re: 6}, 91).Pressure(50)*2.83, want, 1e-14)
}

func ExampleDataSheet() {
	woofer := DataSheet{Re: 5.6, Fs: 35, Qms: 3.5, Qes: 0.4}
	res, lces, cmes := woofer.Motional()
	fmt.Printf("%.1f ohm, %.1f mH, %.1f uF\n", res, lces*1e3, cmes*1e6)
	boxed := woofer.InClosedBox(60, 20)
	fmt.Printf("resonance in the box: %.0f Hz\n", boxed.Fs)
	// Output:
	// 49.0 ohm, 63.7 mH, 324.8 uF
	// resonance in the box: 70 Hz
}
