package circuit

import (
	"fmt"
	"math"
	"math/cmplx"
)

// A Sweep evaluates a circuit over a grid of frequencies. It holds its own copy of the parts' values, which
// may be changed between solutions. One goroutine at a time may use it.
type Sweep struct {
	c     *Circuit
	freqs []float64 // Hz
	w, u  []vec     // ω and 1/ω, block by block; the last block is filled up with its last frequency
	ports [][]cvec  // admittance of each one-port, block by block

	vals, loss []float64    // of each branch
	tri        [][3]float64 // of each cell
	wind       []windValues
	watch      vec

	v       []cvec       // the slots of one block, and after them those of the adjoint
	gain    []complex128 // output by output
	amp     []complex128
	zin     []complex128
	grad    []complex128     // output by output, branch by branch; nil until wanted
	weights []float64        // of each parameter
	nodes   [][]complex128   // folded node → voltage per volt of the open-circuit source; nil until wanted
	across  [][]complex128   // group → the same across it
	coils   [][][]complex128 // winding, coil → the same across it
	amps    [][][]complex128 // winding, coil → its current
	fresh   bool             // the four above belong to the present values
	g, zinv cvec             // V_amp/V_open and the input impedance of the present block
	bad     [lanes]bool      // lanes of the present block that were mended
	pt      *pointScratch

	active *activeSweep // not nil: there are amplifiers, and all else is that of its parts
}

// NewSweep prepares a sweep over freqs, in Hz, positive and finite, in any order. The one-ports'
// impedances are taken here, once.
func (c *Circuit) NewSweep(freqs []float64) (*Sweep, error) {
	if len(freqs) == 0 {
		return nil, fmt.Errorf("circuit: no frequencies; give at least one")
	}
	for _, f := range freqs {
		if !(f > 0) || math.IsInf(f, 1) {
			return nil, fmt.Errorf("circuit: frequency is %g Hz; give a positive number", f)
		}
	}
	if c.active != nil {
		return c.newActiveSweep(freqs)
	}
	n := len(freqs)
	blocks := (n + lanes - 1) / lanes
	s := &Sweep{
		c: c, freqs: append([]float64(nil), freqs...),
		w: make([]vec, blocks), u: make([]vec, blocks),
		vals: make([]float64, len(c.net.Branches)), loss: make([]float64, len(c.net.Branches)),
		tri:  make([][3]float64, len(c.p.cells)),
		gain: make([]complex128, n*len(c.outs)), amp: make([]complex128, n), zin: make([]complex128, n),
		pt: newPointScratch(c),
	}
	for i := range s.w {
		for l := range lanes {
			w := 2 * math.Pi * freqs[min(i*lanes+l, n-1)]
			s.w[i][l], s.u[i][l] = w, 1/w
		}
	}
	for i := range c.net.Branches {
		s.vals[i], s.loss[i] = c.net.Branches[i].Value, c.net.Branches[i].Loss
	}
	for i := range c.p.cells {
		s.tri[i] = c.p.cells[i].triple(c.net.Branches, s.vals, s.loss)
	}
	for i := range c.p.wind {
		s.wind = append(s.wind, c.p.wind[i].values(s.vals, s.loss))
	}
	slots := c.p.slots + gradSlots(c.p)
	own := 0
	for _, a := range c.p.adj {
		own = max(own, a.slots)
	}
	s.v = make([]cvec, slots+own)
	for l := range lanes {
		s.v[c.p.one].re[l] = 1
	}
	if err := s.readPorts(blocks); err != nil {
		return nil, err
	}
	return s, nil
}

func (s *Sweep) readPorts(blocks int) error {
	s.ports = make([][]cvec, len(s.c.p.ports))
	for p := range s.ports {
		b := &s.c.net.Branches[s.c.p.ports[p].branch]
		s.ports[p] = make([]cvec, blocks)
		for i := range s.ports[p] {
			for l := range lanes {
				y := 1 / b.Port.Impedance(complex(0, s.w[i][l]))
				if !finite(y) {
					return fmt.Errorf("circuit: %s: no usable impedance at %g Hz", b.Name, s.w[i][l]/(2*math.Pi))
				}
				s.ports[p][i].re[l], s.ports[p][i].im[l] = real(y), imag(y)
			}
		}
	}
	return nil
}

