package sim

import (
	"io"
	"io/fs"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"sixdown/xover"
)

// The tests put designs together in code, so that they do not lean on the reader of design files.

func leaf(part string) *xover.Expr { return &xover.Expr{Op: xover.Leaf, Part: part} }

func inSeries(parts ...string) *xover.Expr { return joint(xover.InSeries, parts) }

func inParallel(parts ...string) *xover.Expr { return joint(xover.InParallel, parts) }

func joint(op xover.ExprOp, parts []string) *xover.Expr {
	e := &xover.Expr{Op: op}
	for _, p := range parts {
		e.Args = append(e.Args, leaf(p))
	}
	return e
}

func series(e *xover.Expr) xover.Step { return xover.Step{Op: xover.Series, Expr: e} }

func shunt(e *xover.Expr) xover.Step { return xover.Step{Op: xover.Shunt, Expr: e} }

func mark(name string) xover.Step { return xover.Step{Op: xover.Mark, Name: name} }

func between(e *xover.Expr, from, to string) xover.Step {
	return xover.Step{Op: xover.Between, Expr: e, From: from, To: to}
}

func resistor(name string, ohm float64) xover.Part {
	return xover.Part{Name: name, Kind: xover.Resistor, Value: ohm}
}

func coil(name string, henry, dcr float64) xover.Part {
	return xover.Part{Name: name, Kind: xover.Inductor, Value: henry, DCR: dcr}
}

func capacitor(name string, farad, esr float64) xover.Part {
	return xover.Part{Name: name, Kind: xover.Capacitor, Value: farad, ESR: esr}
}

func pot(name string, ohm float64) xover.Part {
	return xover.Part{Name: name, Kind: xover.Potentiometer, Value: ohm, Taper: xover.Linear, Mid: 0.1}
}

// plainDriver is a resistance with a flat acoustic output: every published table applies to it as it stands.
func plainDriver(name string, ohm, spl float64) xover.Driver {
	return xover.Driver{Name: name, Resistance: ohm, Sensitivity: spl, HasSensitivity: true}
}

// files opens tables that stand in a map.
func files(src map[string]string) func(string) (io.ReadCloser, error) {
	return func(name string) (io.ReadCloser, error) {
		if s, ok := src[name]; ok {
			return io.NopCloser(strings.NewReader(s)), nil
		}
		return nil, &fs.PathError{Op: "open", Path: name, Err: fs.ErrNotExist}
	}
}

func mustNew(t testing.TB, d *xover.Design) *System {
	t.Helper()
	s, err := New(d, nil)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func mustPredict(t testing.TB, s *System, freqs ...float64) *Response {
	t.Helper()
	r, err := s.Predict(freqs)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// near checks got against want within an absolute tolerance.
func near(t *testing.T, what string, got, want, abs float64) {
	t.Helper()
	if !(math.Abs(got-want) <= abs) {
		t.Errorf("%s: got %.10g, want %.10g within %.1e", what, got, want, abs)
	}
}

// nearC checks got against want within rel of |want|.
func nearC(t *testing.T, what string, got, want complex128, rel float64) {
	t.Helper()
	if !(cmplx.Abs(got-want) <= rel*cmplx.Abs(want)) {
		t.Errorf("%s: got %.10g, want %.10g within %.1e of it", what, got, want, rel)
	}
}
