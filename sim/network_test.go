package sim

import (
	"fmt"
	"math"
	"testing"

	"sixdown/sim/circuit"
	"sixdown/xover"
)

// A first-order series crossover: woofer with a capacitor across it, in series with a tweeter with a coil
// across it. With L/C = R² each way has the gain of the parallel first-order crossover and the amplifier sees R
// at every frequency: by hand, woofer and tweeter sections are R/(1 + x) and Rx/(1 + x), x = s/ω0, which add up
// to R.
func TestSeriesCrossover(t *testing.T) {
	const load, fc = 8.0, 1800.0
	w := 2 * math.Pi * fc
	s := mustNew(t, &xover.Design{
		Parts:   []xover.Part{capacitor("C1", 1/(load*w), 0), coil("L1", load/w, 0)},
		Drivers: []xover.Driver{plainDriver("woofer", load, 90), plainDriver("tweeter", load, 90)},
		Ways: []xover.Way{
			{Name: "low", Driver: "woofer", Network: []xover.Step{between(leaf("C1"), "amp", "mid"), {Op: xover.DriverPlace, From: "amp", To: "mid"}}},
			{Name: "high", Driver: "tweeter", Network: []xover.Step{between(leaf("L1"), "low.mid", "0"), {Op: xover.DriverPlace, From: "low.mid", To: "0"}}},
		},
	})
	for _, x := range []float64{0.01, 0.3, 1, 3, 100} {
		r := mustPredict(t, s, x*fc)
		jx := complex(0, x)
		what := fmt.Sprintf("at %g fc: ", x)
		nearC(t, what+"low", r.Ways[0].H[0], 1/(1+jx), 1e-12)
		nearC(t, what+"high", r.Ways[1].H[0], jx/(1+jx), 1e-12)
		nearC(t, what+"Zin", r.Zin[0], load, 1e-12)
	}
}

// Two coils in series that aid each other make L1 + L2 + 2·k·√(L1·L2); that they do so when the currents flow
// the way the steps are written is what the sign of k means.
func TestCoupledCoils(t *testing.T) {
	const l1, l2, k = 1e-3, 4e-3, 0.25
	for _, tt := range []struct {
		k    float64
		back bool // L2 is written from the far end to the near one
		want float64
	}{{k, false, 6e-3}, {-k, false, 4e-3}, {k, true, 4e-3}} {
		second := between(leaf("L2"), "a", "b")
		if tt.back {
			second = between(leaf("L2"), "b", "a")
		}
		s := mustNew(t, &xover.Design{
			Parts:   []xover.Part{coil("L1", l1, 0), coil("L2", l2, 0)},
			Drivers: []xover.Driver{plainDriver("woofer", 8, 90)},
			Ways: []xover.Way{{Name: "low", Driver: "woofer", Network: []xover.Step{
				series(leaf("L1")), mark("a"), second, {Op: xover.Couple, A: "L1", B: "L2", K: tt.k}, {Op: xover.DriverPlace, From: "b", To: "0"},
			}}},
		})
		nearC(t, fmt.Sprintf("%+v", tt), mustPredict(t, s, 1000).Zin[0], complex(8, 2*math.Pi*1000*tt.want), 1e-12)
	}
}

// The other road to the same numbers: the state equations, in which each driver is its equivalent circuit, know
// nothing of the elimination or of Impedance.
func TestStateSpaceAgrees(t *testing.T) {
	d := benchDesign()
	d.Drivers[0].LossR2, d.Drivers[0].LossL2 = 25, 1.5e-3
	s := mustNew(t, d)
	ss, err := circuit.NewStateSpace(s.Netlist(), s.Outputs())
	if err != nil {
		t.Fatal(err)
	}
	h := make([]complex128, len(s.Names()))
	for _, f := range []float64{10, 33, 110, 800, 3000, 20e3} {
		r := mustPredict(t, s, f)
		ss.Response(h, complex(0, 2*math.Pi*f))
		for i, w := range r.Ways {
			nearC(t, fmt.Sprintf("%s at %g Hz", w.Name, f), h[i], w.H[0], 1e-9) // the promised agreement of the two
		}
	}
}

