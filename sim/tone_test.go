package sim

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"sixdown/xover"
)

// stackValues are the parts of a bass–middle–treble network: Ω and F.
type stackValues struct{ R1, R2, R3, R4, C1, C2, C3 float64 }

// ownStack has values of our own.
func ownStack() stackValues {
	return stackValues{R1: 220e3, R2: 500e3, R3: 22e3, R4: 47e3, C1: 330e-12, C2: 47e-9, C3: 22e-9}
}

// design is the network with its knobs at t, m and l.
func (v stackValues) design(t, m, l float64) *xover.Design {
	return &xover.Design{
		Parts: []xover.Part{
			pot("P1", v.R1), pot("P2", v.R2), pot("P3", v.R3), resistor("R4", v.R4),
			capacitor("C1", v.C1, 0), capacitor("C2", v.C2, 0), capacitor("C3", v.C3, 0),
		},
		Tone: &xover.Tone{Network: []xover.Step{
			between(leaf("C1"), "amp", "top"),
			{Op: xover.Between, Expr: leaf("P1"), From: "bottom", To: "top", Wiper: "out"},
			between(leaf("R4"), "amp", "d"),
			between(leaf("C2"), "d", "bottom"),
			between(leaf("P2"), "bottom", "e"),
			{Op: xover.Between, Expr: leaf("P3"), From: "0", To: "e", Wiper: "w"},
			between(leaf("C3"), "d", "w"),
		}},
		Controls: []xover.Control{
			{Name: "treble", Part: "P1", At: t}, {Name: "middle", Part: "P3", At: m}, {Name: "bass", Part: "P2", At: l},
		},
	}
}

// gain is the same network in closed form: D. T. Yeh and J. O. Smith, Proc. DAFx-06, Montreal, 2006 (from
// memory; derived again from the arrangement by symbolic nodal analysis, the seven coefficients agree).
func (v stackValues) gain(s complex128, t, m, l float64) complex128 {
	R1, R2, R3, R4, C1, C2, C3 := v.R1, v.R2, v.R3, v.R4, v.C1, v.C2, v.C3
	b1 := t*C1*R1 + m*C3*R3 + l*(C1*R2+C2*R2) + (C1*R3 + C2*R3)
	b2 := t*(C1*C2*R1*R4+C1*C3*R1*R4) - m*m*(C1*C3*R3*R3+C2*C3*R3*R3) +
		m*(C1*C3*R1*R3+C1*C3*R3*R3+C2*C3*R3*R3) + l*(C1*C2*R1*R2+C1*C2*R2*R4+C1*C3*R2*R4) +
		l*m*(C1*C3*R2*R3+C2*C3*R2*R3) + (C1*C2*R1*R3 + C1*C2*R3*R4 + C1*C3*R3*R4)
	b3 := l*m*(C1*C2*C3*R1*R2*R3+C1*C2*C3*R2*R3*R4) - m*m*(C1*C2*C3*R1*R3*R3+C1*C2*C3*R3*R3*R4) +
		m*(C1*C2*C3*R1*R3*R3+C1*C2*C3*R3*R3*R4) + t*C1*C2*C3*R1*R3*R4 - t*m*C1*C2*C3*R1*R3*R4 + t*l*C1*C2*C3*R1*R2*R4
	a1 := (C1*R1 + C1*R3 + C2*R3 + C2*R4 + C3*R4) + m*C3*R3 + l*(C1*R2+C2*R2)
	a2 := m*(C1*C3*R1*R3-C2*C3*R3*R4+C1*C3*R3*R3+C2*C3*R3*R3) + l*m*(C1*C3*R2*R3+C2*C3*R2*R3) -
		m*m*(C1*C3*R3*R3+C2*C3*R3*R3) + l*(C1*C2*R2*R4+C1*C2*R1*R2+C1*C3*R2*R4+C2*C3*R2*R4) +
		(C1*C2*R1*R4 + C1*C3*R1*R4 + C1*C2*R3*R4 + C1*C2*R1*R3 + C1*C3*R3*R4 + C2*C3*R3*R4)
	a3 := l*m*(C1*C2*C3*R1*R2*R3+C1*C2*C3*R2*R3*R4) - m*m*(C1*C2*C3*R1*R3*R3+C1*C2*C3*R3*R3*R4) +
		m*(C1*C2*C3*R3*R3*R4+C1*C2*C3*R1*R3*R3-C1*C2*C3*R1*R3*R4) + l*C1*C2*C3*R1*R2*R4 + C1*C2*C3*R1*R3*R4
	c := func(x float64) complex128 { return complex(x, 0) }
	return s * (c(b1) + s*(c(b2)+s*c(b3))) / (1 + s*(c(a1)+s*(c(a2)+s*c(a3))))
}

