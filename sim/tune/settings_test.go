package tune

import (
	"context"
	"fmt"
	"io"
	"math"
	"strings"
	"testing"

	"sixdown/sim"
	"sixdown/xover"
)

// bridge is an invented passive bass and treble bridge with its knobs at bass and treble; tune is more lines of [tune].
func bridge(bass, treble float64, hold bool, tune string) string {
	held := ""
	if hold {
		held = ", hold = true"
	}
	part := func(name, value string) string {
		return fmt.Sprintf("%s = { value = %q%s }\n", name, value, held)
	}
	return `[tone]
source = "1 kohm"
load = "470 kohm"
network = ["R1 from amp to a", "P1 from b to a wiper w", "C1 from a to w", "C2 from w to b", "R2 from b to 0", "R3 from w to out",
  "C3 from amp to c", "P2 from d to c wiper out", "C4 from d to 0"]
[parts]
` + part("R1", "10 kohm") + part("R2", "1 kohm") + part("R3", "10 kohm") + part("C1", "22 nF") + part("C2", "220 nF") + part("C3", "2.2 nF") + part("C4", "22 nF") + `
P1 = { value = "100 kohm", taper = "log" }
P2 = { value = "100 kohm", taper = "linear" }
[control.bass]
part = "P1"
at = ` + fmt.Sprint(bass) + `
[control.treble]
part = "P2"
at = ` + fmt.Sprint(treble) + `
[tune]
band = ["40 Hz", "16 kHz"]
` + tune
}

// problemOn is problem with files.
func problemOn(t testing.TB, text string, files map[string]string) *Problem {
	t.Helper()
	d, _, err := xover.Parse("test.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	open := func(name string) (io.ReadCloser, error) { return io.NopCloser(strings.NewReader(files[name])), nil }
	OffTheEnds(d)
	sys, err := sim.New(d, open)
	if err != nil {
		t.Fatal(err)
	}
	p, err := New(d, sys, open)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// The curve of a bridge with its knobs at 0.7 and 0.2, taken as what is wanted, is met by turning the knobs there.
func TestSettingsAreFound(t *testing.T) {
	want := problemOn(t, bridge(0.7, 0.2, true, ""), nil)
	r, err := want.sys.Predict(want.freqs)
	if err != nil {
		t.Fatal(err)
	}
	var curve strings.Builder
	for k, f := range want.freqs {
		fmt.Fprintf(&curve, "%.15g %.15g\n", f, sim.DB(r.Ways[0].H[k]))
	}
	p := problemOn(t, bridge(0, 1, true, "curve = \"wanted.txt\"\n"), map[string]string{"wanted.txt": curve.String()})
	if err := p.MoveSettings(); err != nil {
		t.Fatal(err)
	}
	found, err := p.Run(context.Background(), Search{})
	if err != nil {
		t.Fatal(err)
	}
	if v := found.Values; len(v) != 2 || math.Abs(v[0]-0.7) > 1e-6 || math.Abs(v[1]-0.2) > 1e-6 || found.After.Objective > 1e-12 {
		t.Errorf("found %v, objective %g", v, found.After.Objective)
	}
}

// Derivatives by settings and parts agree with differences; the log taper's slope is in them.
func TestJacobianOfSettings(t *testing.T) {
	p := problemOn(t, bridge(0.7, 0.2, false, "tilt = \"1 dB\"\nmin_impedance = \"2 kohm\"\n"), nil)
	if err := p.MoveSettings(); err != nil {
		t.Fatal(err)
	}
	e, err := p.newEvaluator()
	if err != nil {
		t.Fatal(err)
	}
	x, err := p.logs(p.Start())
	if err != nil {
		t.Fatal(err)
	}
	for v := range x {
		const h = 1e-5
		residuals := func(dx float64) []float64 {
			y := append([]float64(nil), x...)
			y[v] += dx
			if _, err := e.objective(y); err != nil {
				t.Fatal(err)
			}
			return append([]float64(nil), e.resid...)
		}
		up, down := residuals(h), residuals(-h)
		if _, err := e.derivatives(x); err != nil {
			t.Fatal(err)
		}
		for k := range up {
			want := (up[k] - down[k]) / (2 * h)
			if math.Abs(e.jac[v][k]-want) > 1e-6 { // h² and rounding over h, of residuals of about 1
				t.Fatalf("%s: row %d: %g, want %g", p.vars[v].name(), k, e.jac[v][k], want)
			}
		}
	}
}

// A resistor and a capacitor to the return, wanted to be 3 dB down at 1 kHz as the curve of a pole there says: C = 1/(2π·f·R).
func TestPartsOfAToneNetwork(t *testing.T) {
	var curve strings.Builder
	for i := range 100 {
		f := 40 * math.Pow(400, float64(i)/99)
		fmt.Fprintf(&curve, "%.12g %.12g\n", f, -10*math.Log10(1+f*f/1e6))
	}
	p := problemOn(t, `[tone]
source = "10 kohm"
network = ["mark out", "shunt C1"]
[parts]
C1 = "1 nF"
[tune]
band = ["40 Hz", "16 kHz"]
curve = "pole.txt"
`, map[string]string{"pole.txt": curve.String()})
	r, err := p.Run(context.Background(), Search{})
	if err != nil {
		t.Fatal(err)
	}
	if want := 1 / (2 * math.Pi * 1e3 * 10e3); math.Abs(r.Values[0]/want-1) > 1e-3 { // the curve is interpolated between 100 points
		t.Errorf("C1 is %g F, want %g", r.Values[0], want)
	}
	if err := p.MoveSettings(); err == nil {
		t.Error("a design without controls has settings")
	}
}
