package circuit_test

import (
	"math/big"

	"sixdown/sim/circuit"
)

// The number of bits carried here: 96 decimal digits, so that a difference over 1e-20 of a value keeps 76.
const bigBits = 320

// bigNumber is a complex number in extended precision; its methods return new numbers.
type bigNumber struct{ re, im *big.Float }

func bigFloat(x float64) *big.Float { return new(big.Float).SetPrec(bigBits).SetFloat64(x) }

func bigZero() *big.Float { return new(big.Float).SetPrec(bigBits) }

func bigReal(x *big.Float) *bigNumber { return &bigNumber{x, bigZero()} }

func (a *bigNumber) add(b *bigNumber) *bigNumber {
	return &bigNumber{bigZero().Add(a.re, b.re), bigZero().Add(a.im, b.im)}
}

func (a *bigNumber) sub(b *bigNumber) *bigNumber {
	return &bigNumber{bigZero().Sub(a.re, b.re), bigZero().Sub(a.im, b.im)}
}

func (a *bigNumber) mul(b *bigNumber) *bigNumber {
	re := bigZero().Mul(a.re, b.re)
	re.Sub(re, bigZero().Mul(a.im, b.im))
	im := bigZero().Mul(a.re, b.im)
	im.Add(im, bigZero().Mul(a.im, b.re))
	return &bigNumber{re, im}
}

func (a *bigNumber) inv() *bigNumber {
	n := bigZero().Mul(a.re, a.re)
	n.Add(n, bigZero().Mul(a.im, a.im))
	re := bigZero().Quo(a.re, n)
	im := bigZero().Quo(a.im, n)
	return &bigNumber{re, im.Neg(im)}
}

// over is a divided by the real x.
func (a *bigNumber) over(x *big.Float) *bigNumber {
	return &bigNumber{bigZero().Quo(a.re, x), bigZero().Quo(a.im, x)}
}

func (a *bigNumber) complex128() complex128 {
	re, _ := a.re.Float64()
	im, _ := a.im.Float64()
	return complex(re, im)
}

// size is |re| + |im|, near enough to choose a pivot by.
func (a *bigNumber) size() float64 {
	re, _ := bigZero().Abs(a.re).Float64()
	im, _ := bigZero().Abs(a.im).Float64()
	return re + im
}

// A bigCircuit is a netlist in extended precision: nodal equations, with the currents of coils, wires and the
// source as further unknowns. Ports are replaced by their Branches.
type bigCircuit struct {
	nodes     int
	branches  []circuit.Branch // the netlist's own first
	values    []*big.Float     // by branch; the test moves them
	couplings []circuit.Coupling
	source    float64
	outs      []circuit.Output
}

func newBigCircuit(n *circuit.Netlist, outs []circuit.Output) *bigCircuit {
	c := &bigCircuit{nodes: n.Nodes, couplings: n.Couplings, source: n.Source, outs: outs}
	c.branches = append(c.branches, n.Branches...)
	for _, b := range n.Branches {
		if b.Kind != circuit.Port {
			continue
		}
		inner := b.Port.Branches()
		first := c.nodes - 2 // of the port's own nodes, which are numbered from 2
		place := func(node int) int {
			switch node {
			case 0:
				return b.To
			case 1:
				return b.From
			}
			c.nodes = max(c.nodes, first+node+1)
			return first + node
		}
		for _, p := range inner {
			p.From, p.To = place(p.From), place(p.To)
			c.branches = append(c.branches, p)
		}
	}
	for _, b := range c.branches {
		c.values = append(c.values, bigFloat(b.Value))
	}
	return c
}

