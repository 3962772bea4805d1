package circuit

import (
	"errors"
	"fmt"
	"math"
	"math/cmplx"
)

const boltzmann = 1.380649e-23 // J/K, exact in the SI of 2019

// Noise returns the density of the thermal noise at an output in V²/Hz, of positive frequencies alone, at each of freqs in Hz, for
// a temperature in kelvin: 4kT·Re Y of every branch and of the source's resistance (J. B. Johnson, "Thermal Agitation of Electricity in
// Conductors", and H. Nyquist, "Thermal Agitation of Electric Charge in Conductors", Phys. Rev. 32, 1928, 97–113). Amplifiers are
// ideal and add none. It fails where the network has no answer.
//
// The equations are those of modified nodal analysis (C.-W. Ho, A. E. Ruehli and P. A. Brennan, IEEE Trans. Circuits Syst. 22(6), 1975,
// 504–509), solved once a frequency for the transposed matrix: what a current into each node makes of the output.
func Noise(n *Netlist, out Output, freqs []float64, kelvin float64) ([]float64, error) {
	if err := n.check([]Output{out}); err != nil {
		return nil, err
	}
	if !(kelvin >= 0) || math.IsInf(kelvin, 1) {
		return nil, fmt.Errorf("circuit: the temperature is %g K; give one above absolute zero", kelvin)
	}
	m := newNoiseEquations(n)
	density := make([]float64, len(freqs))
	for i, f := range freqs {
		if !(f > 0) || math.IsInf(f, 1) {
			return nil, fmt.Errorf("circuit: frequency is %g Hz; give a positive number", f)
		}
		sum, err := m.at(complex(0, 2*math.Pi*f), out)
		if err != nil {
			return nil, fmt.Errorf("circuit: noise at %g Hz: %w", f, err)
		}
		density[i] = 4 * boltzmann * kelvin * sum
	}
	return density, nil
}

// noiseEquations are the unknowns: the nodes' voltages but that of Return, then the currents of what is no admittance.
type noiseEquations struct {
	n        *Netlist
	elements []noiseElement
	current  map[int]int // element → its unknown current
	coil     []int       // branch → element, of coils
	size     int
	a        []complex128
	x        []complex128
}

// A noiseElement is a branch, or the loss in series with one.
type noiseElement struct {
	kind     Kind
	from, to int
	value    float64
	port     OnePort
}

func newNoiseEquations(n *Netlist) *noiseEquations {
	m := &noiseEquations{n: n, current: map[int]int{}, coil: make([]int, len(n.Branches))}
	nodes := n.Nodes
	add := func(kind Kind, from, to int, value float64, port OnePort) {
		m.elements = append(m.elements, noiseElement{kind, from, to, value, port})
	}
	for i := range n.Branches {
		b := &n.Branches[i]
		to := b.To
		if b.isOpen() {
			continue
		}
		if b.Loss > 0 {
			to = nodes
			nodes++
			add(Resistor, to, b.To, b.Loss, nil)
		}
		m.coil[i] = len(m.elements)
		add(b.Kind, b.From, to, b.Value, b.Port)
	}
	add(Resistor, Amp, Return, n.Source, nil)
	m.size = nodes - 1
	for i, e := range m.elements {
		if e.kind == Inductor || e.kind == Resistor && e.value == 0 {
			m.current[i] = m.size
			m.size++
		}
	}
	m.size += len(n.Amplifiers)
	m.a, m.x = make([]complex128, m.size*m.size), make([]complex128, m.size)
	return m
}

// put adds v to the transposed matrix, at the row and the column of two unknowns, -1 being the return.
func (m *noiseEquations) put(row, column int, v complex128) {
	if row >= 0 && column >= 0 {
		m.a[column*m.size+row] += v
	}
}

// at returns Σ Re Y·|Z|² over the branches at s, in V²/A²·S: Z is what a current through the branch makes of the output.
func (m *noiseEquations) at(s complex128, out Output) (float64, error) {
	clear(m.a)
	clear(m.x)
	admittance := make([]complex128, len(m.elements))
	for i, e := range m.elements {
		from, to := e.from-1, e.to-1
		if k, ok := m.current[i]; ok {
			m.put(from, k, 1)
			m.put(to, k, -1)
			m.put(k, from, 1)
			m.put(k, to, -1)
			if e.kind == Inductor {
				m.put(k, k, -s*complex(e.value, 0))
			}
			continue
		}
		var y complex128
		switch e.kind {
		case Resistor:
			y = complex(1/e.value, 0)
		case Capacitor:
			y = s * complex(e.value, 0)
		default:
			if y = 1 / e.port.Impedance(s); !finite(y) {
				return 0, errors.New("a one-port has no usable impedance")
			}
		}
		admittance[i] = y
		m.put(from, from, y)
		m.put(to, to, y)
		m.put(from, to, -y)
		m.put(to, from, -y)
	}
	for _, c := range m.n.Couplings {
		i, j := m.coil[c.A], m.coil[c.B]
		mutual := -s * complex(c.K*geometricMean(m.elements[i].value, m.elements[j].value), 0)
		m.put(m.current[i], m.current[j], mutual)
		m.put(m.current[j], m.current[i], mutual)
	}
	for i, a := range m.n.Amplifiers {
		k := m.size - len(m.n.Amplifiers) + i
		m.put(a.Out-1, k, 1) // the current that the output gives
		m.put(k, a.Plus-1, 1)
		m.put(k, a.Minus-1, -1)
	}
	if out.From != Return {
		m.x[out.From-1]++
	}
	if out.To != Return {
		m.x[out.To-1]--
	}
	if !m.solve() {
		return 0, errors.New("the network has no finite answer; look for a node that hangs loose or an amplifier without feedback")
	}
	node := func(k int) complex128 {
		if k == Return {
			return 0
		}
		return m.x[k-1]
	}
	sum := 0.0
	for i, e := range m.elements {
		if g := real(admittance[i]); g > 0 {
			z := cmplx.Abs(node(e.from) - node(e.to))
			sum += g * z * z
		}
	}
	return sum, nil
}

// solve replaces x by the solution, by Gaussian elimination with the largest pivots; false if there is none.
func (m *noiseEquations) solve() bool {
	n, a, x := m.size, m.a, m.x
	for k := range n {
		best := k
		for r := k + 1; r < n; r++ {
			if modulus(a[r*n+k]) > modulus(a[best*n+k]) {
				best = r
			}
		}
		if !(modulus(a[best*n+k]) > 0) {
			// A node that nothing reaches may have any voltage, and nothing depends on it.
			if modulus(x[k]) == 0 {
				a[k*n+k] = 1
				continue
			}
			return false
		}
		if best != k {
			for c := k; c < n; c++ {
				a[k*n+c], a[best*n+c] = a[best*n+c], a[k*n+c]
			}
			x[k], x[best] = x[best], x[k]
		}
		p := 1 / a[k*n+k]
		for r := k + 1; r < n; r++ {
			f := a[r*n+k] * p
			if f == 0 {
				continue
			}
			for c := k + 1; c < n; c++ {
				a[r*n+c] -= f * a[k*n+c]
			}
			x[r] -= f * x[k]
		}
	}
	for k := n - 1; k >= 0; k-- {
		for c := k + 1; c < n; c++ {
			x[k] -= a[k*n+c] * x[c]
		}
		if x[k] /= a[k*n+k]; !finite(x[k]) {
			return false
		}
	}
	return true
}