// What the reader of design files makes of a file is what the tests put together in code.
func TestFromTheDesignFile(t *testing.T) {
	const file = `
title = "Pier"
[drive]
level = "5 V"
source = "0.1 ohm"
[listen]
distance = "2 m"
height = "100 mm"
[parts]
L1 = { value = "1.5 mH", dcr = "0.4 ohm" }
C1 = "10 uF"
C2 = { value = "6.8 uF", esr = "20 mohm" }
P1 = { value = "20 ohm", taper = "log", mid = 0.2 }
[driver.woofer]
re = "5.6 ohm"
fs = "35 Hz"
qms = 3.5
qes = 0.4
vas = "60 l"
sensitivity = "88 dB"
box = { kind = "closed", volume = "20 l" }
at = ["0 mm", "-90 mm", "-22 mm"]
[driver.tweeter]
impedance = "6 ohm"
sensitivity = "91 dB"
at = ["0 mm", "60 mm", "0 mm"]
[control.treble]
part = "P1"
at = 0.3
[[way]]
name = "low"
driver = "woofer"
network = ["series L1", "mark a", "shunt C1"]
[[way]]
name = "high"
driver = "tweeter"
polarity = "reversed"
network = ["series C2", "mark b", "P1 from b to 0 wiper c", "driver from c to 0"]
`
	parsed, _, err := xover.Parse("pier.toml", []byte(file))
	if err != nil {
		t.Fatal(err)
	}
	p := pot("P1", 20)
	p.Taper, p.Mid = xover.Log, 0.2
	built := &xover.Design{
		Title:  "Pier",
		Drive:  xover.Drive{Level: 5, Source: 0.1},
		Listen: xover.Listen{Distance: 2, Height: 0.1},
		Parts:  []xover.Part{coil("L1", 1.5e-3, 0.4), capacitor("C1", 10e-6, 0), capacitor("C2", 6.8e-6, 0.02), p},
		Drivers: []xover.Driver{
			{Name: "woofer", Re: 5.6, Fs: 35, Qms: 3.5, Qes: 0.4, Vas: 0.06, Sensitivity: 88, HasSensitivity: true,
				Box: xover.Box{Kind: xover.ClosedBox, Volume: 0.02}, At: [3]float64{0, -0.09, -0.022}},
			{Name: "tweeter", Resistance: 6, Sensitivity: 91, HasSensitivity: true, At: [3]float64{0, 0.06, 0}},
		},
		Ways: []xover.Way{
			{Name: "low", Driver: "woofer", Network: []xover.Step{series(leaf("L1")), mark("a"), shunt(leaf("C1"))}},
			{Name: "high", Driver: "tweeter", Reversed: true, Network: []xover.Step{series(leaf("C2")), mark("b"),
				{Op: xover.Between, Expr: leaf("P1"), From: "b", To: "0", Wiper: "c"}, {Op: xover.DriverPlace, From: "c", To: "0"}}},
		},
		Controls: []xover.Control{{Name: "treble", Part: "P1", At: 0.3}},
	}
	got, want := mustNew(t, parsed), mustNew(t, built)
	if got.Title() != "Pier" || got.Level() != 5 {
		t.Errorf("title %q and level %g V, want Pier and 5 V", got.Title(), got.Level())
	}
	for _, f := range []float64{30, 100, 1000, 2500, 12e3} {
		a, b := mustPredict(t, got, f), mustPredict(t, want, f)
		for i := range a.Ways {
			nearC(t, fmt.Sprintf("%s at %g Hz", a.Ways[i].Name, f), a.Ways[i].P[0], b.Ways[i].P[0], 1e-13)
		}
		nearC(t, fmt.Sprintf("Zin at %g Hz", f), a.Zin[0], b.Zin[0], 1e-13)
	}
	// The compiled circuit that others use has the same outputs.
	pt, err := got.Circuit().At(complex(0, 2*math.Pi*1000))
	if err != nil {
		t.Fatal(err)
	}
	nearC(t, "circuit at 1 kHz", pt.Gain[1], mustPredict(t, got, 1000).Ways[1].H[0], 1e-12)
}
