//go:build !amd64

package circuit

func tankTo(y *cvec, w, u *vec, cond, c, gamma float64) { plainTank(y, w, u, cond, c, gamma) }
func chainTo(y *cvec, w, u *vec, r, l, s float64)       { plainChain(y, w, u, r, l, s) }
func addTo(y, a, b *cvec)                               { plainAdd(y, a, b) }
func subTo(y, a, b *cvec)                               { plainSub(y, a, b) }
func mulTo(y, a, b *cvec)                               { plainMul(y, a, b) }
func mulNegTo(y, a, b *cvec)                            { plainMulNeg(y, a, b) }
func mulAddTo(y, s, a, b *cvec)                         { plainMulAdd(y, s, a, b) }
func mulSubTo(y, s, a, b *cvec)                         { plainMulSub(y, s, a, b) }
func invTo(y, a *cvec)                                  { plainInv(y, a) }
func shareTo(y, a, b *cvec)                             { plainShare(y, a, b) }
func elimTo(fac, sum, a, b *cvec)                       { plainElim(fac, sum, a, b) }
func elimAddTo(fac, sum, src, a, b *cvec)               { plainElimAdd(fac, sum, src, a, b) }
func squareMulTo(dst, y, v *cvec)                       { plainSquareMul(dst, y, v) }
func scaleTo(y, a *cvec, c float64)                     { plainScale(y, a, c) }
func turnTo(y, a *cvec, x *vec, c float64)              { plainTurn(y, a, x, c) }
func mulStore(dst *[lanes]complex128, a, b *cvec)       { plainMulStore(dst, a, b) }