// solve gives the gain of each output and the impedance at Amp, at w rad/s.
func (c *bigCircuit) solve(w float64) (gains []*bigNumber, zin *bigNumber) {
	unknowns := c.nodes - 1
	coil := make(map[int]int) // branch → unknown, of wires too
	wire := func(b circuit.Branch) bool { return b.Kind == circuit.Resistor && b.Value == 0 }
	for k, b := range c.branches {
		if b.Kind == circuit.Inductor || wire(b) {
			coil[k] = unknowns
			unknowns++
		}
	}
	feed := unknowns // the current out of the source
	unknowns++
	m := newBigSystem(unknowns)
	one := bigReal(bigFloat(1))
	minus := bigReal(bigFloat(-1))
	omega := bigFloat(w)
	// volt adds x·(V_from - V_to) to row.
	volt := func(row int, from, to int, x *bigNumber) {
		if from != circuit.Return {
			m.add(row, from-1, x)
		}
		if to != circuit.Return {
			m.add(row, to-1, x.mul(minus))
		}
	}
	// flow adds to the sums of currents at both ends that of unknown k.
	flow := func(from, to, k int) {
		if from != circuit.Return {
			m.add(from-1, k, one)
		}
		if to != circuit.Return {
			m.add(to-1, k, minus)
		}
	}
	for k, b := range c.branches {
		switch {
		case wire(b):
			volt(coil[k], b.From, b.To, one)
			flow(b.From, b.To, coil[k])
			continue
		case b.Kind == circuit.Inductor:
			volt(coil[k], b.From, b.To, one)
			z := &bigNumber{bigFloat(b.Loss), bigZero().Mul(omega, c.values[k])}
			m.add(coil[k], coil[k], z.mul(minus))
			flow(b.From, b.To, coil[k])
			continue
		case b.Kind == circuit.Port:
			continue
		}
		var y *bigNumber
		if b.Kind == circuit.Resistor {
			y = bigReal(c.values[k]).inv()
		} else {
			sc := &bigNumber{bigZero(), bigZero().Mul(omega, c.values[k])}
			y = sc.mul(one.add(sc.mul(bigReal(bigFloat(b.Loss)))).inv())
		}
		if b.From != circuit.Return {
			volt(b.From-1, b.From, b.To, y)
		}
		if b.To != circuit.Return {
			volt(b.To-1, b.To, b.From, y)
		}
	}
	for _, x := range c.couplings {
		mutual := bigZero().Mul(c.values[x.A], c.values[x.B])
		mutual.Sqrt(mutual).Mul(mutual, bigFloat(-x.K)).Mul(mutual, omega)
		m.add(coil[x.A], coil[x.B], &bigNumber{bigZero(), mutual})
		m.add(coil[x.B], coil[x.A], &bigNumber{bigZero(), mutual})
	}
	m.add(circuit.Amp-1, feed, minus)
	m.add(feed, circuit.Amp-1, one)
	m.add(feed, feed, bigReal(bigFloat(c.source)))
	m.right[feed] = one
	x := m.solve()
	node := func(k int) *bigNumber {
		if k == circuit.Return {
			return bigReal(bigZero())
		}
		return x[k-1]
	}
	for _, o := range c.outs {
		gains = append(gains, node(o.From).sub(node(o.To)))
	}
	return gains, node(circuit.Amp).mul(x[feed].inv())
}

// A bigSystem is a system of linear equations; nil stands for 0.
type bigSystem struct {
	a     [][]*bigNumber
	right []*bigNumber
}

func newBigSystem(n int) *bigSystem {
	m := &bigSystem{a: make([][]*bigNumber, n), right: make([]*bigNumber, n)}
	for i := range m.a {
		m.a[i] = make([]*bigNumber, n)
	}
	return m
}

func (m *bigSystem) add(i, j int, x *bigNumber) {
	if m.a[i][j] != nil {
		x = m.a[i][j].add(x)
	}
	m.a[i][j] = x
}

// solve is Gaussian elimination with partial pivoting; it spoils m.
func (m *bigSystem) solve() []*bigNumber {
	n := len(m.a)
	less := func(from, x *bigNumber) *bigNumber {
		if from == nil {
			from = bigReal(bigZero())
		}
		return from.sub(x)
	}
	for k := range n {
		pivot, most := k, 0.0
		for i := k; i < n; i++ {
			if m.a[i][k] != nil && m.a[i][k].size() > most {
				pivot, most = i, m.a[i][k].size()
			}
		}
		m.a[k], m.a[pivot] = m.a[pivot], m.a[k]
		m.right[k], m.right[pivot] = m.right[pivot], m.right[k]
		inverse := m.a[k][k].inv()
		for i := k + 1; i < n; i++ {
			if m.a[i][k] == nil {
				continue
			}
			factor := m.a[i][k].mul(inverse)
			m.a[i][k] = nil
			for j := k + 1; j < n; j++ {
				if m.a[k][j] != nil {
					m.a[i][j] = less(m.a[i][j], factor.mul(m.a[k][j]))
				}
			}
			if m.right[k] != nil {
				m.right[i] = less(m.right[i], factor.mul(m.right[k]))
			}
		}
	}
	x := make([]*bigNumber, n)
	for k := n - 1; k >= 0; k-- {
		sum := m.right[k]
		for j := k + 1; j < n; j++ {
			if m.a[k][j] != nil {
				sum = less(sum, m.a[k][j].mul(x[j]))
			}
		}
		if sum == nil {
			sum = bigReal(bigZero())
		}
		x[k] = sum.mul(m.a[k][k].inv())
	}
	return x
}
