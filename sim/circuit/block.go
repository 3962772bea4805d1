package circuit

// lanes is how many frequencies a block holds: enough to hide the cost of choosing an operation, few
// enough that a three-way's slots stay in the first-level cache.
const lanes = 16

// vec is one real number for each frequency of a block, cvec one complex number.
type vec [lanes]float64

type cvec struct{ re, im vec }

// The kernels below are the whole inner loop of a sweep. They take pointers to arrays of fixed length, so
// that no index is checked. A reciprocal is the conjugate over the squared modulus, and two of them share
// one division, 1/a = b·(1/ab) and 1/b = a·(1/ab), because a division costs as much as all the rest: the
// admittances here, 1e-15 S to 1e15 S, stay far from overflow in a product of two squares. Where one of a
// pair has no reciprocal both turn to NaN; finish sees it and mends both.

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
	for i := 0; i < lanes-1; i += 2 {
		x0 := w[i]*l - u[i]*s
		x1 := w[i+1]*l - u[i+1]*s
		m0, m1 := rr+x0*x0, rr+x1*x1
		d := 1 / (m0 * m1)
		d0, d1 := d*m1, d*m0
		y.re[i], y.re[i+1] = r*d0, r*d1
		y.im[i], y.im[i+1] = -x0*d0, -x1*d1
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
	for i := 0; i < lanes-1; i += 2 {
		r0, i0, r1, i1 := a.re[i], a.im[i], a.re[i+1], a.im[i+1]
		m0, m1 := r0*r0+i0*i0, r1*r1+i1*i1
		d := 1 / (m0 * m1)
		d0, d1 := d*m1, d*m0
		y.re[i], y.re[i+1] = r0*d0, r1*d1
		y.im[i], y.im[i+1] = -i0*d0, -i1*d1
	}
}

// elimTo eliminates a node whose branches are ya and yb: fac = ya/(ya+yb), and what joins the two far ends
// is sum = fac·yb.
func elimTo(fac, sum, ya, yb *cvec) {
	for i := range lanes {
		ar, ai, br, bi := ya.re[i], ya.im[i], yb.re[i], yb.im[i]
		sr, si := ar+br, ai+bi
		d := 1 / (sr*sr + si*si)
		fr, fi := (ar*sr+ai*si)*d, (ai*sr-ar*si)*d
		fac.re[i], fac.im[i] = fr, fi
		sum.re[i] = fr*br - fi*bi
		sum.im[i] = fr*bi + fi*br
	}
}

// elimAddTo is elimTo where the far ends are joined already, by src.
func elimAddTo(fac, sum, src, ya, yb *cvec) {
	for i := range lanes {
		ar, ai, br, bi := ya.re[i], ya.im[i], yb.re[i], yb.im[i]
		sr, si := ar+br, ai+bi
		d := 1 / (sr*sr + si*si)
		fr, fi := (ar*sr+ai*si)*d, (ai*sr-ar*si)*d
		fac.re[i], fac.im[i] = fr, fi
		sum.re[i] = src.re[i] + (fr*br - fi*bi)
		sum.im[i] = src.im[i] + (fr*bi + fi*br)
	}
}

// shareTo stores a/(a+b).
func shareTo(y, a, b *cvec) {
	for i := range lanes {
		ar, ai := a.re[i], a.im[i]
		sr, si := ar+b.re[i], ai+b.im[i]
		d := 1 / (sr*sr + si*si)
		y.re[i], y.im[i] = (ar*sr+ai*si)*d, (ai*sr-ar*si)*d
	}
}

// gainTo stores g = 1/(1 + rs·y).
func gainTo(g, y *cvec, rs float64) {
	for i := range lanes {
		g.re[i] = 1 + rs*y.re[i]
		g.im[i] = rs * y.im[i]
	}
	invTo(g, g)
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
				elimTo(&v[o.dst], &v[o.sum], &v[o.a], &v[o.b])
			} else {
				elimAddTo(&v[o.dst], &v[o.sum], &v[o.src], &v[o.a], &v[o.b])
			}
			if o.code == opElim2 {
				shareTo(&v[o.dst+1], &v[o.b], &v[o.a])
			}
		case opShare:
			shareTo(&v[o.dst], &v[o.a], &v[o.b])
		case opPivot:
			sum := &v[o.dst]
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
