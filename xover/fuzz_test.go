package xover

import (
	"bytes"
	"errors"
	"math"
	"path/filepath"
	"testing"
)

// seeds gives the fuzzer every file of testdata.
func seeds(f *testing.F, add func(src []byte)) {
	f.Helper()
	files, err := filepath.Glob("testdata/*/*.toml")
	if err != nil || len(files) < 15 {
		f.Fatalf("%d seed files: %v", len(files), err)
	}
	for _, path := range files {
		add(readFile(f, path))
	}
}

// FuzzParse checks what holds for any file: an error is ours, sorted and inside the file; a design is one
// whose steps read back and which nothing in Edit changes.
func FuzzParse(f *testing.F) {
	seeds(f, func(src []byte) { f.Add(src) })
	f.Fuzz(func(t *testing.T, src []byte) {
		d, warnings, err := Parse("f", src)
		if err != nil {
			all, ok := errors.AsType[Errors](err)
			if !ok || d != nil || warnings != nil {
				t.Fatalf("error is a %T beside %v and %v", err, d, warnings)
			}
			checkErrors(t, all, src)
			return
		}
		checkDesign(t, d)
		checkStepsReadBack(t, d)
		same := map[string]float64{}
		for _, p := range d.Parts {
			if p.Same == "" {
				same[p.Name] = p.Value
			}
		}
		if out, err := Edit(src, same); err != nil || !bytes.Equal(out, src) {
			t.Fatalf("Edit with the same values gave %q: %v", out, err)
		}
	})
}

// checkDesign checks what the comment of Design promises.
func checkDesign(t *testing.T, d *Design) {
	t.Helper()
	if (len(d.Ways) == 0) == (d.Tone == nil) {
		t.Errorf("%d ways and tone %v", len(d.Ways), d.Tone)
	}
	for _, p := range d.Parts {
		if !(p.Value > 0) || math.IsInf(p.Value, 0) || !(p.DCR >= 0) || !(p.ESR >= 0) || math.IsNaN(p.Tol) || p.Same != "" && d.Part(p.Same) == nil {
			t.Errorf("part %+v", p)
		}
	}
	for _, w := range d.Ways {
		for _, name := range w.DriverNames() {
			if d.Driver(name) == nil {
				t.Errorf("way %q has no driver %q", w.Name, name)
			}
		}
		for _, s := range w.Network {
			if s.Expr != nil {
				s.Expr.leaves(func(x *Expr) {
					if d.Part(x.Part) == nil {
						t.Errorf("step %q uses what is no part", s)
					}
				})
			}
		}
	}
	for _, c := range d.Controls {
		if p := d.Part(c.Part); p == nil || p.Kind != Potentiometer || !(c.At >= 0 && c.At <= 1) {
			t.Errorf("control %+v", c)
		}
	}
}

// FuzzEdit changes every part of a design by a factor and back again: the design must be the same as before,
// bit for bit, and the bytes between the values must never change.
func FuzzEdit(f *testing.F) {
	seeds(f, func(src []byte) {
		f.Add(src, 1.5)
		f.Add(src, 1/math.Pi)
	})
	f.Fuzz(func(t *testing.T, src []byte, factor float64) {
		d, _, err := Parse("f", src)
		if err != nil {
			return
		}
		there, back := map[string]float64{}, map[string]float64{}
		for _, p := range d.Parts {
			if p.Same != "" {
				continue
			}
			if what, _ := valueFault(p.Value*factor, p.Kind.Unit(), positive); what != "" {
				return
			}
			there[p.Name], back[p.Name] = p.Value*factor, p.Value
		}
		out, err := Edit(src, there)
		if err != nil {
			t.Fatal(err)
		}
		if bytes.Count(out, []byte("\n")) > bytes.Count(src, []byte("\n")) {
			t.Error("editing added lines")
		}
		got, _, err := Parse("f", out)
		if err != nil {
			t.Fatal(err)
		}
		for name, v := range there {
			if got.Part(name).Value != v {
				t.Errorf("%s is %v, want %v", name, got.Part(name).Value, v)
			}
		}
		if out, err = Edit(out, back); err != nil {
			t.Fatal(err)
		}
		again, _, err := Parse("f", out)
		if err != nil || !equalButPositions(d, again) {
			t.Errorf("there and back gave another design: %v", err)
		}
	})
}
