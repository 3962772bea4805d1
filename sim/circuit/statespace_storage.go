package circuit

import (
	"errors"
	"fmt"
)

// A hybrid is the network of resistors between the capacitors and the coils. Conductance of the links
// and the Cholesky factor for the voltages of the tree's resistors are kept.
type hybrid struct {
	link   matrix // S, diagonal
	factor matrix // upper triangular
}

func newHybrid(t *normalTree) *hybrid {
	h := &hybrid{link: newMatrix(len(t.link[Resistor]), len(t.link[Resistor]))}
	for k, i := range t.link[Resistor] {
		h.link.set(k, k, 1/t.from[i].value)
	}
	f := t.loops(Resistor, Resistor)
	m := f.mul(h.link).mul(f.t())
	for k, i := range t.tree[Resistor] {
		m.set(k, k, m.at(k, k)+1/t.from[i].value)
	}
	h.factor, _ = m.cholesky() // positive definite: a positive diagonal plus a square
	return h
}

// solve gives the voltages of the tree's resistors for the currents put into their cut sets.
func (h *hybrid) solve(rhs matrix) matrix { return h.factor.cholSolve(rhs) }

// Storage of one kind, capacitors or coils, as states that are orthonormal in energy.
//
// With q the charges of the capacitors' cut sets, w = M⁻¹q their voltages without the source, and q = N p in terms of the
// independent ones, the energy is pᵀ(NᵀM⁻¹N)p/2. A Cholesky factor R of that
// inner matrix makes x = R p a state of energy |x|²/2. For coils read flux for charge and current for voltage.

// capacitorStates are the states that charges make.
type capacitorStates struct {
	independent []int  // cut sets, by tree capacitors, whose charges are free
	voltage     matrix // tree capacitors × states: w = voltage · x
	rate        matrix // states × independent: x' = rate · charging current
	feed        matrix // tree capacitors × source: v = w - feed · u
}

func newCapacitorStates(g *elementGraph, t *normalTree) (*capacitorStates, error) {
	linkC := newMatrix(len(t.link[Capacitor]), len(t.link[Capacitor]))
	for k, i := range t.link[Capacitor] {
		linkC.set(k, k, g.elements[i].value)
	}
	fCS, fUS := t.loops(Capacitor, Capacitor), t.loops(sourceKind, Capacitor)
	m := fCS.mul(linkC).mul(fCS.t())
	for k, i := range t.tree[Capacitor] {
		m.set(k, k, m.at(k, k)+g.elements[i].value)
	}
	factor, ok := m.cholesky()
	if !ok {
		return nil, errors.New("circuit: the capacitors lie too many decades apart; give values between 1 pF and 1 F")
	}
	s := &capacitorStates{feed: factor.cholSolve(fCS.mul(linkC).mul(fUS.t()))}
	var basis matrix
	s.independent, basis = independentRows(t.loops(Capacitor, Resistor).beside(t.loops(Capacitor, Inductor)))
	elastance := factor.cholSolve(basis)
	s.rate, ok = basis.t().mul(elastance).cholesky()
	if !ok {
		return nil, errors.New("circuit: the capacitors lie too many decades apart; give values between 1 pF and 1 F")
	}
	s.voltage = elastance.mul(s.rate.inverseUpper())
	return s, nil
}

// coilStates are the states that fluxes make.
type coilStates struct {
	independent []int  // link coils; their currents, the combination of the others added, are free
	current     matrix // independent × states: j = current · x
	rate        matrix // states × link coils: x' = rate · driving voltage
	tree        matrix // tree coils × link coils: voltage of the tree's coils = tree · driving voltage
}

func newCoilStates(g *elementGraph, t *normalTree) (*coilStates, error) {
	links, trees := t.link[Inductor], t.tree[Inductor]
	nl, nt := len(links), len(trees)
	// All inductances, links first.
	all := newMatrix(nl+nt, nl+nt)
	at := make(map[int]int, nl+nt)
	for k, i := range links {
		at[i] = k
	}
	for k, i := range trees {
		at[i] = nl + k
	}
	for i, k := range at {
		all.set(k, k, g.elements[i].value)
	}
	for _, m := range g.mutual {
		p, q := at[m.a], at[m.b]
		all.set(p, q, all.at(p, q)+m.value)
		all.set(q, p, all.at(q, p)+m.value)
	}
	if _, ok := all.cholesky(); !ok {
		return nil, fmt.Errorf("circuit: the coupling coefficients of %d coils contradict each other: they would store negative energy; make them smaller", nl+nt)
	}
	// Currents of all coils follow from those of the links: i = cut · i_link.
	fΓL := t.loops(Inductor, Inductor)
	cut := newMatrix(nl+nt, nl)
	for k := range nl {
		cut.set(k, k, 1)
	}
	cut.paste(nl, 0, fΓL.scale(-1))
	factor, ok := cut.t().mul(all).mul(cut).cholesky()
	if !ok {
		return nil, errors.New("circuit: the coils lie too many decades apart; give values between 1 nH and 1 kH")
	}
	s := &coilStates{}
	var basis matrix
	s.independent, basis = independentRows(t.loops(Capacitor, Inductor).t().beside(t.loops(Resistor, Inductor).t()))
	slope := basis.t().mul(factor.cholSolve(identity(nl))) // of the free currents, per driving voltage
	root, ok := slope.mul(basis).cholesky()
	if !ok {
		return nil, errors.New("circuit: the coils lie too many decades apart; give values between 1 nH and 1 kH")
	}
	s.current = root.t()
	s.rate = root.inverseUpper().t().mul(slope)
	s.tree = all.pick(span(nl, nl+nt), upTo(nl+nt)).mul(cut).mul(factor.cholSolve(identity(nl)))
	return s, nil
}
