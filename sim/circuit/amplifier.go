package circuit

import (
	"errors"
	"fmt"
	"math"
	"math/cmplx"
	"slices"
)

// An active circuit is solved by superposition. With the output of every amplifier held by a source of its own the rest is passive, and
// is solved as any passive network is: once for the network's own source, with the outputs at 0 V, and once for 1 V at each output.
// What the outputs then are follows from V(Plus) = V(Minus) for all, a small system of equations a frequency. So nothing of the
// elimination, its watched sums and its derivatives need know of amplifiers.
type active struct {
	parts  []*Circuit // for the network's source, then for each amplifier's output
	nodes  [][]int    // by part: node of the netlist → node of the part
	amps   []Amplifier
	source int // branch of the parts of the outputs that is the source's resistance; -1: it has none
}

func compileActive(c *Circuit) (*active, error) {
	n := &c.net
	a := &active{amps: n.Amplifiers, source: -1}
	if n.Source > 0 {
		a.source = len(n.Branches)
	}
	for i := range a.amps {
		for j := range i {
			if a.amps[i].Out == a.amps[j].Out {
				return nil, fmt.Errorf("circuit: %s and %s have their outputs at one node, %s; part them", a.amps[j].Name, a.amps[i].Name, n.nodeName(a.amps[i].Out))
			}
		}
	}
	for k := -1; k < len(a.amps); k++ {
		part, nodes := a.part(n, k)
		outs := make([]Output, 0, len(c.outs)+len(a.amps)+1)
		for _, o := range c.outs {
			outs = append(outs, Output{nodes[o.From], nodes[o.To]})
		}
		for i := range a.amps {
			outs = append(outs, Output{nodes[a.amps[i].Plus], nodes[a.amps[i].Minus]})
		}
		outs = append(outs, Output{nodes[Amp], Return})
		compiled, err := Compile(part, outs)
		if err != nil {
			return nil, err
		}
		a.parts, a.nodes = append(a.parts, compiled), append(a.nodes, nodes)
	}
	return a, nil
}

// part returns the passive netlist that the output of amplifier k drives, or for -1 the network's own source, all other outputs being
// at 0 V, and where the nodes have gone.
func (a *active) part(n *Netlist, k int) (*Netlist, []int) {
	p := &Netlist{Nodes: n.Nodes, NodeNames: n.NodeNames, Branches: slices.Clone(n.Branches), Couplings: n.Couplings, Source: n.Source}
	nodes := upTo(n.Nodes)
	for i := range a.amps {
		nodes[a.amps[i].Out] = Return
	}
	if k >= 0 {
		p.Source = 0
		nodes[Amp], nodes[a.amps[k].Out] = a.amps[k].Out, Amp
		if n.Source == 0 {
			nodes[Amp] = Return
		} else {
			p.Branches = append(p.Branches, Branch{Name: "the source's resistance", From: Amp, To: Return, Value: n.Source})
		}
		p.NodeNames = slices.Clone(n.NodeNames)
		for i, to := range nodes {
			if i < len(n.NodeNames) && to > Return {
				p.NodeNames[to] = n.NodeNames[i]
			}
		}
	}
	for i := range p.Branches {
		b := &p.Branches[i]
		b.From, b.To = nodes[b.From], nodes[b.To]
	}
	return p, nodes
}

// An activeSweep is a Sweep of a circuit with amplifiers.
type activeSweep struct {
	c     *Circuit
	freqs []float64
	parts []*Sweep
	volts [][]complex128 // by part: what its source is, per volt of the open-circuit source; 1 for the first
	pull  [][]complex128 // by output, by amplifier: how much the output moves with what the amplifier's inputs are apart; row by row
	gain  [][]complex128 // by output
	work  []complex128
	some  []complex128
	m     []complex128 // of one frequency, amplifiers × (amplifiers + 1): how far the inputs are apart for 1 V at each output, and for the source
	stale bool         // values have changed since the last solve
}

var errActiveImpedance = errors.New("circuit: how the input impedance moves with a part is not known where there are amplifiers; leave out what limits it")

func (c *Circuit) newActiveSweep(freqs []float64) (*Sweep, error) {
	n := len(freqs)
	s := &activeSweep{c: c, freqs: slices.Clone(freqs), work: make([]complex128, n), some: make([]complex128, n)}
	for _, p := range c.active.parts {
		part, err := p.NewSweep(freqs)
		if err != nil {
			return nil, err
		}
		s.parts = append(s.parts, part)
		s.volts = append(s.volts, make([]complex128, n))
	}
	for i := range s.volts[0] {
		s.volts[0][i] = 1
	}
	amps := len(c.active.amps)
	for range c.outs {
		s.gain = append(s.gain, make([]complex128, n))
		for range amps {
			s.pull = append(s.pull, make([]complex128, n))
		}
	}
	s.m = make([]complex128, amps*(amps+1))
	s.stale = true
	return &Sweep{c: c, freqs: s.freqs, active: s}, nil
}

