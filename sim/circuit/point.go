package circuit

import (
	"fmt"
	"math"
	"math/cmplx"
)

// A Point is the answer at one complex frequency.
type Point struct {
	Gain []complex128 // V_out/V_open, one per output
	Amp  complex128   // V_amp/V_open
	Zin  complex128   // Ω, between Amp and Return, the source resistance not included; infinite where no current flows
}

// pointScratch solves one frequency on the dense star-mesh network, in doubled precision and with the pivots
// chosen by size as it goes. It is the slow road: for limits, for s off the imaginary axis, and where the
// compiled order meets a vanishing pivot or coupled coils cost digits.
type pointScratch struct {
	place []int // folded node → row; -1: the return or not driven
	nodes []int // row → folded node; row 0 is Amp
	y     []cdoubled
	gnd   []cdoubled
	gone  []bool
	fac   []cdoubled // row k, at its elimination: y_kj/Σ
	inv   []cdoubled
	order []int
	volts []cdoubled
	psi   []cdoubled
	yin   complex128
	wind  []windValues
}

func newPointScratch(c *Circuit) *pointScratch {
	pt := &pointScratch{place: make([]int, c.net.Nodes)}
	for k := range pt.place {
		pt.place[k] = -1
	}
	pt.nodes = append(pt.nodes, Amp)
	for i := range c.p.steps {
		pt.nodes = append(pt.nodes, c.p.steps[i].node)
	}
	for i, k := range pt.nodes {
		pt.place[k] = i
	}
	n := len(pt.nodes)
	pt.y, pt.fac = make([]cdoubled, n*n), make([]cdoubled, n*n)
	pt.gnd, pt.inv, pt.volts, pt.psi = make([]cdoubled, n), make([]cdoubled, n), make([]cdoubled, n), make([]cdoubled, n)
	pt.gone, pt.order = make([]bool, n), make([]int, 0, n)
	for i := range c.p.wind {
		m := len(c.p.wind[i].coils)
		pt.wind = append(pt.wind, windValues{n: m, z: make([]cdoubled, m*m)})
	}
	return pt
}

// add puts admittance y between two folded nodes.
func (pt *pointScratch) add(a, b int, y cdoubled) {
	i, j, n := pt.place[a], pt.place[b], len(pt.nodes)
	switch {
	case i == j:
	case i < 0:
		pt.gnd[j] = pt.gnd[j].add(y)
	case j < 0:
		pt.gnd[i] = pt.gnd[i].add(y)
	default:
		pt.y[i*n+j] = pt.y[i*n+j].add(y)
		pt.y[j*n+i] = pt.y[j*n+i].add(y)
	}
}

// resonantShort is what is left of the reactances of a lossless trap that resonates exactly, as a resistance.
const resonantShort = 0x1p-60

// cellAt is the admittance of a cell at s. Where a lossless trap resonates exactly it is an all but perfect
// conductor, so that the network answers with its limit.
func cellAt(k *cell, t [3]float64, s complex128) cdoubled {
	ds := doubledOf(s)
	real, direct, inverse := doubledOf(complex(t[0], 0)), ds.scale(t[1]), ds.inv().scale(t[2])
	x := real.add(direct).add(inverse)
	if k.tank {
		return x
	}
	if x.zero() {
		x = doubledOf(complex((direct.modulus()+inverse.modulus())*resonantShort, 0))
	}
	return x.inv()
}

// fill assembles the network at s.
func (pt *pointScratch) fill(c *Circuit, s complex128, tri [][3]float64, wind []windValues) error {
	clear(pt.y)
	clear(pt.gnd)
	for i := range c.p.cells {
		k := &c.p.cells[i]
		pt.add(k.from, k.to, cellAt(k, tri[i], s))
	}
	for i := range c.p.ports {
		k := &c.p.ports[i]
		z := c.net.Branches[k.branch].Port.Impedance(s)
		if !finite(z) || !finite(1/z) {
			return fmt.Errorf("circuit: %s: no usable impedance at s = %.6g rad/s", c.net.Branches[k.branch].Name, s)
		}
		pt.add(k.from, k.to, doubledOf(1/z)) // rounded as in a sweep
	}
	for i := range c.p.wind {
		w, k := &pt.wind[i], &c.p.wind[i]
		w.r, w.m = wind[i].r, wind[i].m
		w.invert(s)
		for a, p := range k.coils {
			pt.add(p.from, p.to, w.z[a*w.n+a])
			for b := a + 1; b < w.n; b++ {
				q, y := k.coils[b], w.z[a*w.n+b]
				pt.add(p.from, q.to, y)
				pt.add(p.to, q.from, y)
				y = cdoubled{}.sub(y)
				pt.add(p.from, q.from, y)
				pt.add(p.to, q.to, y)
			}
		}
	}
	return nil
}

