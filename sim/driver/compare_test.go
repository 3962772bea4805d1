package driver

import (
	"math"
	"math/cmplx"
	"testing"
)

// near checks got against want, relative to want.
func near(t *testing.T, what string, got, want, rel float64) {
	t.Helper()
	if !(math.Abs(got-want) <= rel*math.Abs(want)) {
		t.Errorf("%s: got %.9g, want %.9g within %.1e of it", what, got, want, rel)
	}
}

// nearC checks got against want, relative to |want|.
func nearC(t *testing.T, what string, got, want complex128, rel float64) {
	t.Helper()
	if !(cmplx.Abs(got-want) <= rel*cmplx.Abs(want)) {
		t.Errorf("%s: got %.9g, want %.9g within %.1e of it", what, got, want, rel)
	}
}

// jw returns jω at f in Hz.
func jw(f float64) complex128 { return complex(0, 2*math.Pi*f) }

// grid returns n frequencies from lo to hi in Hz, equally spaced in log frequency.
func grid(lo, hi float64, n int) []float64 {
	fs := make([]float64, n)
	for i := range fs {
		fs[i] = lo * math.Pow(hi/lo, float64(i)/float64(n-1))
	}
	return fs
}
