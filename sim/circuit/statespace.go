package circuit

import (
	"fmt"
	"slices"

	"gonum.org/v1/gonum/mat"
)

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
	ss, err := newStateEquations(g, t, h, outs, n.Amplifiers)
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
func newStateEquations(g *elementGraph, t *normalTree, h *hybrid, outs []Output, amps []Amplifier) (*StateSpace, error) {
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
	width := states + 1 + len(amps) // the states, the source, the amplifiers' outputs
	u := newMatrix(len(t.source), width)
	for i, e := range t.source {
		u.set(i, states+g.elements[e].input, 1)
	}

	// Voltages of the tree's capacitors, from the charges; the source's share is what it
	// pushes through loops of capacitors.
	vC := newMatrix(len(t.tree[Capacitor]), width)
	vC.paste(0, 0, capacitors.voltage)
	vC = vC.sub(capacitors.feed.mul(u))

	// Current of the link coils, so far as anything else sees it: F·i is the same for i and for this.
	iL := newMatrix(len(t.link[Inductor]), width)
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

	rate := newMatrix(states, width)
	rate.paste(0, 0, capacitors.rate.mul(charging.pick(capacitors.independent, upTo(width))))
	rate.paste(nc, 0, coils.rate.mul(driving))

	vΓ := coils.tree.mul(driving)
	y := newMatrix(len(outs)+len(amps), width)
	wanted := slices.Clone(outs)
	for _, a := range amps {
		wanted = append(wanted, Output{a.Plus, a.Minus})
	}
	for i, o := range wanted {
		path, ok := t.path(g.node(o.From), g.node(o.To))
		switch {
		case !ok && i < len(outs):
			return nil, fmt.Errorf("circuit: output %d: nothing joins its two ends; connect them, or choose two nodes that are joined", i)
		case !ok:
			return nil, fmt.Errorf("circuit: %s: nothing joins its two inputs; connect them to the network", amps[i-len(outs)].Name)
		}
		v := path.of(sourceKind).mul(u).add(path.of(Capacitor).mul(vC)).add(path.of(Resistor).mul(vG)).add(path.of(Inductor).mul(vΓ))
		y.paste(i, 0, v)
	}
	rate, y, err = closeLoops(rate, y, states, amps)
	if err != nil {
		return nil, err
	}
	ss := &StateSpace{
		A: rate.pick(upTo(states), upTo(states)).data,
		B: rate.pick(upTo(states), []int{states}).data,
		C: y.pick(upTo(len(outs)), upTo(states)).data,
		D: y.pick(upTo(len(outs)), []int{states}).data,
	}
	return ss, nil
}

// closeLoops makes of rate and y, whose last columns are for the amplifiers' outputs and the last rows of y how far their inputs are
// apart, those of the network in which they are not apart: the outputs follow from states and source.
func closeLoops(rate, y matrix, states int, amps []Amplifier) (closedRate, closedY matrix, err error) {
	m := len(amps)
	if m == 0 {
		return rate, y, nil
	}
	outs, known := y.rows-m, upTo(states+1)
	loop, rest := y.pick(span(outs, y.rows), span(states+1, y.cols)), y.pick(span(outs, y.rows), known)
	var lu mat.LU
	lu.Factorize(mat.NewDense(m, m, loop.data))
	solved := mat.NewDense(m, states+1, nil)
	// What feeds back at once, through resistors and capacitors alone, must be enough: a loop through coils alone would make the output
	// follow the rate of the states.
	if !(lu.Cond() < 1e9) || lu.SolveTo(solved, false, mat.NewDense(m, states+1, rest.data)) != nil {
		return matrix{}, matrix{}, fmt.Errorf("circuit: %s has no feedback at high frequencies; connect its output to its minus input by a resistor or a capacitor", amps[0].Name)
	}
	output := newMatrix(m, states+1)
	for i := range m {
		for j := range states + 1 {
			output.set(i, j, -solved.At(i, j))
		}
	}
	close := func(full matrix) matrix {
		return full.pick(upTo(full.rows), known).add(full.pick(upTo(full.rows), span(states+1, full.cols)).mul(output))
	}
	return close(rate), close(y), nil
}
