package ladder

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"
)

// A driver by its data sheet: R. H. Small, "Direct-Radiator Loudspeaker System Analysis", JAES 20(5), 1972 (from memory):
// Res = Re·Qms/Qes, Cmes = Qes/(2π·fs·Re), Lces = Re/(2π·fs·Qes), in parallel.
type driver struct{ re, le, fs, qms, qes float64 }

// Invented drivers; their equivalent elements are derived from the formulas above.
var (
	driverA   = driver{5.6, 0.7e-3, 35, 3.5, 0.4}
	driverB   = driver{6, 0.5e-3, 40, 4, 0.5}
	driverTop = driver{3.2, 0.05e-3, 1000, 2, 1}
)

// impedance is written out anew here, so that the code's own equivalent circuit is not its judge.
func (d driver) impedance(f float64) complex128 {
	x := f/d.fs - d.fs/f
	return complex(d.re, 2*math.Pi*f*d.le) + complex(d.re*d.qms/d.qes, 0)/complex(1, d.qms*x)
}

// across returns the impedance of the networks and the load side by side.
func across(load complex128, f float64, networks ...Network) complex128 {
	y := 1 / load
	for _, n := range networks {
		for _, e := range n {
			y += 1 / impedance(e.Expr, complex(0, 2*math.Pi*f))
		}
	}
	return 1 / y
}

func TestConjugateValues(t *testing.T) {
	for _, test := range []struct {
		name    string
		d       driver
		r, l, c float64 // Ω, mH, µF of the resonance's network
		coil    float64 // µF of the voice coil's
	}{
		{"A", driverA, 6.2400, 10.1859, 2030.04, 22.3214},
		{"B", driverB, 6.7500, 11.9366, 1326.29, 13.8889},
	} {
		d := test.d
		n, err := Resonance(d.re, d.fs, d.qms, d.qes)
		if err != nil {
			t.Fatal(err)
		}
		// Resistance in two parts, Re and Re²/Res: one resistor of the sum does.
		steps, parts := n.Steps(new(Namer))
		if fmt.Sprint(steps) != "[shunt R1 + L1 + C1]" {
			t.Errorf("%s: the resonance's network is %v", test.name, steps)
			continue
		}
		checkRow(t, test.name, []float64{parts[0].Value, parts[1].Value * 1e3}, []float64{test.r, test.l}, 0.5e-4)
		checkRow(t, test.name, []float64{parts[2].Value * 1e6}, []float64{test.c}, 0.5e-2)

		n, err = VoiceCoil(d.re, d.le)
		if err != nil {
			t.Fatal(err)
		}
		steps, parts = n.Steps(new(Namer))
		if fmt.Sprint(steps) != "[shunt R1 + C1]" || parts[0].Value != d.re {
			t.Errorf("%s: the voice coil's network is %v, %v", test.name, steps, parts)
			continue
		}
		checkRow(t, test.name, []float64{parts[1].Value * 1e6}, []float64{test.coil}, 0.5e-4)
	}
}

// Each network makes what it is made for into Re, at every frequency. Rounding only.
func TestConjugateIsExact(t *testing.T) {
	for _, d := range []driver{driverA, driverB, driverTop} {
		coilOnly, coneOnly := d, d
		coneOnly.le = 0
		coil, err := VoiceCoil(d.re, d.le)
		if err != nil {
			t.Fatal(err)
		}
		resonance, err := Resonance(d.re, d.fs, d.qms, d.qes)
		if err != nil {
			t.Fatal(err)
		}
		dual, err := Dual(d.re, d.le, d.fs, d.qms, d.qes)
		if err != nil {
			t.Fatal(err)
		}
		for _, f := range around(d.fs) {
			re := complex(d.re, 0)
			z := across(complex(coilOnly.re, 2*math.Pi*f*d.le), f, coil)
			if cmplx.Abs(z-re) > 1e-14*d.re {
				t.Errorf("%+v: with its coil compensated it is %v at %g Hz", d, z, f)
			}
			z = across(coneOnly.impedance(f), f, resonance)
			if cmplx.Abs(z-re) > 1e-13*d.re { // the rounding of f/fs - fs/f, by Q
				t.Errorf("%+v: with its resonance compensated it is %v at %g Hz", d, z, f)
			}
			z = across(d.impedance(f), f, dual)
			if cmplx.Abs(z-re) > 1e-13*d.re {
				t.Errorf("%+v: with both compensated it is %v at %g Hz", d, z, f)
			}
		}
		steps, _ := dual.Steps(new(Namer))
		if want := "[shunt R1 + C1 | (R2 + L1 + C2)]"; fmt.Sprint(steps) != want {
			t.Errorf("the dual is %v, want %s", steps, want)
		}
	}
}

