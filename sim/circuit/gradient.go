package circuit

import "math"

// form is how a part's value enters its cell's immittance x: ∂x/∂value is c, jω·c or j·c/ω.
type form uint8

const (
	byScale form = iota
	byOmega
	byInverse
)

// A param is a branch whose value the gains are differentiated by.
type param struct {
	branch, cell int
	form         form
}

// listParams finds the parameters, cell by cell.
func (p *program) listParams(n *Netlist) {
	p.cellOf = make([]int, len(n.Branches))
	for i := range p.cellOf {
		p.cellOf[i] = -1
	}
	for c := range p.cells {
		for _, m := range p.cells[c].members {
			p.cellOf[m] = c
			f := byScale
			switch k := n.Branches[m].Kind; {
			case k == Inductor && !p.cells[c].tank, k == Capacitor && p.cells[c].tank:
				f = byOmega
			case k != Resistor:
				f = byInverse
			}
			p.params = append(p.params, param{m, c, f})
		}
	}
}

// weight is c of a parameter's form, its sign chosen so that ∂H/∂value is weight × (1, jω or j/ω) ×
// base·Δψ, with base = ΔV for a tank (∂H = -ΔV·Δψ·∂y) and y²·ΔV for a chain (∂H = +y²·ΔV·Δψ·∂z).
func (q *param) weight(tank bool, k Kind, v float64) float64 {
	switch {
	case tank && k == Resistor: // y = 1/R
		return 1 / (v * v)
	case tank && k == Capacitor: // y = jωC
		return -1
	case tank: // y = -j/(ωL)
		return -1 / (v * v)
	case k == Capacitor: // z = -j/(ωC)
		return 1 / (v * v)
	}
	return 1 // z = R, z = jωL
}

// gradSlots is how many slots the gradient uses before those of the adjoints: two of each parameter and one to
// work in. The first of a parameter's holds its pull: the derivative of a gain is pull·Δψ. The second, where
// there is a source resistance, holds pull·ΔV: what the derivative is per κ in a cell that the output's current
// does not reach, since ψ is κ·V there.
func gradSlots(p *program) int { return 2*len(p.params) + 1 }

// Gradient solves the network and computes the derivative of every output's gain by the value of every
// resistor, inductor and capacitor: one more back-substitution an output. It allocates only when first called.
func (s *Sweep) Gradient() error {
	if s.active != nil {
		return s.active.solve((*Sweep).Gradient)
	}
	stride := len(s.w) * lanes
	if s.grad == nil {
		s.grad = make([]complex128, len(s.c.outs)*len(s.c.net.Branches)*stride)
		s.weights = make([]float64, len(s.c.p.params))
	}
	for i := range s.weights {
		q := &s.c.p.params[i]
		s.weights[i] = q.weight(s.c.p.cells[q.cell].tank, s.c.net.Branches[q.branch].Kind, s.vals[q.branch])
	}
	for b := range s.w {
		s.forward(b)
		s.run(s.c.p.more, b)
		if len(s.wind) > 0 {
			s.run(s.c.p.rest, b)
		}
		if err := s.finish(b); err != nil {
			return err
		}
		s.pulls(b)
		for o := range s.c.p.adj {
			s.backward(b, o)
		}
		for l := range min(lanes, len(s.freqs)-b*lanes) {
			if s.bad[l] {
				if err := s.mendGradient(b*lanes + l); err != nil {
					return err
				}
			}
		}
	}
	return nil
}

func (s *Sweep) gradOf(o, branch int) []complex128 {
	stride := len(s.w) * lanes
	first := (o*len(s.c.net.Branches) + branch) * stride
	return s.grad[first : first+stride]
}

// pulls computes what all outputs share: each parameter's pull, weight × (1, jω or j/ω) × base, and pull·ΔV.
func (s *Sweep) pulls(b int) {
	p := s.c.p
	work := &s.v[p.slots+2*len(p.params)]
	base, of := work, -1
	for i := range p.params {
		q := &p.params[i]
		k := &p.cells[q.cell]
		dv := &s.v[k.dv]
		if q.cell != of {
			of = q.cell
			if base = dv; !k.tank {
				base = work
				squareMulTo(base, &s.v[k.y], dv)
			}
		}
		pull := &s.v[p.slots+2*i]
		if x := s.factor(q.form, b); x != nil {
			turnTo(pull, base, x, s.weights[i])
		} else {
			scaleTo(pull, base, s.weights[i])
		}
		if s.c.net.Source > 0 {
			mulTo(&s.v[p.slots+2*i+1], pull, dv)
		}
	}
}

