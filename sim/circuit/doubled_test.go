package circuit

import (
	"math/big"
	"math/rand/v2"
	"testing"
)

// Doubled numbers against 300-bit arithmetic: a product or sum is right to a few units of 2^-104 of the larger term.
func TestDoubled(t *testing.T) {
	r := rand.New(rand.NewPCG(1971, 18))
	exact := func(x doubled) *big.Float {
		return new(big.Float).SetPrec(300).Add(big.NewFloat(x.hi), new(big.Float).SetPrec(300).SetFloat64(x.lo))
	}
	random := func() doubled {
		hi := r.NormFloat64()
		return tidy(hi, hi*(r.Float64()-0.5)*0x1p-52)
	}
	near := func(what string, got doubled, want, size *big.Float) {
		t.Helper()
		d := new(big.Float).SetPrec(300).Sub(exact(got), want)
		d.Quo(d.Abs(d), new(big.Float).Abs(size))
		if e, _ := d.Float64(); e > 0x1p-102 {
			t.Errorf("%s: off by %g of it", what, e)
		}
	}
	for range 10000 {
		x, y := random(), random()
		bx, by := exact(x), exact(y)
		op := func() *big.Float { return new(big.Float).SetPrec(300) }
		larger := bx
		if op().Abs(by).Cmp(op().Abs(bx)) > 0 {
			larger = by
		}
		near("sum", x.add(y), op().Add(bx, by), larger)
		near("difference", x.sub(y), op().Sub(bx, by), larger)
		near("product", x.mul(y), op().Mul(bx, by), op().Mul(bx, by))
		near("reciprocal", x.inv(), op().Quo(big.NewFloat(1).SetPrec(300), bx), op().Quo(big.NewFloat(1).SetPrec(300), bx))
	}
}