// triple computes a cell's three numbers from its members' values.
func (c *cell) triple(branches []Branch, vals, loss []float64) [3]float64 {
	var t [3]float64
	for _, m := range c.members {
		v := vals[m]
		switch k := branches[m].Kind; {
		case c.tank && k == Resistor:
			t[0] += 1 / v
		case c.tank && k == Capacitor:
			t[1] += v
		case c.tank:
			t[2] += 1 / v
		case k == Resistor:
			t[0] += v
		case k == Inductor:
			t[0] += loss[m]
			t[1] += v
		default:
			t[0] += loss[m]
			t[2] += 1 / v
		}
	}
	return t
}

// SetValue changes the value of a branch, in Ω, H or F. A value of zero, or one for a branch that had zero
// when the circuit was compiled, would change the arrangement: it is an error, as is a one-port.
func (s *Sweep) SetValue(branch int, value float64) error {
	if s.active != nil {
		return s.active.set(func(part *Sweep) error { return part.SetValue(branch, value) })
	}
	if err := s.c.branch(branch); err != nil {
		return err
	}
	b := &s.c.net.Branches[branch]
	if b.Kind == Port {
		return fmt.Errorf("circuit: %s: a one-port has no value to set", b.Name)
	}
	if !(value > 0) || math.IsInf(value, 1) || b.isShort() || b.isOpen() {
		return fmt.Errorf("circuit: %s: cannot go from %g to %g in a sweep; zero changes the arrangement: compile it anew", b.Name, s.vals[branch], value)
	}
	s.vals[branch] = value
	s.renew(branch)
	return nil
}

// Value is the present value of a branch, in Ω, H or F.
func (s *Sweep) Value(branch int) float64 {
	if s.active != nil {
		s = s.active.parts[0]
	}
	return s.vals[branch]
}

// SetLoss changes the series resistance of an inductor or capacitor that was compiled with one, in Ω.
func (s *Sweep) SetLoss(branch int, ohm float64) error {
	if s.active != nil {
		return s.active.set(func(part *Sweep) error { return part.SetLoss(branch, ohm) })
	}
	if err := s.c.branch(branch); err != nil {
		return err
	}
	b := &s.c.net.Branches[branch]
	if b.Loss == 0 || b.Kind == Resistor || b.Kind == Port {
		return fmt.Errorf("circuit: %s: has no series resistance to set; compile it with one", b.Name)
	}
	if !(ohm > 0) || math.IsInf(ohm, 1) {
		return fmt.Errorf("circuit: %s: series resistance is %g Ω; give a positive number, or compile it without", b.Name, ohm)
	}
	s.loss[branch] = ohm
	s.renew(branch)
	return nil
}

// renew recomputes what depends on a branch's value.
func (s *Sweep) renew(branch int) {
	s.fresh = false
	if w := s.c.f.coilOf[branch][0]; w >= 0 {
		s.wind[w].set(&s.c.p.wind[w], s.vals, s.loss)
		return
	}
	if c := s.c.p.cellOf[branch]; c >= 0 {
		s.tri[c] = s.c.p.cells[c].triple(s.c.net.Branches, s.vals, s.loss)
	}
}

// Solve computes the gains and the input impedance at every frequency. It allocates nothing. An error tells
// where the network has no finite answer: at a resonance without any loss.
func (s *Sweep) Solve() error {
	if s.active != nil {
		return s.active.solve((*Sweep).Solve)
	}
	for b := range s.w {
		s.forward(b)
		if err := s.finish(b); err != nil {
			return err
		}
	}
	return nil
}

// forward eliminates block b and finds its node voltages.
func (s *Sweep) forward(b int) {
	p := s.c.p
	for i := range p.ports {
		s.v[p.ports[i].y] = s.ports[i][b]
	}
	for l := range lanes {
		s.watch[l] = 1
	}
	s.run(p.ops, b)
}

// lost is the share of its terms below which a sum that may cancel has cost so many digits that the frequency
// is solved again on the slow road: the pivot of a purely reactive node, and whatever coupled coils enter.
const lost = 1e-4

// huge is a gain that no passive network with any loss reaches; beyond it stand resonances without loss.
const huge = 1e8