func TestToneStack(t *testing.T) {
	for _, knobs := range [][3]float64{
		{0.5, 0.5, 0.5}, {0.1, 0.9, 0.3}, {1, 1, 1}, {0, 0.5, 1}, {1, 0.2, 0.05}, {0, 0, 1}, {0.7, 0, 0.4}, {0.4, 1, 0}, {1, 0.5, 0},
	} {
		s := mustNew(t, ownStack().design(knobs[0], knobs[1], knobs[2]))
		for _, f := range []float64{10, 80, 400, 1500, 6000, 40e3} {
			// The closed form subtracts, so it loses a few digits itself.
			nearC(t, fmt.Sprintf("knobs at %g, %g Hz", knobs, f), mustPredict(t, s, f).Ways[0].H[0],
				ownStack().gain(complex(0, 2*math.Pi*f), knobs[0], knobs[1], knobs[2]), 1e-11)
		}
	}
}

// A hundred networks of values and settings by lot, from 20 Hz to 20 kHz.
func TestToneStackOfAnyValues(t *testing.T) {
	random := rand.New(rand.NewPCG(2006, 9))
	about := func(value, decades float64) float64 {
		return value * math.Pow(10, decades*(2*random.Float64()-1))
	}
	for range 100 {
		v := stackValues{
			R1: about(220e3, 1), R2: about(500e3, 1), R3: about(22e3, 1), R4: about(47e3, 1),
			C1: about(330e-12, 1), C2: about(47e-9, 1), C3: about(22e-9, 1),
		}
		knobs := [3]float64{random.Float64(), random.Float64(), random.Float64()}
		s := mustNew(t, v.design(knobs[0], knobs[1], knobs[2]))
		for k := range 31 {
			f := 20 * math.Pow(1000, float64(k)/30)
			// The coefficients have terms of both signs, which costs them a few of their sixteen digits.
			nearC(t, fmt.Sprintf("%+v, knobs at %g, %g Hz", v, knobs, f), mustPredict(t, s, f).Ways[0].H[0],
				v.gain(complex(0, 2*math.Pi*f), knobs[0], knobs[1], knobs[2]), 1e-10)
		}
	}
}

// bass is a passive bass control: R1 to a potentiometer with C1 above and C2 below its wiper, R2 to the return.
func bass(p xover.Part, at float64) *xover.Design {
	return &xover.Design{
		Parts: []xover.Part{resistor("R1", 100e3), p, resistor("R2", 10e3), capacitor("C1", 2.2e-9, 0), capacitor("C2", 22e-9, 0)},
		Tone: &xover.Tone{Network: []xover.Step{
			series(leaf("R1")), mark("top"),
			{Op: xover.Between, Expr: leaf("P1"), From: "bottom", To: "top", Wiper: "out"},
			between(leaf("C1"), "top", "out"), between(leaf("C2"), "out", "bottom"), between(leaf("R2"), "bottom", "0"),
		}},
		Controls: []xover.Control{{Name: "bass", Part: "P1", At: at}},
	}
}

