package circuit

import (
	"math"
	"math/cmplx"
)

// This file answers for the inside of the network: any node, any part. It keeps the node voltages of the
// whole grid, which Solve does not; the first question after a change of value solves once more.

// look fills s.nodes: voltages per volt of the open-circuit source, for the present values.
func (s *Sweep) look() error {
	if s.fresh {
		return nil
	}
	n, p := len(s.freqs), s.c.p
	if s.nodes == nil {
		s.nodes = grid(len(p.volts), n)
		s.across = grid(len(p.groups), n)
		for _, c := range p.coils {
			s.coils = append(s.coils, grid(len(c), n))
			s.amps = append(s.amps, grid(len(c), n))
		}
	}
	for b := range s.w {
		s.forward(b)
		s.run(p.more, b)
		s.run(p.rest, b)
		if err := s.finish(b); err != nil {
			return err
		}
		for l := range min(lanes, n-b*lanes) {
			i := b*lanes + l
			if s.bad[l] {
				if err := s.mend(i); err != nil {
					return err
				}
			}
			volt := func(v across, from, to int) complex128 {
				if s.bad[l] {
					return s.amp[i] * s.pt.between(from, to)
				}
				return s.amp[i] * s.lane(v, l)
			}
			for k := range s.nodes {
				s.nodes[k][i] = volt(p.volts[k], s.c.f.node[k], Return)
			}
			for g := range s.across {
				s.across[g][i] = volt(p.groups[g], s.c.f.groups[g].from, s.c.f.groups[g].to)
			}
			for w := range s.coils {
				for c, x := range p.wind[w].coils {
					s.coils[w][c][i] = volt(p.coils[w][c], x.from, x.to)
				}
				if err := s.coilAmps(w, i, l); err != nil {
					return err
				}
			}
		}
	}
	s.fresh = true
	return nil
}

func grid(rows, n int) [][]complex128 {
	g := make([][]complex128, rows)
	for i := range g {
		g[i] = make([]complex128, n)
	}
	return g
}

// NodeVoltage stores the voltage of a node of the netlist against the return, per volt of the open-circuit
// source; len(dst) must be the number of frequencies. Like the other methods of this kind it solves
// first where values have changed, and gives that solution's error.
func (s *Sweep) NodeVoltage(dst []complex128, node int) error {
	if s.active != nil {
		return s.active.nodeVoltage(dst, node)
	}
	return s.each(dst, func(i int) complex128 { return s.nodeAt(node, i) })
}

// BranchVoltage stores V(From) - V(To) of a branch, per volt of the open-circuit source. The voltage of a
// coil or a capacitor includes that of its series resistance.
func (s *Sweep) BranchVoltage(dst []complex128, branch int) error {
	if err := s.c.branch(branch); err != nil {
		return err
	}
	if s.active != nil {
		return s.active.superpose(dst, func(_ int, part *Sweep, dst []complex128) error { return part.BranchVoltage(dst, branch) })
	}
	return s.each(dst, func(i int) complex128 { return s.voltAt(branch, i) })
}

// BranchCurrent stores the current From → To of a branch, in A per volt of the open-circuit source. A
// short carries what its node's other branches leave over; a short that others bridge is given zero.
func (s *Sweep) BranchCurrent(dst []complex128, branch int) error {
	if err := s.c.branch(branch); err != nil {
		return err
	}
	if s.active != nil {
		return s.active.superpose(dst, func(_ int, part *Sweep, dst []complex128) error { return part.BranchCurrent(dst, branch) })
	}
	far, tree := s.c.behind(branch)
	return s.each(dst, func(i int) complex128 {
		if !s.c.net.Branches[branch].isShort() {
			return s.currentAt(branch, i)
		}
		if !tree {
			return 0
		}
		return s.leaving(far, i)
	})
}

// ImpedanceGradient stores ∂Zin/∂(value of a branch), in Ω per Ω, H or F. A part whose value was zero when
// the circuit was compiled, and a one-port, has none: zeros. Of a circuit with amplifiers it is not known: an error.
func (s *Sweep) ImpedanceGradient(dst []complex128, branch int) error {
	if err := s.c.branch(branch); err != nil {
		return err
	}
	if s.active != nil {
		return errActiveImpedance
	}
	return s.each(dst, func(i int) complex128 { return s.impedanceSlope(branch, i) })
}

// ImpedanceGradientAt is what ImpedanceGradient stores at frequency i alone.
func (s *Sweep) ImpedanceGradientAt(branch, i int) (complex128, error) {
	if err := s.c.branch(branch); err != nil {
		return 0, err
	}
	if s.active != nil {
		return 0, errActiveImpedance
	}
	if err := s.look(); err != nil {
		return 0, err
	}
	return s.impedanceSlope(branch, i), nil
}

func (s *Sweep) impedanceSlope(branch, i int) complex128 {
	z := s.zin[i]
	if cmplx.IsInf(z) {
		return 0 // nothing flows, and z moves from one infinity to another
	}
	// For one volt at Amp, ∂Yin is -I²·∂z: the input's adjoint network is the network itself.
	return z * z * s.powerSlope(branch, i) / (s.amp[i] * s.amp[i])
}

func (s *Sweep) each(dst []complex128, at func(i int) complex128) error {
	if len(dst) != len(s.freqs) {
		panic("circuit: len(dst) is not the number of frequencies")
	}
	if err := s.look(); err != nil {
		return err
	}
	for i := range dst {
		dst[i] = at(i)
	}
	return nil
}

func (s *Sweep) omega(i int) float64 { return 2 * math.Pi * s.freqs[i] }