// finish turns block b's slots into gains, and mends the frequencies at which the compiled order failed.
func (s *Sweep) finish(b int) error {
	n, first := len(s.freqs), b*lanes
	count := min(lanes, n-first)
	y := &s.v[s.c.p.yin]
	invTo(&s.zinv, y)
	gainTo(&s.g, y, s.c.net.Source)
	zin, amp := s.zin[first:first+count], s.amp[first:first+count]
	bad := false
	for l := range zin {
		zin[l] = complex(s.zinv.re[l], s.zinv.im[l])
		if y.re[l] == 0 && y.im[l] == 0 {
			zin[l] = cmplx.Inf()
		}
		amp[l] = complex(s.g.re[l], s.g.im[l])
		s.bad[l] = !(s.watch[l] > lost) || !(y.re[l]*y.re[l]+y.im[l]*y.im[l] <= math.MaxFloat64)
		bad = bad || s.bad[l]
	}
	for o, v := range s.c.p.outs {
		gain := s.gain[o*n+first : o*n+first+count]
		if v.slot == noSlot {
			clear(gain)
			continue
		}
		out, sign := &s.v[v.slot], 1.0
		if v.neg {
			sign = -1
		}
		for l := range gain {
			vr, vi, gr, gi := sign*out.re[l], sign*out.im[l], s.g.re[l], s.g.im[l]
			hr, hi := vr*gr-vi*gi, vr*gi+vi*gr
			gain[l] = complex(hr, hi)
			if !(hr*hr+hi*hi < huge*huge) {
				s.bad[l], bad = true, true
			}
		}
	}
	if !bad {
		return nil
	}
	for l := range count {
		if s.bad[l] {
			if err := s.mend(first + l); err != nil {
				return err
			}
		}
	}
	return nil
}

// lane is a voltage in lane l.
func (s *Sweep) lane(v across, l int) complex128 {
	switch {
	case v.slot == noSlot:
		return 0
	case v.neg:
		return complex(-s.v[v.slot].re[l], -s.v[v.slot].im[l])
	}
	return complex(s.v[v.slot].re[l], s.v[v.slot].im[l])
}

// mend solves frequency i by the slow road.
func (s *Sweep) mend(i int) error {
	pt := s.pt
	if err := pt.solve(s.c, complex(0, 2*math.Pi*s.freqs[i]), s.tri, s.wind, false); err != nil {
		return err
	}
	g := pt.ampGain(s.c.net.Source)
	for o := range s.c.p.adj {
		s.gain[o*len(s.freqs)+i] = g * pt.between(s.c.p.adj[o].from, s.c.p.adj[o].to)
	}
	s.amp[i] = g
	s.zin[i] = pt.zin()
	return nil
}

// modulus is the larger of the parts' moduli: enough to tell finite from not, NaN included.
func modulus(z complex128) float64 {
	a, b := math.Abs(real(z)), math.Abs(imag(z))
	if a > b || math.IsNaN(a) {
		return a
	}
	return b // NaN included
}

func finite(z complex128) bool {
	return modulus(z) <= math.MaxFloat64 && modulus(complex(imag(z), real(z))) <= math.MaxFloat64
}

// Gain copies the gains V_out/V_open of an output, as of the last Solve or Gradient, or of the last question about the
// inside of the network (inside.go), which solves too; len(dst) must be the number of frequencies.
func (s *Sweep) Gain(dst []complex128, out int) {
	if s.active != nil {
		s.copyTo(dst, s.active.gain[out])
		return
	}
	n := len(s.freqs)
	s.copyTo(dst, s.gain[out*n:(out+1)*n])
}

// AmpGain copies V_amp/V_open: what the source resistance leaves of the open-circuit voltage.
func (s *Sweep) AmpGain(dst []complex128) {
	if s.active != nil {
		s.active.ampGain(dst)
		return
	}
	s.copyTo(dst, s.amp)
}

// InputImpedance copies the impedance in Ω between Amp and Return, the source resistance not included.
// Where no current flows it is infinite.
func (s *Sweep) InputImpedance(dst []complex128) {
	if s.active != nil {
		s.active.inputImpedance(dst)
		return
	}
	s.copyTo(dst, s.zin)
}

func (s *Sweep) copyTo(dst, src []complex128) {
	if len(dst) != len(src) {
		panic("circuit: len(dst) is not the number of frequencies")
	}
	copy(dst, src)
}