// Two networks side by side each compensate what the other has done already; the impedance strays. Derived; half a
// unit of the last figure, and as much again for the grid.
func TestSeparateNetworksStray(t *testing.T) {
	for _, test := range []struct {
		d           driver
		least, most float64 // Ω
	}{
		{driverA, 4.963, 5.624},
		{driverB, 5.553, 6.023},
		{driverTop, 2.715, 3.262},
	} {
		d := test.d
		coil, err := VoiceCoil(d.re, d.le)
		if err != nil {
			t.Fatal(err)
		}
		resonance, err := Resonance(d.re, d.fs, d.qms, d.qes)
		if err != nil {
			t.Fatal(err)
		}
		least, most := math.Inf(1), 0.0
		for i := range 20001 {
			f := 1 * math.Pow(10, float64(i)/4000)
			z := cmplx.Abs(across(d.impedance(f), f, coil, resonance))
			least, most = min(least, z), max(most, z)
		}
		if math.Abs(least-test.least) > 1e-3 || math.Abs(most-test.most) > 1e-3 {
			t.Errorf("%+v: it spans %.4f to %.4f Ω, want %.3f to %.3f", d, least, most, test.least, test.most)
		}
	}
}

// Any excess impedance at all, here a coil with eddy currents and a resonance with a vent's.
func TestConjugateOfAnything(t *testing.T) {
	excess := Chain(L(0.2e-3), Beside(L(0.5e-3), R(12)), Beside(R(40), L(20e-3), C(300e-6), Chain(L(30e-3), C(500e-6), R(2))))
	n, err := Conjugate(5.5, excess)
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range around(300) {
		z := across(5.5+impedance(excess, complex(0, 2*math.Pi*f)), f, n)
		if cmplx.Abs(z-5.5) > 1e-13*5.5 {
			t.Errorf("at %g Hz it is %v, want 5.5 Ω", f, z)
		}
	}
}

func TestConditioningRefuses(t *testing.T) {
	deep := R(1)
	for range 100 {
		deep = Chain(deep)
	}
	for _, test := range []struct {
		call func() (Network, error)
		want string
	}{
		{func() (Network, error) { return VoiceCoil(0, 1e-3) }, "voice coil: Re is 0 Ω; give a positive number"},
		{func() (Network, error) { return VoiceCoil(6, -1e-3) }, "voice coil: Le is -0.001 H; give a positive number"},
		{func() (Network, error) { return Resonance(6, 40, math.NaN(), 0.5) }, "resonance: Qms is NaN; give a positive number"},
		{func() (Network, error) { return Resonance(6, 0, 4, 0.5) }, "resonance: fs is 0 Hz; give a positive number"},
		{func() (Network, error) { return Dual(6, 0, 40, 4, 0.5) }, "dual: Le is 0 H; give a positive number"},
		{func() (Network, error) { return Dual(6, 1e-3, 40, 4, math.Inf(1)) }, "dual: Qes is +Inf; give a positive number"},
		{func() (Network, error) { return Conjugate(math.NaN(), L(1)) }, "conjugate: Re is NaN Ω; give a positive number"},
		{func() (Network, error) { return Conjugate(6, C(0)) }, "conjugate: a C is 0 F; give a positive number"},
		{func() (Network, error) { return Conjugate(6, Chain()) }, "conjugate: a joint holds nothing; put parts into it"},
		{func() (Network, error) { return Conjugate(6, deep) }, "conjugate: the excess is nested over 64 deep; write it flatter"},
		{func() (Network, error) { return Conjugate(6, Expr{Part: Part{Kind: 7, Value: 1}}) },
			"conjugate: a part is neither resistor, inductor nor capacitor; make it one"},
		{func() (Network, error) { return Conjugate(6, Expr{Op: 7, Args: []Expr{R(1), R(1)}}) },
			"conjugate: a joint is neither series nor parallel; make it one"},
		{func() (Network, error) { return Trap(8, 0, 1, 6) }, "trap: frequency is 0 Hz; give a positive number"},
		{func() (Network, error) { return Trap(8, 4000, -1, 6) }, "trap: Q is -1; give a positive number"},
		{func() (Network, error) { return Trap(8, 4000, 1, 0) }, "trap: depth is 0 dB; give 0.001 to 60 dB"},
		{func() (Network, error) { return BaffleStep(-8, 500, 6) }, "baffle step: load is -8 Ω; give a positive number"},
		{func() (Network, error) { return BaffleStep(8, 500, math.NaN()) }, "baffle step: height is NaN dB; give 0.001 to 60 dB"},
	} {
		n, err := test.call()
		if n != nil || err == nil || err.Error() != test.want {
			t.Errorf("error is %v, want %s", err, test.want)
		}
	}
}

// The values: 5.6 Ω as it is, 0.7 mH/5.6² = 22.3 µF.
func ExampleVoiceCoil() {
	n, err := VoiceCoil(5.6, 0.7e-3)
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
	// shunt R1 + C1
	// R1 = 5.6
	// C1 = 2.23e-05
}
