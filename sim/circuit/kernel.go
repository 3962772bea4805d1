package circuit

// The kernels are the whole inner loop of a sweep: one operation on a block. These are their plain forms; on
// processors that can work on four numbers at a time the forms of kernel_amd64.s take their place, with the
// same operations in the same order, so that no digit differs. They take pointers to arrays of fixed length, so
// that no index is checked. A reciprocal is the conjugate over the squared modulus: the admittances here,
// 1e-15 S to 1e15 S, stay far from overflow when squared.

// plainTank stores cond + j(ωc - Γ/ω); w is ω and u is 1/ω.
func plainTank(y *cvec, w, u *vec, cond, c, gamma float64) {
	for i := range lanes {
		y.re[i] = cond
		y.im[i] = w[i]*c - u[i]*gamma
	}
}

// plainChain stores 1/(r + j(ωl - s/ω)).
func plainChain(y *cvec, w, u *vec, r, l, s float64) {
	rr := r * r
	for i := range lanes {
		x := w[i]*l - u[i]*s
		d := 1 / (rr + x*x)
		y.re[i] = r * d
		y.im[i] = -x * d
	}
}

// plainAdd stores a + b.
func plainAdd(y, a, b *cvec) {
	for i := range lanes {
		y.re[i] = a.re[i] + b.re[i]
		y.im[i] = a.im[i] + b.im[i]
	}
}

// plainSub stores a - b.
func plainSub(y, a, b *cvec) {
	for i := range lanes {
		y.re[i] = a.re[i] - b.re[i]
		y.im[i] = a.im[i] - b.im[i]
	}
}

// plainMul stores a·b.
func plainMul(y, a, b *cvec) {
	for i := range lanes {
		ar, ai, br, bi := a.re[i], a.im[i], b.re[i], b.im[i]
		y.re[i] = ar*br - ai*bi
		y.im[i] = ar*bi + ai*br
	}
}

// plainMulNeg stores -a·b.
func plainMulNeg(y, a, b *cvec) {
	for i := range lanes {
		ar, ai, br, bi := a.re[i], a.im[i], b.re[i], b.im[i]
		y.re[i] = ai*bi - ar*br
		y.im[i] = -(ar*bi + ai*br)
	}
}

// plainMulAdd stores s + a·b.
func plainMulAdd(y, s, a, b *cvec) {
	for i := range lanes {
		ar, ai, br, bi := a.re[i], a.im[i], b.re[i], b.im[i]
		y.re[i] = s.re[i] + (ar*br - ai*bi)
		y.im[i] = s.im[i] + (ar*bi + ai*br)
	}
}

// plainMulSub stores s - a·b.
func plainMulSub(y, s, a, b *cvec) {
	for i := range lanes {
		ar, ai, br, bi := a.re[i], a.im[i], b.re[i], b.im[i]
		y.re[i] = s.re[i] - (ar*br - ai*bi)
		y.im[i] = s.im[i] - (ar*bi + ai*br)
	}
}

// plainInv stores 1/a; y may be a.
func plainInv(y, a *cvec) {
	for i := range lanes {
		ar, ai := a.re[i], a.im[i]
		d := 1 / (ar*ar + ai*ai)
		y.re[i] = ar * d
		y.im[i] = -ai * d
	}
}

// plainShare stores a/(a+b).
func plainShare(y, a, b *cvec) {
	for i := range lanes {
		ar, ai := a.re[i], a.im[i]
		sr, si := ar+b.re[i], ai+b.im[i]
		d := 1 / (sr*sr + si*si)
		y.re[i] = (ar*sr + ai*si) * d
		y.im[i] = (ai*sr - ar*si) * d
	}
}

// plainElim eliminates a node whose branches are a and b: fac = a/(a+b), and what joins the two far ends
// is sum = fac·b.
func plainElim(fac, sum, a, b *cvec) {
	for i := range lanes {
		ar, ai, br, bi := a.re[i], a.im[i], b.re[i], b.im[i]
		sr, si := ar+br, ai+bi
		d := 1 / (sr*sr + si*si)
		fr, fi := (ar*sr+ai*si)*d, (ai*sr-ar*si)*d
		fac.re[i], fac.im[i] = fr, fi
		sum.re[i] = fr*br - fi*bi
		sum.im[i] = fr*bi + fi*br
	}
}

// plainElimAdd is plainElim where the far ends are joined already, by src.
func plainElimAdd(fac, sum, src, a, b *cvec) {
	for i := range lanes {
		ar, ai, br, bi := a.re[i], a.im[i], b.re[i], b.im[i]
		sr, si := ar+br, ai+bi
		d := 1 / (sr*sr + si*si)
		fr, fi := (ar*sr+ai*si)*d, (ai*sr-ar*si)*d
		fac.re[i], fac.im[i] = fr, fi
		sum.re[i] = src.re[i] + (fr*br - fi*bi)
		sum.im[i] = src.im[i] + (fr*bi + fi*br)
	}
}

// plainSquareMul stores y²·v.
func plainSquareMul(dst, y, v *cvec) {
	for i := range lanes {
		yr, yi, vr, vi := y.re[i], y.im[i], v.re[i], v.im[i]
		ir, ii := yr*vr-yi*vi, yr*vi+yi*vr
		dst.re[i] = yr*ir - yi*ii
		dst.im[i] = yr*ii + yi*ir
	}
}

// plainScale stores c·a; y may be a.
func plainScale(y, a *cvec, c float64) {
	for i := range lanes {
		y.re[i], y.im[i] = c*a.re[i], c*a.im[i]
	}
}

// plainTurn stores j·c·x·a.
func plainTurn(y, a *cvec, x *vec, c float64) {
	for i := range lanes {
		t := c * x[i]
		y.re[i], y.im[i] = -(t * a.im[i]), t*a.re[i]
	}
}

// plainMulStore stores a·b in the layout of the caller's slices.
func plainMulStore(dst *[lanes]complex128, a, b *cvec) {
	for i := range lanes {
		ar, ai, br, bi := a.re[i], a.im[i], b.re[i], b.im[i]
		dst[i] = complex(ar*br-ai*bi, ar*bi+ai*br)
	}
}