// backward solves the adjoint of output o in block b and stores the derivatives.
func (s *Sweep) backward(b, o int) {
	p, a := s.c.p, &s.c.p.adj[o]
	kappa, minus := &s.v[a.kappa], &s.v[a.minus]
	s.v[a.g] = s.g
	scaleTo(minus, &s.g, -1)
	*kappa = cvec{}
	if out := p.outs[o]; out.slot != noSlot {
		rs := s.c.net.Source
		if out.neg {
			rs = -rs
		}
		mulTo(kappa, &s.g, &s.v[out.slot])
		mulTo(kappa, kappa, &s.g)
		scaleTo(kappa, kappa, rs)
	}
	runAdjoint(a.ops, s.v)
	work := &s.v[p.slots+2*len(p.params)]
	for i, n := 0, len(p.params); i < n; {
		c := p.params[i].cell
		k := &p.cells[c]
		from, to := k.from, k.to // to is eliminated later, or is Amp or the return
		first, right := p.slots+2*i, kappa
		switch {
		case a.hit[from] || a.hit[to]:
			right = s.psiBetween(work, a, from, to)
		case s.c.net.Source > 0:
			first++
		default: // κ is zero, and so are the derivatives, from the start
			for i < n && p.params[i].cell == c {
				i++
			}
			continue
		}
		for ; i < n && p.params[i].cell == c; i++ {
			dst := s.gradOf(o, p.params[i].branch)[b*lanes:]
			mulStore((*[lanes]complex128)(dst), &s.v[first], right)
			first += 2
		}
	}
	s.windingGradient(b, o)
}

// psiBetween is ψ(from) - ψ(to), in work or in a slot that holds it.
func (s *Sweep) psiBetween(work *cvec, a *adjoint, from, to int) *cvec {
	f := &s.v[a.psi[from]]
	if to == Return {
		return f
	}
	subTo(work, f, &s.v[a.psi[to]])
	return work
}

// factor is ω or 1/ω of block b, or nil for 1.
func (s *Sweep) factor(f form, b int) *vec {
	switch f {
	case byOmega:
		return &s.w[b]
	case byInverse:
		return &s.u[b]
	}
	return nil
}

// GainGradient copies ∂(V_out/V_open)/∂(value of a branch), in 1/Ω, 1/H or 1/F, as of the last Gradient.
// A one-port, and a part whose value was zero when the circuit was compiled, has none: zeros.
func (s *Sweep) GainGradient(dst []complex128, out, branch int) {
	if s.active != nil {
		clear(dst)
		s.AddGainGradient(dst, out, branch, 1)
		return
	}
	if s.grad == nil {
		panic("circuit: GainGradient before Gradient")
	}
	s.copyTo(dst, s.gradOf(out, branch)[:len(s.freqs)])
}

// GainGradientAt is what GainGradient copies at frequency i alone.
func (s *Sweep) GainGradientAt(out, branch, i int) complex128 {
	if s.active != nil {
		s.GainGradient(s.active.some, out, branch)
		return s.active.some[i]
	}
	if s.grad == nil {
		panic("circuit: GainGradientAt before Gradient")
	}
	return s.gradOf(out, branch)[i]
}

// AddGainGradient adds what GainGradient copies, times a factor, to dst.
func (s *Sweep) AddGainGradient(dst []complex128, out, branch int, factor float64) {
	if s.active != nil {
		s.active.addGradient(dst, out, func(part *Sweep, dst []complex128, out int) { part.AddGainGradient(dst, out, branch, factor) })
		return
	}
	if s.grad == nil {
		panic("circuit: AddGainGradient before Gradient")
	}
	if len(dst) != len(s.freqs) {
		panic("circuit: len(dst) is not the number of frequencies")
	}
	for i, g := range s.gradOf(out, branch)[:len(dst)] {
		dst[i] += complex(factor*real(g), factor*imag(g))
	}
}