// set changes all parts alike. A branch that is both ends at one node in a part has its value there too.
func (s *activeSweep) set(change func(part *Sweep) error) error {
	s.stale = true
	for _, p := range s.parts {
		if err := change(p); err != nil {
			return err
		}
	}
	return nil
}

// solve solves all parts and finds what the outputs are. A gain is that of the first part plus each output's share g of it; the inputs of
// amplifier j are apart by d_j plus each output's share a_jk, so that the outputs are v = -a⁻¹d, and what a change of d_j makes of a
// gain is -(gᵀa⁻¹)_j.
func (s *activeSweep) solve(solve func(*Sweep) error) error {
	for _, p := range s.parts {
		if err := solve(p); err != nil {
			return err
		}
	}
	s.stale = false
	amps, outs := len(s.c.active.amps), len(s.c.outs)
	width := amps + 1
	for i := range s.freqs {
		for j := range amps {
			row := s.m[j*width:]
			for k := range amps {
				row[k] = s.gainOf(k+1, outs+j, i)
			}
			row[amps] = s.gainOf(0, outs+j, i)
		}
		if err := s.invert(i); err != nil {
			return err
		}
		for k := range amps {
			v := complex128(0)
			for j := range amps {
				v -= s.inverse(k, j) * s.m[j*width+amps]
			}
			s.volts[k+1][i] = v
		}
		for o := range outs {
			g := s.gainOf(0, o, i)
			for k := range amps {
				g += s.volts[k+1][i] * s.gainOf(k+1, o, i)
			}
			s.gain[o][i] = g
			if !(modulus(g) < huge) {
				return fmt.Errorf("circuit: there is no finite answer at %g Hz: %s has feedback of the wrong sign or none; check it", s.freqs[i], s.c.active.amps[0].Name)
			}
			for j := range amps {
				pull := complex128(0)
				for k := range amps {
					pull -= s.gainOf(k+1, o, i) * s.inverse(k, j)
				}
				s.pull[o*amps+j][i] = pull
			}
		}
	}
	return nil
}

// gainOf is a part's gain of one of its outputs.
func (s *activeSweep) gainOf(part, out, i int) complex128 {
	return s.parts[part].gain[out*len(s.freqs)+i]
}

// inverse is what invert has left: its entry at k, j.
func (s *activeSweep) inverse(k, j int) complex128 {
	amps := len(s.c.active.amps)
	return s.m[k*(amps+1)+j]
}

// invert replaces the square at the left of m by its inverse, by Gauss and Jordan with the largest pivots.
func (s *activeSweep) invert(i int) error {
	n := len(s.c.active.amps)
	width := n + 1
	at := func(r, c int) *complex128 { return &s.m[r*width+c] }
	if n == 1 {
		if p := at(0, 0); *p != 0 {
			*p = 1 / *p
			return nil
		}
		return s.singular(i)
	}
	inv := make([]complex128, n*n)
	a := make([]complex128, n*n)
	for r := range n {
		inv[r*n+r] = 1
		for c := range n {
			a[r*n+c] = *at(r, c)
		}
	}
	for k := range n {
		best := k
		for r := k; r < n; r++ {
			if modulus(a[r*n+k]) > modulus(a[best*n+k]) {
				best = r
			}
		}
		if !(modulus(a[best*n+k]) > 0) {
			return s.singular(i)
		}
		for c := range n {
			a[k*n+c], a[best*n+c] = a[best*n+c], a[k*n+c]
			inv[k*n+c], inv[best*n+c] = inv[best*n+c], inv[k*n+c]
		}
		p := 1 / a[k*n+k]
		for c := range n {
			a[k*n+c] *= p
			inv[k*n+c] *= p
		}
		for r := range n {
			f := a[r*n+k]
			if r == k || f == 0 {
				continue
			}
			for c := range n {
				a[r*n+c] -= f * a[k*n+c]
				inv[r*n+c] -= f * inv[k*n+c]
			}
		}
	}
	for r := range n {
		copy(s.m[r*width:r*width+n], inv[r*n:(r+1)*n])
	}
	return nil
}

func (s *activeSweep) singular(i int) error {
	return fmt.Errorf("circuit: %s has no feedback at %g Hz, or only together with others; connect its output to its minus input by something", s.c.active.amps[0].Name, s.freqs[i])
}

