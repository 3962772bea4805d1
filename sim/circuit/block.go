package circuit

// lanes is how many frequencies a block holds: enough to hide the cost of choosing an operation, few
// enough that a three-way's slots stay in the first-level cache.
const lanes = 16

// vec is one real number for each frequency of a block, cvec one complex number.
type vec [lanes]float64

type cvec struct{ re, im vec }

// run evaluates operations for block b. The slots of one-ports and the slot `one` must be filled.
func (s *Sweep) run(ops []op, b int) {
	v, w, u, tri := s.v, &s.w[b], &s.u[b], s.tri
	for i := range ops {
		o := &ops[i]
		switch o.code {
		case opTank:
			t := &tri[o.cell]
			tankTo(&v[o.dst], w, u, t[0], t[1], t[2])
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
		case opWatchSum:
			watchSum(&s.watch, &v[o.src], &v[o.a], &v[o.b], 1)
		case opWatchDiff:
			watchSum(&s.watch, &v[o.src], &v[o.a], &v[o.b], -1)
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

// watchSum keeps in watch the least ratio of s + sign·a·b to the moduli of its two terms.
func watchSum(watch *vec, s, a, b *cvec, sign float64) {
	for i := range lanes {
		re := sign * (a.re[i]*b.re[i] - a.im[i]*b.im[i])
		im := sign * (a.re[i]*b.im[i] + a.im[i]*b.re[i])
		sum := abs(s.re[i]) + abs(s.im[i]) + abs(re) + abs(im)
		if q := abs(s.re[i]+re) + abs(s.im[i]+im); q < watch[i]*sum {
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

// gainTo stores 1/(1 + rs·y): what a source resistance leaves of a volt.
func gainTo(g, y *cvec, rs float64) {
	scaleTo(g, y, rs)
	for i := range lanes {
		g.re[i]++
	}
	invTo(g, g)
}
