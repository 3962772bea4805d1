package circuit

import "fmt"

// A StateSpace is a network as first-order differential equations,
//
//	x' = A x + B u,   y = C x + D u,
//
// u the open-circuit source voltage and y the outputs, both in V. The states x are capacitor charges and
// coil fluxes, scaled and combined so that the energy in the network is |x|²/2 joules: with
// such states a passive network has A + Aᵀ ≤ 0, whatever the spread of its values.
//
// There are as many states as the network has natural frequencies that can be heard: capacitors in a loop
// or coils that meet at a node count less often, and so do charges that are trapped (two capacitors in series with nothing
// between) and currents that circulate in lossless coils alone; neither is stirred by u from rest or seen in y.
//
// The equations come from the normal tree and not from the frequency solver, so that the one can check the other.
// A StateSpace does not change once it is made, and may be used by many goroutines.
type StateSpace struct {
	A []float64 // 1/s, States × States, row by row
	B []float64 // √J/(V·s), States
	C []float64 // V/√J, Outputs × States, row by row
	D []float64 // V/V, Outputs

	modes []mode
}

// NewStateSpace returns the differential equations of n, with outs as outputs. The source resistance, the losses of coils
// and capacitors, and couplings are in them; one-ports enter by their Branches. A resistance of 0 joins its nodes,
// a capacitance of 0 is open. It fails if n is no netlist, if a one-port has no equivalent
// circuit, if the source is shorted, if an output spans two parts of the network that nothing joins, or if couplings
// are impossible together.
//
// Method: E. S. Kuh and R. A. Rohrer, "The State-Variable Approach to Network Analysis", Proc. IEEE 53(7), 1965, 672–686,
// on the normal tree of P. R. Bryant, "The Explicit Form of Bashkow's A Matrix", IRE Trans. Circuit Theory
// 9(3), 1962, 303–306.
func NewStateSpace(n *Netlist, outs []Output) (*StateSpace, error) {
	if err := n.check(outs); err != nil {
		return nil, err
	}
	g, err := newElementGraph(n)
	if err != nil {
		return nil, err
	}
	t := newNormalTree(g)
	h := newHybrid(t)
	ss, err := newStateEquations(g, t, h, outs)
	if err != nil {
		return nil, err
	}
	ss.stiffestFirst()
	ss.modes, err = ss.findModes()
	if err != nil {
		return nil, err
	}
	return ss, nil
}

// States is the number of state variables.
func (ss *StateSpace) States() int { return len(ss.B) }

// Outputs is the number of outputs.
func (ss *StateSpace) Outputs() int { return len(ss.D) }

// stiffestFirst reorders the states by the size of their row of A, largest first. Both elimination
// and the QR algorithm keep the digits of slow modes next to fast ones when a graded matrix runs down.
func (ss *StateSpace) stiffestFirst() {
	n := ss.States()
	a := matrix{n, n, ss.A}
	order := make([]int, n)
	size := make([]float64, n)
	for i := range order {
		order[i] = i
		for j := range n {
			size[i] += a.at(i, j) * a.at(i, j)
		}
	}
	sortBy(order, func(i, j int) bool { return size[i] > size[j] })
	c := matrix{ss.Outputs(), n, ss.C}
	ss.A = a.pick(order, order).data
	ss.B = matrix{n, 1, ss.B}.pick(order, []int{0}).data
	ss.C = c.pick(upTo(c.rows), order).data
}

// newStateEquations writes the equations. Every quantity is a matrix whose columns say how it depends on
// the states and, last, on u.
func newStateEquations(g *elementGraph, t *normalTree, h *hybrid, outs []Output) (*StateSpace, error) {
	capacitors, err := newCapacitorStates(g, t)
	if err != nil {
		return nil, err
	}
	coils, err := newCoilStates(g, t)
	if err != nil {
		return nil, err
	}
	nc, nl := len(capacitors.independent), len(coils.independent)
	states := nc + nl
	u := newMatrix(len(t.source), states+1)
	for i := range t.source {
		u.set(i, states, 1)
	}

	// Voltages of the tree's capacitors, from the charges; the source's share is what it
	// pushes through loops of capacitors.
	vC := newMatrix(len(t.tree[Capacitor]), states+1)
	vC.paste(0, 0, capacitors.voltage)
	vC = vC.sub(capacitors.feed.mul(u))

	// Current of the link coils, so far as anything else sees it: F·i is the same for i and for this.
	iL := newMatrix(len(t.link[Inductor]), states+1)
	for k, row := range coils.independent {
		for j := range nl {
			iL.set(row, nc+j, coils.current.at(k, j))
		}
	}

	// The resistors in between.
	fUR, fCR, fGR := t.loops(sourceKind, Resistor), t.loops(Capacitor, Resistor), t.loops(Resistor, Resistor)
	fUL, fCL, fGL := t.loops(sourceKind, Inductor), t.loops(Capacitor, Inductor), t.loops(Resistor, Inductor)
	drive := fUR.t().mul(u).add(fCR.t().mul(vC))
	vG := h.solve(fGR.mul(h.link.mul(drive)).add(fGL.mul(iL)).scale(-1))
	iR := h.link.mul(drive.add(fGR.t().mul(vG)))

	// Charging currents and driving voltages.
	charging := fCR.mul(iR).add(fCL.mul(iL)).scale(-1)
	driving := fUL.t().mul(u).add(fCL.t().mul(vC)).add(fGL.t().mul(vG))

	rate := newMatrix(states, states+1)
	rate.paste(0, 0, capacitors.rate.mul(charging.pick(capacitors.independent, upTo(states+1))))
	rate.paste(nc, 0, coils.rate.mul(driving))

	vΓ := coils.tree.mul(driving)
	ss := &StateSpace{
		A: rate.pick(upTo(states), upTo(states)).data,
		B: rate.pick(upTo(states), []int{states}).data,
	}
	y := newMatrix(len(outs), states+1)
	for i, o := range outs {
		path, ok := t.path(g.node(o.From), g.node(o.To))
		if !ok {
			return nil, fmt.Errorf("circuit: output %d: nothing joins its two ends; connect them, or choose two nodes that are joined", i)
		}
		v := path.of(sourceKind).mul(u).add(path.of(Capacitor).mul(vC)).add(path.of(Resistor).mul(vG)).add(path.of(Inductor).mul(vΓ))
		y.paste(i, 0, v)
	}
	ss.C = y.pick(upTo(len(outs)), upTo(states)).data
	ss.D = y.pick(upTo(len(outs)), []int{states}).data
	return ss, nil
}