func (s *Sweep) nodeAt(node, i int) complex128 {
	k := s.c.f.node[node]
	t, ok := s.c.f.inner[k]
	if !ok {
		return s.nodes[k][i]
	}
	g := &s.c.f.groups[t.group]
	var z complex128
	for _, l := range g.members[:t.n] {
		z += s.impedanceAt(l.branch, i)
	}
	return s.nodes[g.from][i] - z*s.chainCurrent(t.group, i)
}

// impedanceAt is Z of a resistor, an inductor or a capacitor by itself.
func (s *Sweep) impedanceAt(branch, i int) complex128 {
	v, r, w := s.vals[branch], s.loss[branch], s.omega(i)
	switch s.c.net.Branches[branch].Kind {
	case Resistor:
		return complex(v, 0)
	case Inductor:
		return complex(r, w*v)
	}
	return complex(r, -1/(w*v))
}

// chainCurrent is the current of a group, from its from to its to. A lossless trap that resonates exactly carries what
// the slow road's limit gives it.
func (s *Sweep) chainCurrent(group, i int) complex128 {
	g := &s.c.f.groups[group]
	dv := s.across[group][i]
	if g.port != nil {
		return dv / g.port.Impedance(complex(0, s.omega(i)))
	}
	var z complex128
	size := 0.0
	for _, l := range g.members {
		x := s.impedanceAt(l.branch, i)
		z += x
		size += cmplx.Abs(x)
	}
	if z == 0 {
		z = complex(size*resonantShort, 0)
	}
	return dv / z
}

// coilAmps finds the currents of a winding's coils at frequency i, which is in lane l. A current may be the small
// difference of large ones, as in a coil that is loaded with next to nothing; it is taken from the
// slow road then.
func (s *Sweep) coilAmps(winding, i, l int) error {
	w, coils := &s.wind[winding], s.c.p.wind[winding].coils
	w.invert(complex(0, s.omega(i)))
	amp := doubledOf(s.amp[i])
	left := w.currents(w.i, func(c int) cdoubled { return doubledOf(s.coils[winding][c][i]) })
	if left < lost || s.bad[l] {
		if err := s.mend(i); err != nil {
			return err
		}
		w.currents(w.i, func(c int) cdoubled { return s.pt.across(s.pt.volts, coils[c].from, coils[c].to).mul(amp) })
	}
	for c := range coils {
		s.amps[winding][c][i] = w.i[c].complex()
	}
	return nil
}

func (s *Sweep) currentAt(branch, i int) complex128 {
	if w := s.c.f.coilOf[branch]; w[0] >= 0 {
		return s.amps[w[0]][w[1]][i]
	}
	group := s.c.f.groupOf[branch]
	if group < 0 {
		return 0
	}
	c := s.chainCurrent(group, i)
	for _, l := range s.c.f.groups[group].members {
		if l.branch == branch && l.flip {
			return -c
		}
	}
	return c
}

func (s *Sweep) voltAt(branch, i int) complex128 {
	b := &s.c.net.Branches[branch]
	if group := s.c.f.groupOf[branch]; group >= 0 && b.Kind != Port {
		return s.currentAt(branch, i) * s.impedanceAt(branch, i)
	}
	if o := s.c.f.coilOf[branch]; o[0] >= 0 {
		return s.coils[o[0]][o[1]][i]
	}
	if group := s.c.f.groupOf[branch]; group >= 0 {
		return s.across[group][i]
	}
	return s.nodeAt(b.From, i) - s.nodeAt(b.To, i)
}

// powerSlope is I²·∂z/∂value of the branch, with the currents as they stand.
func (s *Sweep) powerSlope(branch, i int) complex128 {
	b, w, v := &s.c.net.Branches[branch], s.omega(i), s.vals[branch]
	if o := s.c.f.coilOf[branch]; o[0] >= 0 {
		x := &s.wind[o[0]]
		for c := range x.i {
			x.i[c] = doubledOf(s.amps[o[0]][c][i])
			x.j[c] = x.i[c]
		}
		return complex(0, w) * x.slope(o[1])
	}
	if s.c.f.groupOf[branch] < 0 || b.Kind == Port {
		return 0
	}
	c := s.currentAt(branch, i)
	switch b.Kind {
	case Resistor:
		return c * c
	case Inductor:
		return complex(0, w) * c * c
	}
	return complex(0, 1/(w*v*v)) * c * c
}

// behind finds, for a short, the nodes on its To side: what its current feeds. tree is false where other
// shorts join its ends anyway.
func (c *Circuit) behind(branch int) (far []bool, tree bool) {
	b := &c.net.Branches[branch]
	if !b.isShort() {
		return nil, false
	}
	far = make([]bool, c.net.Nodes)
	far[b.To] = true
	for changed := true; changed; {
		changed = false
		for i := range c.net.Branches {
			x := &c.net.Branches[i]
			if i != branch && x.isShort() && far[x.From] != far[x.To] {
				far[x.From], far[x.To] = true, true
				changed = true
			}
		}
	}
	return far, !far[b.From]
}

// leaving is the current that leaves a set of nodes through branches that are not shorts, less what
// the source puts in.
func (s *Sweep) leaving(far []bool, i int) complex128 {
	var sum complex128
	for k := range s.c.net.Branches {
		b := &s.c.net.Branches[k]
		if b.isShort() || far[b.From] == far[b.To] {
			continue
		}
		if far[b.From] {
			sum += s.currentAt(k, i)
		} else {
			sum -= s.currentAt(k, i)
		}
	}
	source := s.amp[i] / s.zin[i]
	if far[Amp] {
		sum -= source
	}
	if far[Return] {
		sum += source
	}
	return sum
}