// addGradient adds the derivative of an output's gain that derivative gives for each part and each of its outputs.
func (s *activeSweep) addGradient(dst []complex128, out int, derivative func(part *Sweep, dst []complex128, out int)) {
	amps, outs := len(s.c.active.amps), len(s.c.outs)
	for k, part := range s.parts {
		for j := -1; j < amps; j++ {
			at := out
			if j >= 0 {
				at = outs + j
			}
			clear(s.work)
			derivative(part, s.work, at)
			for i, d := range s.work {
				if d *= s.volts[k][i]; j >= 0 {
					d *= s.pull[out*amps+j][i]
				}
				dst[i] += d
			}
		}
	}
}

// superpose stores in dst the sum of what ask stores for each part, each times what its source is.
func (s *activeSweep) superpose(dst []complex128, ask func(k int, part *Sweep, dst []complex128) error) error {
	if len(dst) != len(s.freqs) {
		panic("circuit: len(dst) is not the number of frequencies")
	}
	if s.stale {
		if err := s.solve((*Sweep).Solve); err != nil {
			return err
		}
	}
	clear(dst)
	for k, part := range s.parts {
		if err := ask(k, part, s.work); err != nil {
			return err
		}
		for i, v := range s.work {
			dst[i] += s.volts[k][i] * v
		}
	}
	return nil
}

// ampGain stores V_amp/V_open, as of the last solve.
func (s *activeSweep) ampGain(dst []complex128) {
	out := len(s.c.outs) + len(s.c.active.amps)
	for i := range s.freqs {
		dst[i] = 0
		for k := range s.parts {
			dst[i] += s.volts[k][i] * s.gainOf(k, out, i)
		}
	}
}

func (s *activeSweep) nodeVoltage(dst []complex128, node int) error {
	return s.superpose(dst, func(k int, part *Sweep, dst []complex128) error {
		return part.NodeVoltage(dst, s.c.active.nodes[k][node])
	})
}

// inputImpedance stores the impedance between Amp and Return: the voltage there over the current that the source's resistance lets through.
func (s *activeSweep) inputImpedance(dst []complex128) {
	if s.c.active.source < 0 {
		if err := s.impedanceOfIdealSource(dst); err != nil {
			for i := range dst {
				dst[i] = cmplx.NaN() // it was solved before, and has an answer
			}
		}
		return
	}
	s.ampGain(dst)
	for i, v := range dst {
		current := (1 - v) / complex(s.c.net.Source, 0)
		if dst[i] = v / current; current == 0 {
			dst[i] = cmplx.Inf()
		}
	}
}

// impedanceOfIdealSource is inputImpedance without a source resistance: the current is the sum of those of the branches at Amp.
func (s *activeSweep) impedanceOfIdealSource(dst []complex128) error {
	clear(s.some)
	for b := range s.c.net.Branches {
		from, to := s.c.net.Branches[b].From, s.c.net.Branches[b].To
		sign := complex128(0)
		if from == Amp {
			sign++
		}
		if to == Amp {
			sign--
		}
		if sign == 0 {
			continue
		}
		if err := s.superpose(dst, func(_ int, part *Sweep, dst []complex128) error { return part.BranchCurrent(dst, b) }); err != nil {
			return err
		}
		for i, c := range dst {
			s.some[i] += sign * c
		}
	}
	for i, c := range s.some {
		if dst[i] = 1 / c; c == 0 {
			dst[i] = cmplx.Inf()
		}
	}
	return nil
}

// activePoint answers at one complex frequency. Without a source resistance it does not know Zin: not a number.
func (c *Circuit) activePoint(solve func(part *Circuit) (*Point, error)) (*Point, error) {
	amps, outs := len(c.active.amps), len(c.outs)
	s := &activeSweep{c: c, freqs: []float64{math.NaN()}, m: make([]complex128, amps*(amps+1))}
	var points []*Point
	for _, p := range c.active.parts {
		point, err := solve(p)
		if err != nil {
			return nil, err
		}
		points = append(points, point)
	}
	width := amps + 1
	for j := range amps {
		for k := range amps {
			s.m[j*width+k] = points[k+1].Gain[outs+j]
		}
	}
	if err := s.invert(0); err != nil {
		return nil, err
	}
	p := &Point{}
	volts := []complex128{1}
	for k := range amps {
		v := complex128(0)
		for j := range amps {
			v -= s.inverse(k, j) * points[0].Gain[outs+j]
		}
		volts = append(volts, v)
	}
	sum := func(out int) (v complex128) {
		for k, point := range points {
			v += volts[k] * point.Gain[out]
		}
		return v
	}
	for o := range outs {
		p.Gain = append(p.Gain, sum(o))
	}
	p.Amp, p.Zin = sum(outs+amps), cmplx.NaN()
	if current := (1 - p.Amp) / complex(c.net.Source, 0); c.net.Source > 0 {
		if p.Zin = p.Amp / current; current == 0 {
			p.Zin = cmplx.Inf()
		}
	}
	return p, nil
}