// The arrangement is E. J. James's, "Simple Tone Control Circuit", Wireless World, Feb. 1949 (from memory); the
// levels are derived from the divider for R1 100k, track 1M, R2 10k, C1 2.2 nF, C2 22 nF, unloaded, and printed
// to 0.001 dB.
func TestBassControl(t *testing.T) {
	logPot := pot("P1", 1e6)
	logPot.Taper = xover.Log
	for _, tt := range []struct {
		name string
		pot  xover.Part
		at   float64
		want map[float64]float64 // dB by Hz
	}{
		{"flat, where R2/(R1 + R2) of the track is below the wiper", pot("P1", 1e6), 1.0 / 11, map[float64]float64{20: -20.828, 100: -20.828, 1000: -20.828, 10e3: -20.828}},
		{"full boost", pot("P1", 1e6), 1, map[float64]float64{20: -1.131, 100: -5.328, 1000: -18.993, 0.001: -0.820}},
		{"full cut", pot("P1", 1e6), 0, map[float64]float64{20: -40.590, 100: -36.347, 1000: -22.660, 0.001: -40.906}},
		{"half turn of a linear track", pot("P1", 1e6), 0.5, map[float64]float64{20: -8.873}},
		{"half turn of a logarithmic track", logPot, 0.5, map[float64]float64{20: -20.131}},
	} {
		s := mustNew(t, bass(tt.pot, tt.at))
		for f, want := range tt.want {
			near(t, fmt.Sprintf("%s, %g Hz", tt.name, f), DB(mustPredict(t, s, f).Ways[0].H[0]), want, 6e-4)
		}
	}
}

// A potentiometer with two ends in use is a variable resistance, its value times the fraction; it stands half
// way if no control names it.
func TestVariableResistance(t *testing.T) {
	d := &xover.Design{
		Parts: []xover.Part{pot("P1", 30e3), resistor("R1", 10e3)},
		Tone:  &xover.Tone{Source: 5e3, Load: 20e3, Network: []xover.Step{series(leaf("P1")), mark("out"), shunt(leaf("R1"))}},
	}
	s := mustNew(t, d)
	r := mustPredict(t, s, 1000)
	shunted := 1 / (1/10e3 + 1/20e3)
	nearC(t, "half way", r.Ways[0].H[0], complex(shunted/(shunted+15e3+5e3), 0), 1e-13)
	if r.Ways[0].Name != "out" || r.Sum != nil {
		t.Errorf("the output is called %q, its sum is %v; want out, and none", r.Ways[0].Name, r.Sum)
	}
	d.Controls = []xover.Control{{Name: "level", Part: "P1", At: 0}}
	nearC(t, "turned to nothing", mustPredict(t, mustNew(t, d), 1000).Ways[0].H[0], complex(shunted/(shunted+5e3), 0), 1e-13)
}

func TestToneSummary(t *testing.T) {
	d := bass(pot("P1", 1e6), 1)
	s, err := mustNew(t, d).Summary([2]float64{100, 1000})
	if err != nil {
		t.Fatal(err)
	}
	if n := len(s.Tone.Freqs); n != 11 {
		t.Fatalf("%d third-octaves from 100 Hz to 1 kHz, want 11", n)
	}
	near(t, "first", s.Tone.Freqs[0], 100, 1e-10)
	near(t, "gain at 100 Hz", s.Tone.GainDB[0], -5.328, 6e-4)
	near(t, "gain at 1 kHz", s.Tone.GainDB[10], -18.993, 6e-4)
	// No source resistance and no load: straight through is 0 dB.
	near(t, "insertion loss at 1 kHz", s.Tone.InsertionLossDB[10], 18.993, 6e-4)
	d.Tone.Source, d.Tone.Load = 10e3, 10e3
	if s, err = mustNew(t, d).Summary([2]float64{100, 1000}); err != nil {
		t.Fatal(err)
	}
	// Straight through, half the voltage is left.
	near(t, "insertion loss, loaded", s.Tone.InsertionLossDB[10]+s.Tone.GainDB[10], -20*math.Log10(2), 1e-12)
	// The nominal 20 Hz and 20 kHz hold the exact 19.95 Hz and 19.95 kHz (IEC 61260-1): 31 bands.
	if s, err = mustNew(t, d).Summary([2]float64{}); err != nil || len(s.Tone.Freqs) != 31 {
		t.Errorf("%d third-octaves from 20 Hz to 20 kHz, want 31; error %v", len(s.Tone.Freqs), err)
	}
}
