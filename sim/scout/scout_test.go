package scout

import (
	"context"
	"math"
	"reflect"
	"strings"
	"testing"

	"sixdown/sim"
	"sixdown/sim/tune"
	"sixdown/xover"
)

// pier is an invented two-way whose drivers leave little room: its tweeter resonates at 1.1 kHz, and the two are 150 mm apart.
const pier = `
[drive]
rated_power = "50 W"
rated_load = "8 ohm"
[listen]
distance = "2 m"
[parts]
C99 = "10 uF"
[driver.woofer]
re = "5.8 ohm"
le = "0.5 mH"
diameter = "130 mm"
sensitivity = "87 dB"
at = ["0 mm", "-90 mm", "-20 mm"]
[driver.tweeter]
re = "5.4 ohm"
fs = "1.1 kHz"
qms = 3
qes = 1.2
sensitivity = "90 dB"
diameter = "26 mm"
xmax = "0.5 mm"
at = ["0 mm", "60 mm", "0 mm"]
[[way]]
name = "low"
driver = "woofer"
network = []
[[way]]
name = "high"
driver = "tweeter"
network = ["series C99"]
`

func design(t *testing.T, text string) *xover.Design {
	t.Helper()
	d, _, err := xover.Parse("pier.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return d
}

// The rules by hand: 2, 2.5 and 3 times 1.1 kHz; 343 m/s over 130 mm and over 150 mm.
func TestSpan(t *testing.T) {
	d := design(t, pier)
	for _, c := range []struct {
		order     int
		low, high float64
	}{{1, 4400, 343 / 0.15}, {2, 3300, 343 / 0.15}, {3, 2750, 343 / 0.15}, {4, 2200, 343 / 0.15}} {
		r := span(d, d.Ways, 0, c.order)
		if math.Abs(r.low-c.low) > 1e-9 || math.Abs(r.high-c.high) > 1e-9 {
			t.Errorf("order %d: %g to %g Hz, want %g to %g", c.order, r.low, r.high, c.low, c.high)
		}
	}
	r := span(d, d.Ways, 0, 4)
	if all := strings.Join(r.reasons, "\n"); !strings.Contains(all, "above 2.20 kHz: 2 times the resonance of tweeter") || !strings.Contains(all, "woofer and tweeter are a wavelength apart") {
		t.Errorf("reasons: %s", all)
	}
}

// The same on one core and two, within the limits, sized and tuned, and no find of the frontier is beaten by any other.
func TestScout(t *testing.T) {
	d := design(t, pier)
	run := func(workers int) *Report {
		r, err := Scout(context.Background(), d, nil, Settings{Starts: 1, Workers: workers})
		if err != nil {
			t.Fatal(err)
		}
		return r
	}
	one := run(1)
	if !testing.Short() {
		if two := run(2); !reflect.DeepEqual(one, two) {
			t.Error("two goroutines find something else than one")
		}
	}
	if one.Tuned < 10 || len(one.Finds) == 0 {
		t.Fatalf("%d tuned, %d found", one.Tuned, len(one.Finds))
	}
	frontier := 0
	for i := range one.Finds {
		a := &one.Finds[i]
		if a.Points[0] < 2200 || a.Points[0] > 343/0.15+50 { // rounded to two figures
			t.Errorf("%s crosses at %g Hz", a.Name, a.Points[0])
		}
		if a.Score.MinImpedance < 0.999*LeastLoad || a.ExcursionMM > 0.5 {
			t.Errorf("%s: %g ohm, %g mm", a.Name, a.Score.MinImpedance, a.ExcursionMM)
		}
		beaten := false
		for j := range one.Finds {
			b := &one.Finds[j]
			beaten = beaten || b.ErrorDB < a.ErrorDB && b.Parts <= a.Parts && b.Score.MinImpedance >= a.Score.MinImpedance
		}
		if a.Frontier && beaten {
			t.Errorf("%s is on the frontier, and beaten", a.Name)
		}
		if a.Frontier {
			frontier++
		}
		// The score is that of the design as it would be written.
		sys, err := sim.New(a.Design, nil)
		if err != nil {
			t.Fatal(err)
		}
		p, err := tune.New(a.Design, sys, nil)
		if err != nil {
			t.Fatal(err)
		}
		values := make([]float64, 0)
		for _, v := range p.Variables() {
			values = append(values, a.Design.Part(v.Part).Value)
		}
		s, err := p.Score(values)
		if err != nil {
			t.Fatal(err)
		}
		if s.Objective != a.Score.Objective {
			t.Errorf("%s: the design has %g dB², the find says %g", a.Name, s.Objective, a.Score.Objective)
		}
	}
	if frontier < 2 {
		t.Errorf("%d on the frontier", frontier)
	}
}

// The excursion by hand, of a tweeter on a plain resistance: flat sensitivity, no network to speak of. At 91 dB (0.7096 Pa) for 2.83 V at
// 1 m, 50 W into 8 ohm are 20 V: 5.015 Pa at 1 m. An area of 530.9 mm² moves x = p·2√2·π·r/(ρ·S·ω²) there, most at the lowest frequency
// that is looked at, 100 Hz.
func TestExcursion(t *testing.T) {
	d := design(t, `
[drive]
rated_power = "50 W"
rated_load = "8 ohm"
[parts]
R1 = "1 mohm"
R2 = "1 mohm"
[driver.w]
impedance = "8 ohm"
sensitivity = "88 dB"
[driver.t]
impedance = "8 ohm"
sensitivity = "91 dB"
diameter = "26 mm"
xmax = "0.5 mm"
[[way]]
name = "low"
driver = "w"
network = ["series R1"]
[[way]]
name = "high"
driver = "t"
network = ["series R2"]
`)
	sys, err := sim.New(d, nil)
	if err != nil {
		t.Fatal(err)
	}
	f := &Find{Design: d}
	if err := f.excursion(sys); err != nil {
		t.Fatal(err)
	}
	pressure := 20e-6 * math.Pow(10, 91./20) * 20 / 2.83
	area := math.Pi * 0.013 * 0.013
	omega := 2 * math.Pi * 100
	want := 1000 * pressure * 2 * math.Sqrt2 * math.Pi / (1.2 * area * omega * omega)
	// The series milliohm takes 0.01 %, and directivity nothing at 100 Hz.
	if f.ExcursionFor != "t" || math.Abs(f.ExcursionMM/want-1) > 1e-3 {
		t.Errorf("%s moves %g mm, want t %g", f.ExcursionFor, f.ExcursionMM, want)
	}
	if stands(&xover.Design{Tune: xover.Tune{MinImpedance: 3}, Drivers: d.Drivers}, &Find{Score: tune.Score{MinImpedance: 4}, ExcursionMM: 0.6, ExcursionFor: "t"}) {
		t.Error("a find that moves the tweeter beyond xmax stands")
	}
}

func TestScoutRefuses(t *testing.T) {
	one := design(t, pier)
	one.Ways = one.Ways[:1]
	if _, err := Scout(context.Background(), one, nil, Settings{}); err == nil {
		t.Error("one way is scouted")
	}
	silent := design(t, strings.ReplaceAll(pier, "sensitivity = \"90 dB\"\n", ""))
	if _, err := Scout(context.Background(), silent, nil, Settings{}); err == nil {
		t.Error("a silent driver is scouted")
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := Scout(ctx, design(t, pier), nil, Settings{}); err == nil {
		t.Error("a scout that never began reports")
	}
}
