package scout

import (
	"context"
	"fmt"
	"io"
	"math"
	"math/cmplx"
	"reflect"
	"slices"
	"strings"
	"testing"

	"sixdown/sim"
	"sixdown/sim/tune"
	"sixdown/xover"
	"sixdown/xover/preferred"
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

// sheet is the resonances of the data sheets.
func sheet(d *xover.Design) func(driver string) float64 {
	return func(driver string) float64 { return d.Driver(driver).Fs }
}

// The rules by hand: 2, 2.5 and 3 times 1.1 kHz; 343 m/s over 130 mm and over 150 mm.
func TestSpan(t *testing.T) {
	d := design(t, pier)
	for _, c := range []struct {
		order     int
		low, high float64
	}{{1, 4400, 343 / 0.15}, {2, 3300, 343 / 0.15}, {3, 2750, 343 / 0.15}, {4, 2200, 343 / 0.15}} {
		r := span(d, d.Ways, 0, c.order, sheet(d))
		if math.Abs(r.low-c.low) > 1e-9 || math.Abs(r.high-c.high) > 1e-9 {
			t.Errorf("order %d: %g to %g Hz, want %g to %g", c.order, r.low, r.high, c.low, c.high)
		}
	}
	r := span(d, d.Ways, 0, 4, sheet(d))
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

// A resonance that only an impedance table tells is one all the same; without either it is said that none is known.
func TestResonanceFromATable(t *testing.T) {
	text := strings.ReplaceAll(pier, "re = \"5.4 ohm\"\nfs = \"1.1 kHz\"\nqms = 3\nqes = 1.2\n", "impedance = \"t.zma\"\n")
	d := design(t, text)
	var table strings.Builder // the driver that the data sheet had: Res = Re·Qms/Qes, about its resonance
	for i := range 200 {
		f := 20 * math.Pow(1000, float64(i)/199)
		s := complex(0, f/1100)
		z := 5.4 + 5.4*3/1.2*s/3/(s*s+s/3+1) + complex(0, 2*math.Pi*f*0.03e-3)
		fmt.Fprintf(&table, "%.8g %.8g %.8g\n", f, cmplx.Abs(z), cmplx.Phase(z)*180/math.Pi)
	}
	open := func(string) (io.ReadCloser, error) { return io.NopCloser(strings.NewReader(table.String())), nil }
	sys, err := sim.New(d, open)
	if err != nil {
		t.Fatal(err)
	}
	known := resonances(sys, d)
	if fs := known("tweeter"); math.Abs(fs/1100-1) > 1e-3 { // the fit of rows with eight figures
		t.Errorf("the tweeter resonates at %g Hz, want 1100", fs)
	}
	r := span(d, d.Ways, 0, 4, known)
	if math.Abs(r.low/2200-1) > 1e-3 || len(r.unknown) > 0 {
		t.Errorf("from %g Hz, unknown %q", r.low, r.unknown)
	}
	if r := span(d, d.Ways, 0, 4, func(string) float64 { return 0 }); r.low != 80 || len(r.unknown) != 1 || !strings.Contains(r.unknown[0], "resonance of tweeter is not known") {
		t.Errorf("from %g Hz, unknown %q", r.low, r.unknown)
	}
}

// The design's own crossing is tried where the drivers stand it.
func TestOwnPointIsTried(t *testing.T) {
	for own, want := range map[string]bool{"2.25 kHz": true, "1.5 kHz": false} {
		d := design(t, strings.Replace(pier, "network = []", `target = ["low-pass linkwitz-riley 4 at `+own+`"]`+"\nnetwork = []", 1))
		all, _ := plans(d, []float64{87, 90}, sheet(d))
		f := d.Ways[0].Targets[0].Frequency
		if got := slices.ContainsFunc(all, func(p plan) bool { return p.points[0] == f }); got != want {
			t.Errorf("%s tried: %t", own, got)
		}
	}
}

// Prices are of parts within half a step of E12, each taken no more often than there are; what cannot be had is named and is no bargain.
func TestCost(t *testing.T) {
	d := &xover.Design{Parts: []xover.Part{
		{Name: "C1", Kind: xover.Capacitor, Value: 10.5e-6}, {Name: "C2", Kind: xover.Capacitor, Value: 9.5e-6}, {Name: "R1", Kind: xover.Resistor, Value: 8},
	}}
	item := func(kind preferred.Kind, value, price float64, count int) preferred.Item {
		return preferred.Item{Kind: kind, Value: value, Price: price, Count: count, Tol: -1, DCR: -1}
	}
	for _, tt := range []struct {
		items   []preferred.Item
		sum     float64
		missing string
	}{
		{[]preferred.Item{item(preferred.Capacitor, 10e-6, 3, 2), item(preferred.Resistor, 8.2, 1, -1)}, 7, ""},
		{[]preferred.Item{item(preferred.Capacitor, 10e-6, 3, 1), item(preferred.Resistor, 8.2, 1, -1)}, -1, "C2"},
		{[]preferred.Item{item(preferred.Capacitor, 10e-6, 3, 2), item(preferred.Resistor, 10, 1, -1)}, -1, "R1"},
	} {
		if sum, missing := cost(d, preferred.NewStock(tt.items)); sum != tt.sum || missing != tt.missing {
			t.Errorf("%v: %g, %q; want %g, %q", tt.items, sum, missing, tt.sum, tt.missing)
		}
	}
	find := func(err, cost float64) Find {
		return Find{Design: d, ErrorDB: err, Cost: cost, Score: tune.Score{MinImpedance: 4}}
	}
	finds := []Find{find(1, 10), find(1.1, -1)}
	if mark(finds); !finds[0].Frontier || finds[1].Frontier {
		t.Errorf("frontier %t, %t: what has no price is taken for a bargain", finds[0].Frontier, finds[1].Frontier)
	}
	// 4.05 and 4.2 Ω are alike to an amplifier.
	if a, b := (&Find{Design: d, Score: tune.Score{MinImpedance: 4.05}}), (&Find{Design: d, Score: tune.Score{MinImpedance: 4.2}}); a.load() != b.load() || a.load() != 4 {
		t.Errorf("loads %g and %g", a.load(), b.load())
	}
}

// Of a three-way's many arrangements the promising ones are tuned; the same on any number of cores.
func TestThreeWay(t *testing.T) {
	if testing.Short() {
		t.Skip("short")
	}
	d := design(t, `
[listen]
distance = "2 m"
[parts]
C99 = "10 uF"
[driver.w]
re = "5.6 ohm"
le = "0.9 mH"
fs = "30 Hz"
qms = 5
qes = 0.4
sensitivity = "88 dB"
at = ["0 mm", "-300 mm", "0 mm"]
[driver.m]
re = "5.8 ohm"
le = "0.2 mH"
fs = "80 Hz"
qms = 3.5
qes = 0.5
sensitivity = "90 dB"
diameter = "100 mm"
at = ["0 mm", "-90 mm", "0 mm"]
[driver.t]
re = "5.3 ohm"
fs = "800 Hz"
qms = 3
qes = 1.2
sensitivity = "91 dB"
diameter = "26 mm"
[[way]]
name = "low"
driver = "w"
network = []
[[way]]
name = "mid"
driver = "m"
network = []
[[way]]
name = "high"
driver = "t"
network = ["series C99"]
`)
	run := func(workers int) *Report {
		r, err := Scout(context.Background(), d, nil, Settings{Starts: 1, Workers: workers})
		if err != nil {
			t.Fatal(err)
		}
		return r
	}
	r := run(2)
	if r.Tuned != 2*kept || r.Tried <= mostTuned || len(r.Points) < 8 || len(r.Finds) == 0 {
		t.Errorf("%d tuned, %d tried, %d points, %d finds", r.Tuned, r.Tried, len(r.Points), len(r.Finds))
	}
	for _, p := range r.Points {
		// 2 × 80 Hz, and twice 800 Hz to where the two are a wavelength apart, 343/0.09, or the mid is one across.
		if p[0] < 160 || p[1] < 1600 || p[1] > 343/0.1*1.05 || p[1] < 4*p[0] {
			t.Errorf("points %v", p)
		}
	}
	orders := map[int]bool{}
	for _, f := range r.Finds {
		orders[f.Parts] = true
	}
	if len(orders) < 3 {
		t.Errorf("finds have %v parts", orders)
	}
	if one := run(1); !reflect.DeepEqual(one, r) {
		t.Error("one goroutine finds something else than two")
	}
}
