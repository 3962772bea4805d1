package circuit

// lanes is how many frequencies a block holds: enough to hide the cost of choosing an operation, few
// enough that a three-way's slots stay in the first-level cache.
const lanes = 16

// vec is one real number for each frequency of a block, cvec one complex number.
type vec [lanes]float64

type cvec struct{ re, im vec }

// The kernels below are the whole inner loop of a sweep. They take pointers to arrays of fixed length, so
// that no index is checked. A reciprocal is the conjugate over the squared modulus: the values here,
// 1e-15 S to 1e15 S, stay far from overflow when squared.

// tankTo stores g + j(ωc - Γ/ω); w is ω and u is 1/ω.
func tankTo(y *cvec, w, u *vec, g, c, gamma float64) {
	for i := range lanes {
		y.re[i] = g
		y.im[i] = w[i]*c - u[i]*gamma
	}
}

// tankAddTo stores a + g + j(ωc - Γ/ω).
func tankAddTo(y, a *cvec, w, u *vec, g, c, gamma float64) {
	for i := range lanes {
		y.re[i] = a.re[i] + g
		y.im[i] = a.im[i] + (w[i]*c - u[i]*gamma)
	}
}

// chainTo stores 1/(r + j(ωl - s/ω)).
func chainTo(y *cvec, w, u *vec, r, l, s float64) {
	rr := r * r
	for i := range lanes {
		x := w[i]*l - u[i]*s
		d := 1 / (rr + x*x)
		y.re[i] = r * d
		y.im[i] = -x * d
	}
}

func addTo(y, a, b *cvec) {
	for i := range lanes {
		y.re[i] = a.re[i] + b.re[i]
		y.im[i] = a.im[i] + b.im[i]
	}
}

func subTo(y, a, b *cvec) {
	for i := range lanes {
		y.re[i] = a.re[i] - b.re[i]
		y.im[i] = a.im[i] - b.im[i]
	}
}

func mulTo(y, a, b *cvec) {
	for i := range lanes {
		ar, ai, br, bi := a.re[i], a.im[i], b.re[i], b.im[i]
		y.re[i] = ar*br - ai*bi
		y.im[i] = ar*bi + ai*br
	}
}

// mulNegTo stores -a·b.
func mulNegTo(y, a, b *cvec) {
	for i := range lanes {
		ar, ai, br, bi := a.re[i], a.im[i], b.re[i], b.im[i]
		y.re[i] = ai*bi - ar*br
		y.im[i] = -(ar*bi + ai*br)
	}
}

// mulSubTo stores s - a·b.
func mulSubTo(y, s, a, b *cvec) {
	for i := range lanes {
		ar, ai, br, bi := a.re[i], a.im[i], b.re[i], b.im[i]
		y.re[i] = s.re[i] - (ar*br - ai*bi)
		y.im[i] = s.im[i] - (ar*bi + ai*br)
	}
}

// mulAddTo stores s + a·b.
func mulAddTo(y, s, a, b *cvec) {
	for i := range lanes {
		ar, ai, br, bi := a.re[i], a.im[i], b.re[i], b.im[i]
		y.re[i] = s.re[i] + (ar*br - ai*bi)
		y.im[i] = s.im[i] + (ar*bi + ai*br)
	}
}

// invTo stores 1/a in y; y may be a.
func invTo(y, a *cvec) {
	for i := range lanes {
		ar, ai := a.re[i], a.im[i]
		d := 1 / (ar*ar + ai*ai)
		y.re[i] = ar * d
		y.im[i] = -ai * d
	}
}

// elimTo eliminates a node whose branches are ya and yb: inv = 1/(ya+yb), fac = ya·inv, and what
// joins the two far ends is sum = fac·yb.
func elimTo(fac, inv, sum, ya, yb *cvec) {
	for i := range lanes {
		ar, ai, br, bi := ya.re[i], ya.im[i], yb.re[i], yb.im[i]
		sr, si := ar+br, ai+bi
		d := 1 / (sr*sr + si*si)
		ir, ii := sr*d, -si*d
		fr, fi := ar*ir-ai*ii, ar*ii+ai*ir
		inv.re[i], inv.im[i] = ir, ii
		fac.re[i], fac.im[i] = fr, fi
		sum.re[i] = fr*br - fi*bi
		sum.im[i] = fr*bi + fi*br
	}
}