// solve finds the voltages per volt at Amp and the input admittance at s. real tells that s is real and
// positive: no pivot can vanish then.
func (pt *pointScratch) solve(c *Circuit, s complex128, tri [][3]float64, wind []windValues, real bool) error {
	if err := pt.fill(c, s, tri, wind); err != nil {
		return err
	}
	n := len(pt.nodes)
	clear(pt.gone)
	pt.order = pt.order[:0]
	for range n - 1 {
		k, quality := pt.pivot()
		if quality < 1e-25 && !real {
			return fmt.Errorf("circuit: at %g Hz the network resonates without any loss at %s and has no finite answer; give its coils their resistance, or load it",
				imag2hz(s), c.net.nodeName(pt.nodes[k]))
		}
		pt.eliminate(k)
	}
	pt.yin = pt.gnd[0].complex()
	pt.volts[0] = doubledOf(1)
	for i := len(pt.order) - 1; i >= 0; i-- {
		k := pt.order[i]
		var v cdoubled
		for j := range n {
			if f := pt.fac[k*n+j]; !f.zero() {
				v = v.add(f.mul(pt.volts[j]))
			}
		}
		pt.volts[k] = v
		if !(v.modulus() < huge) {
			return fmt.Errorf("circuit: at %g Hz the network resonates without any loss at %s and has no finite answer; give its coils their resistance, or load it",
				imag2hz(s), c.net.nodeName(pt.nodes[k]))
		}
	}
	return nil
}

func imag2hz(s complex128) float64 { return imag(s) / (2 * math.Pi) }

// pivot chooses the node whose sum of admittances is largest beside the sum of their moduli.
func (pt *pointScratch) pivot() (row int, quality float64) {
	n := len(pt.nodes)
	row, quality = -1, -1
	for k := 1; k < n; k++ {
		if pt.gone[k] {
			continue
		}
		sum, mod := pt.gnd[k], pt.gnd[k].modulus()
		for j := range n {
			if y := pt.y[k*n+j]; !pt.gone[j] && j != k && !y.zero() {
				sum = sum.add(y)
				mod += y.modulus()
			}
		}
		q := 0.0
		if mod > 0 {
			q = sum.modulus() / mod
		}
		if q > quality {
			row, quality = k, q
		}
	}
	return row, quality
}

// eliminate takes node k out by the star-mesh step and keeps its factors.
func (pt *pointScratch) eliminate(k int) {
	n := len(pt.nodes)
	sum := pt.gnd[k]
	for j := range n {
		if !pt.gone[j] && j != k {
			sum = sum.add(pt.y[k*n+j])
		}
	}
	inv := sum.inv()
	pt.gone[k] = true
	pt.inv[k] = inv
	pt.order = append(pt.order, k)
	for i := range n {
		pt.fac[k*n+i] = cdoubled{}
		if pt.gone[i] || pt.y[k*n+i].zero() {
			continue
		}
		f := pt.y[k*n+i].mul(inv)
		pt.fac[k*n+i] = f
		pt.gnd[i] = pt.gnd[i].add(f.mul(pt.gnd[k]))
		for j := i + 1; j < n; j++ {
			if y := pt.y[k*n+j]; !pt.gone[j] && !y.zero() {
				d := f.mul(y)
				pt.y[i*n+j] = pt.y[i*n+j].add(d)
				pt.y[j*n+i] = pt.y[j*n+i].add(d)
			}
		}
	}
}

// between is the voltage between two folded nodes per volt at Amp.
func (pt *pointScratch) between(from, to int) complex128 {
	return pt.across(pt.volts, from, to).complex()
}

// across is the difference of v, volts or psi, between two folded nodes; both are zero at the return.
func (pt *pointScratch) across(v []cdoubled, from, to int) cdoubled {
	var a, b cdoubled
	if i := pt.place[from]; i >= 0 {
		a = v[i]
	}
	if i := pt.place[to]; i >= 0 {
		b = v[i]
	}
	return a.sub(b)
}

