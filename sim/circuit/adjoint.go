package circuit

// adjoint is the program of one output's adjoint network: a unit current is put in at the output, scaled
// by what the source resistance leaves of a volt, and the voltages ψ that it makes are found with
// the factors of the forward elimination, which serve again because the network is reciprocal.
//
// With g = V_amp/V_open and voltages V per volt at Amp, the gain is H = g·V_out, and its derivative by an
// admittance between two nodes is -ΔV·Δψ, where ψ at Amp is κ = Rs·g²·V_out: what the source resistance
// takes from every output when any admittance draws more current.
type adjoint struct {
	from, to int
	ops      []op
	psi      []int  // folded node → slot of ψ, for Amp and where hit; noSlot elsewhere
	hit      []bool // folded node is reached by the current; elsewhere ψ = κ·V
	slots    int    // slots used beyond the program's, κ, g and -g included
	kappa, g int    // slots to be filled before ops run
	minus    int
}

// pivots sees to it that 1/Σ is at hand wherever a current put in between two nodes passes.
func (p *assembler) pivots(from, to int) {
	passes := map[int]bool{from: true, to: true}
	for i := range p.steps {
		e := &p.steps[i]
		if !passes[e.node] {
			continue
		}
		if e.inv == noSlot {
			e.inv = p.invert(e.all)
		}
		for _, m := range e.near {
			passes[m] = true
		}
	}
}

// adjoint compiles the adjoint of the voltage from – to. ideal tells that the source has no resistance, so
// that κ is zero.
func (p *program) adjoint(from, to int, ideal bool) adjoint {
	first := p.slots + gradSlots(p)
	a := adjoint{from: from, to: to, slots: 3, kappa: first, g: first + 1, minus: first + 2}
	slot := func() int {
		a.slots++
		return first + a.slots - 1
	}
	inject := map[int]int{} // node → slot of the current put in
	if from != to {
		if from != Return && from != Amp {
			inject[from] = a.g
		}
		if to != Return && to != Amp {
			inject[to] = a.minus
		}
	}
	reached := map[int]bool{}
	for i := range p.steps {
		e := &p.steps[i]
		in, ok := inject[e.node]
		if !ok {
			continue
		}
		reached[e.node] = true
		for j, m := range e.near {
			if m == Amp {
				continue
			}
			dst := slot()
			o := op{code: opMul, dst: int32(dst), a: int32(e.factor[j]), b: int32(in)}
			if old, ok := inject[m]; ok {
				o.code, o.src = opMulAdd, int32(old)
			}
			a.ops = append(a.ops, o)
			inject[m] = dst
		}
	}
	p.spread(reached)
	a.psi = make([]int, len(p.volts))
	a.hit = make([]bool, len(p.volts))
	for k := range a.psi {
		a.psi[k], a.hit[k] = noSlot, reached[k]
	}
	a.psi[Amp] = a.kappa
	for i := len(p.steps) - 1; i >= 0; i-- {
		e := &p.steps[i]
		if !reached[e.node] {
			continue
		}
		at := noSlot
		if in, ok := inject[e.node]; ok {
			at = slot()
			a.ops = append(a.ops, op{code: opMul, dst: int32(at), a: int32(in), b: int32(e.inv)})
		}
		for j, m := range e.near {
			if m == Amp && ideal && at != noSlot {
				continue
			}
			dst := slot()
			o := op{code: opMul, dst: int32(dst), a: int32(e.factor[j]), b: int32(a.psi[m])}
			if at != noSlot {
				o.code, o.src = opMulAdd, int32(at)
			}
			a.ops = append(a.ops, o)
			at = dst
		}
		a.psi[e.node] = at
	}
	return a
}

// spread adds to reached every node that is joined to one in it without passing Amp or the return.
func (p *program) spread(reached map[int]bool) {
	for changed := true; changed; {
		changed = false
		for i := len(p.steps) - 1; i >= 0; i-- {
			e := &p.steps[i]
			for _, m := range e.near {
				if m != Amp && reached[m] != reached[e.node] {
					reached[m], reached[e.node] = true, true
					changed = true
				}
			}
		}
	}
}

// runAdjoint evaluates a's operations.
func runAdjoint(ops []op, v []cvec) {
	for i := range ops {
		o := &ops[i]
		if o.code == opMul {
			mulTo(&v[o.dst], &v[o.a], &v[o.b])
		} else {
			mulAddTo(&v[o.dst], &v[o.src], &v[o.a], &v[o.b])
		}
	}
}
