package circuit

import "golang.org/x/sys/cpu"

// vectors tells that the processor works on four numbers at a time.
var vectors = cpu.X86.HasAVX2

//go:noescape
func fastTank(y *cvec, w, u *vec, cond, c, gamma float64)

func tankTo(y *cvec, w, u *vec, cond, c, gamma float64) {
	if vectors {
		fastTank(y, w, u, cond, c, gamma)
		return
	}
	plainTank(y, w, u, cond, c, gamma)
}

//go:noescape
func fastChain(y *cvec, w, u *vec, r, l, s float64)

func chainTo(y *cvec, w, u *vec, r, l, s float64) {
	if vectors {
		fastChain(y, w, u, r, l, s)
		return
	}
	plainChain(y, w, u, r, l, s)
}

//go:noescape
func fastAdd(y, a, b *cvec)

func addTo(y, a, b *cvec) {
	if vectors {
		fastAdd(y, a, b)
		return
	}
	plainAdd(y, a, b)
}

//go:noescape
func fastSub(y, a, b *cvec)

func subTo(y, a, b *cvec) {
	if vectors {
		fastSub(y, a, b)
		return
	}
	plainSub(y, a, b)
}

//go:noescape
func fastMul(y, a, b *cvec)

func mulTo(y, a, b *cvec) {
	if vectors {
		fastMul(y, a, b)
		return
	}
	plainMul(y, a, b)
}

//go:noescape
func fastMulNeg(y, a, b *cvec)

func mulNegTo(y, a, b *cvec) {
	if vectors {
		fastMulNeg(y, a, b)
		return
	}
	plainMulNeg(y, a, b)
}

//go:noescape
func fastMulAdd(y, s, a, b *cvec)

func mulAddTo(y, s, a, b *cvec) {
	if vectors {
		fastMulAdd(y, s, a, b)
		return
	}
	plainMulAdd(y, s, a, b)
}

//go:noescape
func fastMulSub(y, s, a, b *cvec)

func mulSubTo(y, s, a, b *cvec) {
	if vectors {
		fastMulSub(y, s, a, b)
		return
	}
	plainMulSub(y, s, a, b)
}

//go:noescape
func fastInv(y, a *cvec)

func invTo(y, a *cvec) {
	if vectors {
		fastInv(y, a)
		return
	}
	plainInv(y, a)
}

//go:noescape
func fastShare(y, a, b *cvec)

func shareTo(y, a, b *cvec) {
	if vectors {
		fastShare(y, a, b)
		return
	}
	plainShare(y, a, b)
}

//go:noescape
func fastElim(fac, sum, a, b *cvec)

func elimTo(fac, sum, a, b *cvec) {
	if vectors {
		fastElim(fac, sum, a, b)
		return
	}
	plainElim(fac, sum, a, b)
}

//go:noescape
func fastElimAdd(fac, sum, src, a, b *cvec)

func elimAddTo(fac, sum, src, a, b *cvec) {
	if vectors {
		fastElimAdd(fac, sum, src, a, b)
		return
	}
	plainElimAdd(fac, sum, src, a, b)
}

//go:noescape
func fastSquareMul(dst, y, v *cvec)

func squareMulTo(dst, y, v *cvec) {
	if vectors {
		fastSquareMul(dst, y, v)
		return
	}
	plainSquareMul(dst, y, v)
}

//go:noescape
func fastScale(y, a *cvec, c float64)

func scaleTo(y, a *cvec, c float64) {
	if vectors {
		fastScale(y, a, c)
		return
	}
	plainScale(y, a, c)
}

//go:noescape
func fastTurn(y, a *cvec, x *vec, c float64)

func turnTo(y, a *cvec, x *vec, c float64) {
	if vectors {
		fastTurn(y, a, x, c)
		return
	}
	plainTurn(y, a, x, c)
}

//go:noescape
func fastMulStore(dst *[lanes]complex128, a, b *cvec)

func mulStore(dst *[lanes]complex128, a, b *cvec) {
	if vectors {
		fastMulStore(dst, a, b)
		return
	}
	plainMulStore(dst, a, b)
}
