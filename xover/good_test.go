package xover

import (
	"path/filepath"
	"reflect"
	"slices"
	"strings"
	"testing"
)

// goodFiles lists testdata/good; each file is a design without a fault and without a warning.
func goodFiles(t testing.TB) []string {
	t.Helper()
	files, err := filepath.Glob("testdata/good/*.toml")
	if err != nil || len(files) == 0 {
		t.Fatalf("no good files: %v", err)
	}
	return files
}

// parseGood parses a file that has no fault.
func parseGood(t testing.TB, path string) *Design {
	t.Helper()
	d, _, err := Parse(filepath.Base(path), readFile(t, path))
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func TestGoodFiles(t *testing.T) {
	for _, path := range goodFiles(t) {
		if _, warnings, err := Parse(filepath.Base(path), readFile(t, path)); err != nil || len(warnings) > 0 {
			t.Errorf("%v %v", err, warnings)
		}
	}
}

// leaf, series, shunt and their like write the expected arrangements by hand.
func leaf(part string) *Expr            { return &Expr{Part: part} }
func inSeries(args ...*Expr) *Expr      { return &Expr{Op: InSeries, Args: args} }
func inParallel(args ...*Expr) *Expr    { return &Expr{Op: InParallel, Args: args} }
func series(x *Expr) Step               { return Step{Op: Series, Expr: x} }
func shunt(x *Expr) Step                { return Step{Op: Shunt, Expr: x} }
func mark(name string) Step             { return Step{Op: Mark, Name: name} }
func between(x *Expr, a, b string) Step { return Step{Op: Between, Expr: x, From: a, To: b} }
func driverAt(a, b string) Step         { return Step{Op: DriverPlace, From: a, To: b} }

// TestHarbour compares the two-way with what a reader of the file and of the comments in design.go writes
// down. The numbers are exact: a decimal text has one nearest float64, and Go's constants are that.
func TestHarbour(t *testing.T) {
	want := &Design{
		Title:  "Harbour two-way",
		Drive:  Drive{Level: 2.83, Source: 0.05, RatedPower: 60, RatedLoad: 8},
		Listen: Listen{Distance: 2},
		Air:    Air{SoundSpeed: 343, Density: 1.20},
		Baffle: &Baffle{Width: 0.220, Height: 0.380},
		Parts: []Part{
			{Name: "L1", Kind: Inductor, Value: 1.8e-3, DCR: 0.35, Tol: -1},
			{Name: "C1", Kind: Capacitor, Value: 10e-6, ESR: 0.020, Tol: 0.05},
			{Name: "R1", Kind: Resistor, Value: 6.2, Tol: -1},
			{Name: "C2", Kind: Capacitor, Value: 12e-6, Tol: -1},
			{Name: "C3", Kind: Capacitor, Value: 6.8e-6, Tol: -1},
			{Name: "L2", Kind: Inductor, Value: 0.27e-3, DCR: 0.2, Tol: -1, Hold: true},
		},
		Drivers: []Driver{
			{Name: "woofer", ImpedanceFile: "woofer.zma", ResponseFile: "woofer.frd", At: [3]float64{0, -0.090, -0.022}},
			{Name: "tweeter", Re: 5.4, Le: 0.04e-3, Fs: 850, Qms: 3.1, Qes: 1.2, Sensitivity: 91, HasSensitivity: true,
				Diameter: 0.026, At: [3]float64{0, 0.060, 0}},
		},
		Ways: []Way{
			{Name: "low", Driver: "woofer",
				Targets: []Target{{Shape: "linkwitz-riley", Order: 4, Frequency: 2200}},
				Network: []Step{series(leaf("L1")), shunt(leaf("C1")), shunt(inSeries(leaf("R1"), leaf("C2")))}},
			{Name: "high", Driver: "tweeter", Reversed: true,
				Targets: []Target{{HighPass: true, Shape: "linkwitz-riley", Order: 4, Frequency: 2200}},
				Network: []Step{series(leaf("C3")), shunt(leaf("L2"))}},
		},
		Tune:   Tune{Band: [2]float64{200, 20e3}, Level: 87, HasLevel: true, MinImpedance: 3.2, Weights: Weights{Sum: 1, Ways: 1, Angles: 1}},
		Spread: Spread{TolR: 0.05, TolL: 0.05, TolC: 0.05, TolP: 0.2, LimitDB: 1},
	}
	d := parseGood(t, "testdata/good/harbour.toml")
	if got := withoutPositions(d); !reflect.DeepEqual(got, want) {
		t.Errorf("got  %+v\nwant %+v", got, want)
	}
	// Lines and columns as an editor shows them.
	for _, p := range []struct {
		what      string
		got, want Position
	}{
		{"L1", d.Part("L1").Pos, Position{18, 1}},
		{"tweeter", d.Driver("tweeter").Pos, Position{31, 9}},
		{"way low", d.Way("low").Pos, Position{41, 3}},
		{"shunt R1 + C2", d.Ways[0].Network[2].Pos, Position{45, 38}},
		{"C2 in it", d.Ways[0].Network[2].Expr.Args[1].Pos, Position{45, 49}},
		{"series C3", d.Ways[1].Network[0].Pos, Position{52, 14}},
	} {
		if p.got != p.want {
			t.Errorf("%s stands at %v, want %v", p.what, p.got, p.want)
		}
	}
}

func TestThreeway(t *testing.T) {
	d := parseGood(t, "testdata/good/threeway.toml")
	for name, want := range map[string]Part{
		"L1": {Name: "L1", Kind: Inductor, Value: 3.9e-3, DCR: 0.3, Tol: -1, Range: [2]float64{2e-3, 6e-3}},
		"C2": {Name: "C2", Kind: Capacitor, Value: 47e-6, Tol: -1},
		"C3": {Name: "C3", Kind: Capacitor, Value: 10e-6, Tol: -1},
		"R1": {Name: "R1", Kind: Resistor, Value: 0.47, Tol: -1},
		"R3": {Name: "R3", Kind: Resistor, Value: 3.3, Tol: 0.01, Same: "R2"},
		"C4": {Name: "C4", Kind: Capacitor, Value: 4.7e-6, Tol: -1},
		"P1": {Name: "P1", Kind: Potentiometer, Value: 8, Tol: -1, Taper: ReverseLog, Mid: 0.2},
	} {
		got := *d.Part(name)
		got.Pos = Position{}
		if got != want {
			t.Errorf("got  %+v\nwant %+v", got, want)
		}
	}
	for _, want := range []Driver{
		{Name: "bass", Re: 6.1, Le: 1.1e-3, LossR2: 12, LossL2: 0.8e-3, Fs: 28, Qms: 4.2, Qes: 0.38, Vas: 62e-3, Sd: 220e-4,
			Xmax: 6.5e-3, Sensitivity: 88, HasSensitivity: true, At: [3]float64{0, -0.4, -0.035},
			Box: Box{Kind: VentedBox, Volume: 48e-3, Tuning: 31, QL: 7}},
		{Name: "middle", Re: 5.8, Le: 0.25e-3, Fs: 95, Qms: 3, Qes: 0.5, Vas: 6.5e-3, Diameter: 0.110,
			Sensitivity: 89, HasSensitivity: true, At: [3]float64{0, -0.120, -0.012}, Box: Box{Kind: ClosedBox, Volume: 3e-3},
			Breakup: []Peak{{4500, 4, 6}, {6200, 9, -3.5}}},
		{Name: "treble", ImpedanceFile: "treble.zma", ResponseFile: "treble.frd", MinimumPhase: true,
			HasMic: true, Mic: [3]float64{0, 0, 1}},
	} {
		got := *d.Driver(want.Name)
		got.Pos = Position{}
		if !reflect.DeepEqual(got, want) {
			t.Errorf("got  %+v\nwant %+v", got, want)
		}
	}
	wantTargets := []Target{
		{HighPass: true, Shape: "bessel", Order: 2, Reference: "phase", Frequency: 350},
		{Shape: "chebyshev", Order: 3, RippleDB: 0.5, Frequency: 3200},
	}
	if got := d.Way("middle").Targets; !reflect.DeepEqual(got, wantTargets) {
		t.Errorf("targets %+v, want %+v", got, wantTargets)
	}
	checkNetwork(t, d.Way("middle").Network, series(inSeries(leaf("C3"), leaf("L3"))), shunt(inParallel(leaf("L2"), leaf("R2"))), series(leaf("R3")))
	checkNetwork(t, d.Way("treble").Network, series(inParallel(leaf("C4"), inSeries(leaf("P1"), leaf("L4")))))
	if d.Air != (Air{SoundSpeed: 345, Density: 1.19}) || d.Listen != (Listen{Distance: 2.5, Height: -0.040}) {
		t.Errorf("air %v, listen %v", d.Air, d.Listen)
	}
	if want := (Spread{TolR: 0.01, TolL: 0.05, TolC: 0.05, TolP: 0.2, LimitDB: 1.5}); d.Spread != want {
		t.Errorf("spread %v, want %v", d.Spread, want)
	}
	if d.Turn("P1") != 0.25 {
		t.Errorf("P1 is turned to %v", d.Turn("P1"))
	}
}

func checkNetwork(t *testing.T, got []Step, want ...Step) {
	t.Helper()
	if !reflect.DeepEqual(stepsWithoutPositions(got), want) {
		t.Errorf("network %v, want %v", got, want)
	}
}

func TestArrangements(t *testing.T) {
	d := parseGood(t, "testdata/good/series.toml")
	checkNetwork(t, d.Way("low").Network, series(leaf("L1")), mark("middle"), shunt(leaf("C1")))
	checkNetwork(t, d.Way("high").Network, driverAt("top", "low.middle"), between(leaf("R1"), "amp", "top"))

	d = parseGood(t, "testdata/good/tone.toml")
	wiper := between(leaf("P1"), "b", "a")
	wiper.Wiper = "w"
	if got := stepsWithoutPositions(d.Tone.Network)[1]; !reflect.DeepEqual(got, wiper) {
		t.Errorf("%v, want %v", got, wiper)
	}
	if d.Tone.Source != 1e3 || d.Tone.Load != 1e6 || d.Turn("P2") != 1 || len(d.Tone.Network) != 9 {
		t.Errorf("tone %+v", d.Tone)
	}
	if p := d.Part("P2"); p.Kind != Potentiometer || p.Taper != Log || p.Mid != 0.15 || p.Value != 1e6 {
		t.Errorf("P2 is %+v", p)
	}
	if p := d.Part("P1"); p.Mid != DefaultMid {
		t.Errorf("mid of P1 is %v, want the default", p.Mid)
	}

	d = parseGood(t, "testdata/good/coupled.toml")
	if got, want := stepsWithoutPositions(d.Way("low").Network)[2], (Step{Op: Couple, A: "L1", B: "L2", K: -0.02}); !reflect.DeepEqual(got, want) {
		t.Errorf("%v, want %v", got, want)
	}
}

// TestSpelling reads a file that uses the odd corners of TOML: dotted keys, all four kinds of string, escapes.
func TestSpelling(t *testing.T) {
	d := parseGood(t, "testdata/good/spelling.toml")
	if d.Title != "A \"quoted\" title" || d.Drive.Level != 2 || d.Drivers[0].Resistance != 8 {
		t.Errorf("title %q, level %v, driver %v", d.Title, d.Drive.Level, d.Drivers[0].Resistance)
	}
	checkNetwork(t, d.Ways[0].Network, series(leaf("C1")), shunt(inSeries(leaf("R1"), leaf("L1"))))
	// Inside a string with escapes the column is that of the string; inside a plain one it is exact.
	if got, want := d.Ways[0].Network[0].Expr.Pos, (Position{17, 12}); got != want {
		t.Errorf("C1 stands at %v, want %v", got, want)
	}
	if got, want := d.Ways[0].Network[1].Expr.Args[1].Pos, (Position{17, 45}); got != want {
		t.Errorf("L1 stands at %v, want %v", got, want)
	}
}

// TestWindows reads a file with a byte order mark and CRLF, and counts columns in characters: the mark counts
// for none, Ä and µ for one.
func TestWindows(t *testing.T) {
	d := parseGood(t, "testdata/good/windows.toml")
	if got := d.Part("C1"); got.Value != 10e-6 || got.Pos != (Position{3, 1}) {
		t.Errorf("C1 is %+v", got)
	}
	src := []byte("\ufeffä = 1\r\n")
	_, _, err := Parse("", src)
	if want := "1:1: this is not TOML: invalid character at start of key: U+00C3 'Ã'; " + syntaxMend; err == nil || err.Error() != want {
		t.Errorf("got %v, want %s", err, want)
	}
	src = []byte("title = \"Grün\" x = 1\n")
	_, _, err = Parse("", src)
	if want := "1:16: this is not TOML: expected newline but got U+0078 'x'; " + syntaxMend; err == nil || err.Error() != want {
		t.Errorf("got %v, want %s", err, want)
	}
}

// TestSeveralDrivers reads ways that end in more than one driver.
func TestSeveralDrivers(t *testing.T) {
	w := parseGood(t, "testdata/good/d_appolito.toml").Ways
	if want := inParallel(leaf("upper"), leaf("lower")); !reflect.DeepEqual(w[0].Drivers.withoutPositions(), want) || w[0].Driver != "upper | lower" {
		t.Errorf("got %q and %v, want %v", w[0].Driver, w[0].Drivers, want)
	}
	if pos, want := w[0].Drivers.Args[1].Pos, (Position{53, 20}); pos != want {
		t.Errorf("lower stands at %v, want %v", pos, want)
	}
	if w[1].Driver != "tweeter" || w[1].Drivers != nil {
		t.Errorf("got %q and %v, want a tweeter alone", w[1].Driver, w[1].Drivers)
	}

	src := ""
	for _, name := range []string{"a", "b", "c", "d", "e"} {
		src += "[driver." + name + "]\nre = \"6 ohm\"\n"
	}
	for _, tt := range []struct {
		text, canonical string
		want            *Expr
		names           []string
	}{
		{"a", "a", nil, []string{"a"}},
		{" ( a ) ", "a", nil, []string{"a"}},
		{"a+b", "a + b", inSeries(leaf("a"), leaf("b")), []string{"a", "b"}},
		{"b + a|c", "b + a | c", inSeries(leaf("b"), inParallel(leaf("a"), leaf("c"))), []string{"b", "a", "c"}},
		{"(a + b) | (c + d)", "(a + b) | (c + d)", inParallel(inSeries(leaf("a"), leaf("b")), inSeries(leaf("c"), leaf("d"))), []string{"a", "b", "c", "d"}},
	} {
		way := src + "[[way]]\nname = \"w\"\nnetwork = []\ndriver = \"" + tt.text + "\"\n"
		d, warnings, err := Parse("f", []byte(way))
		if err != nil {
			t.Errorf("%q: %v", tt.text, err)
			continue
		}
		got := &d.Ways[0]
		if got.Driver != tt.canonical || !reflect.DeepEqual(got.Drivers.withoutPositions(), tt.want) || !slices.Equal(got.DriverNames(), tt.names) {
			t.Errorf("%q: got %q, %v, names %q; want %q, %v, %q", tt.text, got.Driver, got.Drivers, got.DriverNames(), tt.canonical, tt.want, tt.names)
		}
		if want := 5 - len(tt.names); len(warnings) != want { // of the drivers that no way has
			t.Errorf("%q: %d warnings, want %d", tt.text, len(warnings), want)
		}
	}
}

func TestTuneAndSpreadKeys(t *testing.T) {
	d, _, err := Parse("keys.toml", []byte(`[tune]
tilt = "-0.5 dB"
curve = "house.txt"
weights = { ways = 0.5, phase = 0.2 }
angles = ["h=30", "h=-15, v=10", "v=-20"]
[spread]
distribution = "normal"
about = "level"
match = "0.5 dB"
[parts]
C1 = "4.7 uF"
[driver.d]
impedance = "8 ohm"
[[way]]
name = "high"
driver = "d"
network = ["series C1"]
`))
	if err != nil {
		t.Fatal(err)
	}
	tune := Tune{
		Band: [2]float64{200, 20e3}, Tilt: -0.5, CurveFile: "house.txt", Weights: Weights{Sum: 1, Ways: 0.5, Phase: 0.2, Angles: 1},
		Angles: []EarAngle{{HorizontalDeg: 30}, {-15, 10}, {VerticalDeg: -20}},
	}
	if !reflect.DeepEqual(d.Tune, tune) {
		t.Errorf("[tune] is %+v, want %+v", d.Tune, tune)
	}
	spread := Spread{TolR: 0.05, TolL: 0.05, TolC: 0.05, TolP: 0.2, LimitDB: 1, Normal: true, AboutLevel: true, MatchDB: 0.5}
	if d.Spread != spread {
		t.Errorf("[spread] is %+v, want %+v", d.Spread, spread)
	}
}

func TestFollowsNothing(t *testing.T) {
	src := "[parts]\nL1 = { same = \"\" }\n[driver.d]\nimpedance = \"8 ohm\"\n[[way]]\nname = \"a\"\ndriver = \"d\"\nnetwork = [\"series L1\"]\n"
	if _, _, err := Parse("t.toml", []byte(src)); err == nil || !strings.Contains(err.Error(), "t.toml:2:") || !strings.Contains(err.Error(), "follows a part without a name") {
		t.Errorf("got %v", err)
	}
}