// adjoint finds ψ for a current of g put in between two folded nodes, with ψ at Amp held at kappa.
func (pt *pointScratch) adjoint(from, to int, g, kappa complex128) {
	n := len(pt.nodes)
	clear(pt.psi)
	if i := pt.place[from]; i > 0 {
		pt.psi[i] = pt.psi[i].add(doubledOf(g))
	}
	if i := pt.place[to]; i > 0 {
		pt.psi[i] = pt.psi[i].sub(doubledOf(g))
	}
	for _, k := range pt.order {
		if pt.psi[k].zero() {
			continue
		}
		for j := 1; j < n; j++ {
			if f := pt.fac[k*n+j]; !f.zero() {
				pt.psi[j] = pt.psi[j].add(f.mul(pt.psi[k]))
			}
		}
	}
	pt.psi[0] = doubledOf(kappa)
	for i := len(pt.order) - 1; i >= 0; i-- {
		k := pt.order[i]
		v := pt.psi[k].mul(pt.inv[k])
		for j := range n {
			if f := pt.fac[k*n+j]; !f.zero() {
				v = v.add(f.mul(pt.psi[j]))
			}
		}
		pt.psi[k] = v
	}
}

// zin is the input impedance, infinite where no current flows.
func (pt *pointScratch) zin() complex128 {
	if pt.yin == 0 {
		return cmplx.Inf()
	}
	return 1 / pt.yin
}

// ampGain is V_amp/V_open behind a source of rs Ω.
func (pt *pointScratch) ampGain(rs float64) complex128 {
	if rs == 0 {
		return 1
	}
	g := 1 / (1 + complex(rs, 0)*pt.yin)
	if !finite(g) {
		return 0
	}
	return g
}

// At solves the network at the complex frequency s, in rad/s, not zero. It allocates.
func (c *Circuit) At(s complex128) (*Point, error) {
	if s == 0 || !finite(s) {
		return nil, fmt.Errorf("circuit: s = %g rad/s; ask for DC or Infinity", s)
	}
	if c.active != nil {
		return c.activePoint(func(part *Circuit) (*Point, error) { return part.At(s) })
	}
	return c.point(s, false)
}

func (c *Circuit) point(s complex128, limit bool) (*Point, error) {
	pt := newPointScratch(c)
	vals, loss := make([]float64, len(c.net.Branches)), make([]float64, len(c.net.Branches))
	for i := range vals {
		vals[i], loss[i] = c.net.Branches[i].Value, c.net.Branches[i].Loss
	}
	tri := make([][3]float64, len(c.p.cells))
	for i := range tri {
		tri[i] = c.p.cells[i].triple(c.net.Branches, vals, loss)
	}
	var wind []windValues
	for i := range c.p.wind {
		wind = append(wind, c.p.wind[i].values(vals, loss))
	}
	if err := pt.solve(c, s, tri, wind, limit); err != nil {
		return nil, err
	}
	a := &Point{Amp: pt.ampGain(c.net.Source), Zin: pt.zin()}
	for _, o := range c.p.adj {
		a.Gain = append(a.Gain, a.Amp*pt.between(o.from, o.to))
	}
	return a, nil
}

// The limits at DC and at infinite frequency are taken at a real, positive s so far out that no time
// constant of a network that can be built, 1e-15 s to 1e4 s, is felt: what is left of a gain that
// vanishes there is below limitTiny, of an impedance below limitTiny Ω, and an infinite one is above its
// reciprocal. At a real s every admittance but a mutual one is positive, and the elimination loses no digits.
const (
	limitDC       = 1e-22 // rad/s
	limitInfinity = 1e34  // rad/s
	limitTiny     = 1e-15
)

// DC is the limit of the answers as the frequency goes to zero: gains of capacitors in series with the way
// are exactly zero, and an impedance without bound is infinite. A driver known by a table counts as the
// resistance that its impedance has at the table's end.
func (c *Circuit) DC() (*Point, error) { return c.limit(limitDC) }

// Infinity is the limit of the answers as the frequency grows without bound.
func (c *Circuit) Infinity() (*Point, error) { return c.limit(limitInfinity) }

func (c *Circuit) limit(s float64) (*Point, error) {
	if c.active != nil {
		return c.activePoint(func(part *Circuit) (*Point, error) { return part.limit(s) })
	}
	a, err := c.point(complex(s, 0), true)
	if err != nil {
		return nil, err
	}
	snap := func(z complex128) complex128 {
		switch m := cmplx.Abs(z); {
		case m < limitTiny:
			return 0
		case m > 1/limitTiny:
			return cmplx.Inf()
		}
		return complex(real(z), 0)
	}
	for i := range a.Gain {
		a.Gain[i] = snap(a.Gain[i])
	}
	a.Amp, a.Zin = snap(a.Amp), snap(a.Zin)
	return a, nil
}
