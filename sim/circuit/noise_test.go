package circuit

import (
	"math"
	"testing"
)

// A resistance R has 4kTR, by Nyquist; k is the SI's. 1 kΩ at 300 K: 1.6568e-17 V²/Hz, 4.07 nV/√Hz.
func TestNoiseOfAResistor(t *testing.T) {
	n := &Netlist{Nodes: 2, Source: 1e3}
	got, err := Noise(n, Output{Amp, Return}, []float64{20, 1e3, 20e3}, 300)
	if err != nil {
		t.Fatal(err)
	}
	for _, d := range got {
		if math.Abs(d/(4*1.380649e-23*300*1e3)-1) > 1e-12 || math.Abs(d-1.6568e-17) > 1e-21 {
			t.Errorf("got %g V²/Hz", d)
		}
	}
	// Two in parallel, the source's and a load: that of 500 Ω.
	n.Branches = []Branch{{Name: "load", From: Amp, To: Return, Value: 1e3}}
	if got, err = Noise(n, Output{Amp, Return}, []float64{1e3}, 300); err != nil || math.Abs(got[0]/(4*1.380649e-23*300*500)-1) > 1e-12 {
		t.Errorf("parallel: %g, %v", got[0], err)
	}
}

// A capacitor across any resistance has kT/C in all: the integral of 4kTR/(1 + (2πfRC)²) over all frequencies.
func TestNoiseOfACapacitorIsKTOverC(t *testing.T) {
	const c, kelvin = 1e-9, 293.15
	n := &Netlist{Nodes: 2, Source: 47e3, Branches: []Branch{{Name: "C", Kind: Capacitor, From: Amp, To: Return, Value: c}}}
	var freqs []float64
	const steps = 4000
	for i := range steps + 1 {
		freqs = append(freqs, 1e-3*math.Pow(1e15, float64(i)/steps))
	}
	d, err := Noise(n, Output{Amp, Return}, freqs, kelvin)
	if err != nil {
		t.Fatal(err)
	}
	sum := d[0] * freqs[0]
	for i := range steps {
		sum += (d[i] + d[i+1]) / 2 * (freqs[i+1] - freqs[i])
	}
	if want := 1.380649e-23 * kelvin / c; math.Abs(sum/want-1) > 1e-4 { // trapezia over 1/115 decade
		t.Errorf("got %g V², want %g", sum, want)
	}
}

// A coil's loss, a shorted resistor and an inverting amplifier by hand: R1 behind rs into 0 V and R2 back give
// 4kT·(rs + R1)·(R2/(rs + R1))² + 4kT·R2.
func TestNoiseByHand(t *testing.T) {
	const kelvin, k4 = 300.0, 4 * 1.380649e-23 * 300
	coil := &Netlist{Nodes: 3, Source: 0, Branches: []Branch{
		{Name: "L", Kind: Inductor, From: Amp, To: 2, Value: 0.1, Loss: 150}, {Name: "R", From: 2, To: Return, Value: 1e3}, {Name: "S", From: 2, To: Return, Value: 1e3},
	}}
	got, err := Noise(coil, Output{2, Return}, []float64{1e3}, kelvin)
	if err != nil {
		t.Fatal(err)
	}
	wl := 2 * math.Pi * 1e3 * 0.1
	g1, b1 := 150/(150*150+wl*wl), -wl/(150*150+wl*wl) // of the coil; Re Y of all over |Y|²
	g := g1 + 2e-3
	if want := k4 * g / (g*g + b1*b1); math.Abs(got[0]/want-1) > 1e-12 {
		t.Errorf("a coil and two resistors: %g, want %g", got[0], want)
	}
	amplifier := &Netlist{Nodes: 4, Source: 600, Branches: []Branch{
		{Name: "R1", From: Amp, To: 2, Value: 10e3}, {Name: "R2", From: 2, To: 3, Value: 47e3}, {Name: "load", From: 3, To: Return, Value: 1e3},
		{Name: "short", From: Amp, To: Amp, Value: 0},
	}, Amplifiers: []Amplifier{{Name: "A1", Plus: Return, Minus: 2, Out: 3}}}
	if got, err = Noise(amplifier, Output{3, Return}, []float64{50, 5e3}, kelvin); err != nil {
		t.Fatal(err)
	}
	gain := 47e3 / 10.6e3
	for _, d := range got {
		if want := k4 * (10.6e3*gain*gain + 47e3); math.Abs(d/want-1) > 1e-12 {
			t.Errorf("amplifier: %g, want %g", d, want)
		}
	}
	if _, err := Noise(amplifier, Output{3, Return}, []float64{-1}, kelvin); err == nil {
		t.Error("a negative frequency has noise")
	}
	if _, err := Noise(amplifier, Output{3, Return}, []float64{1}, math.NaN()); err == nil {
		t.Error("no temperature has noise")
	}
}

// Coupled coils without loss between a source's resistance and a load make no noise of their own: of an ideal transformer by K near 1
// only the transfer counts, and reciprocity says that the density at the output is 4kT·Re Z there.
func TestNoiseIsThatOfTheOutputsImpedance(t *testing.T) {
	n := &Netlist{Nodes: 4, Source: 100, Branches: []Branch{
		{Name: "L1", Kind: Inductor, From: Amp, To: Return, Value: 0.2}, {Name: "L2", Kind: Inductor, From: 2, To: Return, Value: 0.8},
		{Name: "C", Kind: Capacitor, From: 2, To: 3, Value: 1e-6, Loss: 20}, {Name: "R", From: 3, To: Return, Value: 2e3},
	}, Couplings: []Coupling{{0, 1, 0.9}}}
	for _, f := range []float64{30, 1000, 9000} {
		got, err := Noise(n, Output{3, Return}, []float64{f}, 300)
		if err != nil {
			t.Fatal(err)
		}
		// Z at the output by hand: back through the capacitor into the secondary, with the primary closed by the source.
		s := complex(0, 2*math.Pi*f)
		m := complex(0.9*math.Sqrt(0.2*0.8), 0)
		secondary := s*0.8 - s*s*m*m/(s*0.2+100)
		branch := secondary + 20 + 1/(s*1e-6)
		z := branch * 2e3 / (branch + 2e3)
		if want := 4 * 1.380649e-23 * 300 * real(z); math.Abs(got[0]/want-1) > 1e-9 {
			t.Errorf("%g Hz: %g, want %g", f, got[0], want)
		}
	}
}
