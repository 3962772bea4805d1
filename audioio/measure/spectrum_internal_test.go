package measure

import (
	"math"
	"math/cmplx"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/dsp/fourier"
)

// At a bin of the fast transform both ways give the same number; an error of 1e-14 in
// each basis value of n random samples makes 1e-14·√n. Where k/n is no float64, its
// rounding alone turns the last sample by 2π·n/2·2^-53 more.
func TestSpectraAtBins(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for _, n := range []int{1, 2, 511, 512, 513, 4800, 48000, 65536} {
		x := make([]float64, n)
		for i := range x {
			x[i] = r.Float64() - 0.5
		}
		tol := 1e-13 * math.Sqrt(float64(n))
		if n&(n-1) != 0 {
			tol += math.Pi * float64(n) * 0x1p-53 * math.Sqrt(float64(n))
		}
		want := fourier.NewFFT(n).Coefficients(nil, x)
		var hz []float64
		var bins []int
		for k := 0; k <= n/2; k += 1 + n/20 {
			hz = append(hz, float64(k))
			bins = append(bins, k)
		}
		got := [][]complex128{make([]complex128, len(hz))}
		spectra(got, [][]float64{x}, float64(n), hz)
		for i, k := range bins {
			if d := cmplx.Abs(got[0][i] - want[k]); d > tol {
				t.Errorf("%d samples, bin %d: off by %.2g", n, k, d)
			}
		}
	}
}

// The basis is cos and sin to the stated 1e-14, also far from the beginning. nu is a
// power of two over 4096, so that the phase has no rounding of its own.
func TestBasis(t *testing.T) {
	const nu = 37.0 / 4096
	c, s := make([]float64, 1000), make([]float64, 1000)
	for _, first := range []int{0, 17, 1 << 30} {
		basis(c, s, nu, first)
		for i := range c {
			turns := float64((first+i)*37%4096) / 4096
			if d := max(math.Abs(c[i]-math.Cos(2*math.Pi*turns)), math.Abs(s[i]-math.Sin(2*math.Pi*turns))); d > 1e-14 {
				t.Fatalf("sample %d from %d: off by %.2g", i, first, d)
			}
		}
	}
}

func TestSmoothLength(t *testing.T) {
	smooth := func(n int) bool {
		for _, p := range []int{2, 3, 5} {
			for n%p == 0 {
				n /= p
			}
		}
		return n == 1
	}
	for n := 1; n < 3000; n++ {
		want := n
		for !smooth(want) {
			want++
		}
		if got := smoothLength(n); got != want {
			t.Errorf("from %d: %d, want %d", n, got, want)
		}
	}
	if got := smoothLength(2 * 131071); got < 2*131071 || !smooth(got) {
		t.Errorf("from %d: %d", 2*131071, got)
	}
}