// elimAddTo is elimTo where the far ends are joined already, by src.
func elimAddTo(fac, inv, sum, src, ya, yb *cvec) {
	for i := range lanes {
		ar, ai, br, bi := ya.re[i], ya.im[i], yb.re[i], yb.im[i]
		sr, si := ar+br, ai+bi
		d := 1 / (sr*sr + si*si)
		ir, ii := sr*d, -si*d
		fr, fi := ar*ir-ai*ii, ar*ii+ai*ir
		inv.re[i], inv.im[i] = ir, ii
		fac.re[i], fac.im[i] = fr, fi
		sum.re[i] = src.re[i] + (fr*br - fi*bi)
		sum.im[i] = src.im[i] + (fr*bi + fi*br)
	}
}

// run evaluates operations for block b. The slots of one-ports and the slot `one` must be filled.
func (s *Sweep) run(ops []op, b int) {
	v, w, u, tri := s.v, &s.w[b], &s.u[b], s.tri
	for i := range ops {
		o := &ops[i]
		switch o.code {
		case opTank:
			t := &tri[o.cell]
			tankTo(&v[o.dst], w, u, t[0], t[1], t[2])
		case opTankAdd:
			t := &tri[o.cell]
			tankAddTo(&v[o.dst], &v[o.a], w, u, t[0], t[1], t[2])
		case opChain:
			t := &tri[o.cell]
			chainTo(&v[o.dst], w, u, t[0], t[1], t[2])
		case opAdd:
			addTo(&v[o.dst], &v[o.a], &v[o.b])
		case opSub:
			subTo(&v[o.dst], &v[o.a], &v[o.b])
		case opWinding:
			s.wind[o.cell].admittance(v[o.dst:], w)
		case opElimG, opElim2:
			if o.src < 0 {
				elimTo(&v[o.dst], &v[o.inv], &v[o.sum], &v[o.a], &v[o.b])
			} else {
				elimAddTo(&v[o.dst], &v[o.inv], &v[o.sum], &v[o.src], &v[o.a], &v[o.b])
			}
			if o.code == opElim2 {
				mulTo(&v[o.dst+1], &v[o.b], &v[o.inv])
			}
		case opElim1:
			invTo(&v[o.inv], &v[o.a])
			mulTo(&v[o.dst], &v[o.a], &v[o.inv])
		case opPivot:
			sum := &v[o.inv]
			*sum = v[o.aux[0]]
			for _, y := range o.aux[1:] {
				addTo(sum, sum, &v[y])
			}
			invTo(sum, sum)
		case opMul:
			mulTo(&v[o.dst], &v[o.a], &v[o.b])
		case opFill:
			if o.src < 0 {
				mulTo(&v[o.sum], &v[o.a], &v[o.b])
			} else {
				mulAddTo(&v[o.sum], &v[o.src], &v[o.a], &v[o.b])
			}
		case opMulAdd:
			mulAddTo(&v[o.dst], &v[o.src], &v[o.a], &v[o.b])
		case opMulSub:
			mulSubTo(&v[o.dst], &v[o.src], &v[o.a], &v[o.b])
		case opMulNeg:
			mulNegTo(&v[o.dst], &v[o.a], &v[o.b])
		case opWatch:
			watchPivot(&s.watch, v, o.aux)
		case opZero:
			v[o.dst] = cvec{}
		}
	}
}

// watchPivot keeps in watch the least ratio of a pivot to the sum of the moduli that make it.
func watchPivot(watch *vec, v []cvec, ys []int32) {
	for i := range lanes {
		var re, im, sum float64
		for _, y := range ys {
			r, m := v[y].re[i], v[y].im[i]
			re, im, sum = re+r, im+m, sum+abs(r)+abs(m)
		}
		if q := abs(re) + abs(im); q < watch[i]*sum {
			watch[i] = q / sum
		}
	}
}

func abs(x float64) float64 {
	if x < 0 {
		return -x
	}
	return x
}
