package circuit

// Voltages are found from the last node eliminated to the first: V_k is the mean of its neighbours'
// voltages, weighted by the factors a_kj, which add up to one if the return counts as a neighbour at 0 V.
// Hence the voltage between k and any node m that goes later is
//
//	V_k - V_m = Σ_j a_kj·(V_j - V_m),  j ≠ m
//
// and where k and m are neighbours every term is a voltage between neighbours again. So the small voltage
// across a coil far below the crossover is had as a product, not as the difference of two voltages that
// agree to ten digits.

// back writes the operations for the voltages that outputs, gradient and the rest need.
func (p *assembler) back(nodes int, outs []Output) {
	p.rank = make([]int, nodes)
	for k := range p.rank {
		p.rank[k] = nodes + 2
	}
	for i := range p.steps {
		p.rank[p.steps[i].node] = i
	}
	p.rank[Amp], p.rank[Return] = nodes, nodes+1
	p.known, p.leak = map[[2]int]int{{Amp, Return}: p.one}, map[int]int{}
	for _, o := range outs {
		p.outs = append(p.outs, p.between(p.f.node[o.From], p.f.node[o.To]))
	}
	p.dest = &p.more
	for i := range p.cells {
		c := &p.cells[i]
		v := p.between(c.from, c.to)
		if v.neg { // turn the cell, not the voltage
			c.from, c.to = c.to, c.from
		}
		c.dv = v.slot
	}
	p.dest = &p.rest
	for _, g := range p.f.groups {
		p.groups = append(p.groups, p.between(g.from, g.to))
	}
	for _, w := range p.wind {
		var c []across
		for _, x := range w.coils {
			c = append(c, p.between(x.from, x.to))
		}
		p.coils = append(p.coils, c)
	}
	for k := range nodes {
		p.volts = append(p.volts, p.between(p.f.node[k], Return))
	}
}

// between gives the voltage between two folded nodes, and writes its operations where it is not known yet.
func (p *assembler) between(k, m int) across {
	k, m = p.f.alive(k, p.driven), p.f.alive(m, p.driven)
	if k == m {
		return across{slot: noSlot}
	}
	if p.rank[k] > p.rank[m] {
		return across{p.forward(m, k), true}
	}
	return across{p.forward(k, m), false}
}

// forward is between for a node k that is eliminated before m.
func (p *assembler) forward(k, m int) int {
	if s, ok := p.known[[2]int{k, m}]; ok {
		return s
	}
	e := &p.steps[p.rank[k]]
	sum := noSlot
	term := func(factor int, v across) {
		o := op{code: opMul, a: int32(factor), b: int32(v.slot), src: int32(sum)}
		switch {
		case v.slot == noSlot:
			return
		case sum == noSlot && v.slot == p.one && !v.neg:
			sum = factor
			return
		case sum == noSlot && v.neg:
			o.code = opMulNeg
		case sum != noSlot && v.neg:
			o.code = opMulSub
		case sum != noSlot:
			o.code = opMulAdd
		}
		if e.coiled && sum != noSlot {
			watch := o
			watch.code = opWatchSum
			if v.neg {
				watch.code = opWatchDiff
			}
			p.emit(watch)
		}
		sum = p.slot()
		o.dst = int32(sum)
		p.emit(o)
	}
	for j, n := range e.near {
		if n != m {
			term(e.factor[j], p.between(n, m))
		}
	}
	if m != Return && e.ground != noSlot {
		term(p.leakage(e), p.between(Return, m))
	}
	if sum == noSlot { // k hangs on m alone
		sum = p.slot()
		p.emit(op{code: opZero, dst: int32(sum)})
	}
	p.known[[2]int{k, m}] = sum
	return sum
}

// leakage is the factor of the return in the step e.
func (p *assembler) leakage(e *elim) int {
	s, ok := p.leak[e.node]
	if !ok {
		s = p.slot()
		o := op{code: opShare, dst: int32(s), a: int32(e.ground)}
		if e.inv != noSlot {
			o.code, o.b = opMul, int32(e.inv)
		} else {
			o.b = e.all[0] // the other one of two
		}
		p.emit(o)
		p.leak[e.node] = s
	}
	return s
}