// AddLossGradient adds ∂(V_out/V_open)/∂(series resistance of an inductor), in 1/Ω, times a factor, to dst, as of the last
// Gradient. With Z = R + jωL, it is that by L over jω. Of other branches it adds nothing.
func (s *Sweep) AddLossGradient(dst []complex128, out, branch int, factor float64) {
	if s.active != nil {
		s.active.addGradient(dst, out, func(part *Sweep, dst []complex128, out int) { part.AddLossGradient(dst, out, branch, factor) })
		return
	}
	if s.grad == nil {
		panic("circuit: AddLossGradient before Gradient")
	}
	if len(dst) != len(s.freqs) {
		panic("circuit: len(dst) is not the number of frequencies")
	}
	if s.c.net.Branches[branch].Kind != Inductor {
		return
	}
	for i, g := range s.gradOf(out, branch)[:len(dst)] {
		c := factor / s.omega(i)
		dst[i] += complex(c*imag(g), -c*real(g))
	}
}

// wiggle is the derivative of a cell's immittance by a parameter at s = jω, with the sign of weight.
func (s *Sweep) wiggle(i int, w float64) complex128 {
	p := s.c.p
	q := &p.params[i]
	c := q.weight(p.cells[q.cell].tank, s.c.net.Branches[q.branch].Kind, s.vals[q.branch])
	switch q.form {
	case byOmega:
		return complex(0, c*w)
	case byInverse:
		return complex(0, c/w)
	}
	return complex(c, 0)
}

// mendGradient is Gradient for frequency i alone, by the slow road.
func (s *Sweep) mendGradient(i int) error {
	pt, p, w := s.pt, s.c.p, 2*math.Pi*s.freqs[i]
	if err := pt.solve(s.c, complex(0, w), s.tri, s.wind, false); err != nil {
		return err
	}
	g := pt.ampGain(s.c.net.Source)
	for o := range s.c.p.adj {
		from, to := s.c.p.adj[o].from, s.c.p.adj[o].to
		pt.adjoint(from, to, g, complex(s.c.net.Source, 0)*g*g*pt.between(from, to))
		for j := range p.params {
			k := &p.cells[p.params[j].cell]
			x := pt.across(pt.volts, k.from, k.to).mul(pt.across(pt.psi, k.from, k.to))
			if !k.tank {
				y := cellAt(k, s.tri[p.params[j].cell], complex(0, w))
				x = x.mul(y).mul(y)
			}
			s.gradOf(o, p.params[j].branch)[i] = s.wiggle(j, w) * x.complex()
		}
		for n := range p.wind {
			coils := p.wind[n].coils
			s.windingAt(o, i, n,
				func(c int) cdoubled { return pt.across(pt.volts, coils[c].from, coils[c].to) },
				func(c int) cdoubled { return pt.across(pt.psi, coils[c].from, coils[c].to) })
		}
	}
	return nil
}

// windingGradient stores the derivatives by coupled coils. Few designs have any: it goes one frequency
// at a time.
func (s *Sweep) windingGradient(b, o int) {
	a := &s.c.p.adj[o]
	for n := range s.c.p.wind {
		coils := s.c.p.wind[n].coils
		for l := range min(lanes, len(s.freqs)-b*lanes) {
			psi := func(k int) complex128 {
				switch {
				case k == Amp:
					return s.lane(across{slot: a.kappa}, l)
				case a.hit[k]:
					return s.lane(across{slot: a.psi[k]}, l)
				}
				return s.lane(across{slot: a.kappa}, l) * s.lane(s.c.p.volts[k], l)
			}
			s.windingAt(o, b*lanes+l, n,
				func(c int) cdoubled { return doubledOf(s.lane(s.c.p.coils[n][c], l)) },
				func(c int) cdoubled { return doubledOf(psi(coils[c].from) - psi(coils[c].to)) })
		}
	}
}

// windingAt stores the derivatives of output o by the coils of winding n at frequency i, from the voltages
// across the coils and those of the adjoint network.
func (s *Sweep) windingAt(o, i, n int, volt, psi func(coil int) cdoubled) {
	w := &s.wind[n]
	jw := complex(0, 2*math.Pi*s.freqs[i])
	w.invert(jw)
	w.currents(w.i, volt)
	w.currents(w.j, psi)
	for a, c := range s.c.p.wind[n].coils {
		s.gradOf(o, c.branch)[i] = jw * w.slope(a)
	}
}
