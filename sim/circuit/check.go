package circuit

import (
	"fmt"
	"math"
)

// nodeName is what a message calls node k.
func (n *Netlist) nodeName(k int) string {
	if k < len(n.NodeNames) && n.NodeNames[k] != "" {
		return n.NodeNames[k]
	}
	switch k {
	case Return:
		return "the return"
	case Amp:
		return "the amplifier's terminal"
	}
	return fmt.Sprintf("node %d", k)
}

// check reports the first thing in n or outs that makes no circuit.
func (n *Netlist) check(outs []Output) error {
	if n.Nodes < 2 {
		return fmt.Errorf("circuit: %d nodes; give at least the amplifier's terminal and the return", n.Nodes)
	}
	if !(n.Source >= 0) || math.IsInf(n.Source, 1) {
		return fmt.Errorf("circuit: source resistance is %g Ω; give zero or a positive number", n.Source)
	}
	node := func(k int) bool { return k >= 0 && k < n.Nodes }
	for i := range n.Branches {
		b := &n.Branches[i]
		if !node(b.From) || !node(b.To) {
			return fmt.Errorf("circuit: %s: lies between nodes %d and %d; they are numbered 0 to %d", b.Name, b.From, b.To, n.Nodes-1)
		}
		if b.Kind > Port {
			return fmt.Errorf("circuit: %s: unknown kind of branch %d", b.Name, b.Kind)
		}
		if b.Kind == Port {
			if b.Port == nil {
				return fmt.Errorf("circuit: %s: has no impedance; give it a OnePort", b.Name)
			}
			continue
		}
		if b.Kind == Resistor && b.Loss != 0 {
			return fmt.Errorf("circuit: %s: a resistor has a series resistance of %g Ω; add it to its value", b.Name, b.Loss)
		}
		if !(b.Value >= 0) || math.IsInf(b.Value, 1) {
			return fmt.Errorf("circuit: %s: value is %g; give a positive number", b.Name, b.Value)
		}
		if !(b.Loss >= 0) || math.IsInf(b.Loss, 1) {
			return fmt.Errorf("circuit: %s: series resistance is %g Ω; give zero or a positive number", b.Name, b.Loss)
		}
	}
	for _, c := range n.Couplings {
		if err := n.checkCoupling(c); err != nil {
			return err
		}
	}
	for _, a := range n.Amplifiers {
		switch {
		case !node(a.Plus) || !node(a.Minus) || !node(a.Out):
			return fmt.Errorf("circuit: %s: lies at nodes %d, %d and %d; they are numbered 0 to %d", a.Name, a.Plus, a.Minus, a.Out, n.Nodes-1)
		case a.Plus == a.Minus:
			return fmt.Errorf("circuit: %s: both inputs are at %s; connect them apart", a.Name, n.nodeName(a.Plus))
		case a.Out == Return || a.Out == Amp:
			return fmt.Errorf("circuit: %s: its output is at %s, which another source holds; give it a node of its own", a.Name, n.nodeName(a.Out))
		}
	}
	for i, o := range outs {
		if !node(o.From) || !node(o.To) {
			return fmt.Errorf("circuit: output %d: lies between nodes %d and %d; they are numbered 0 to %d", i, o.From, o.To, n.Nodes-1)
		}
	}
	return nil
}

func (n *Netlist) checkCoupling(c Coupling) error {
	if c.A < 0 || c.B < 0 || c.A >= len(n.Branches) || c.B >= len(n.Branches) || c.A == c.B {
		return fmt.Errorf("circuit: coupling of branches %d and %d; name two different coils", c.A, c.B)
	}
	a, b := &n.Branches[c.A], &n.Branches[c.B]
	for _, x := range []*Branch{a, b} {
		if x.Kind != Inductor || x.Value == 0 {
			return fmt.Errorf("circuit: coupling of %s and %s: %s is no coil; couple coils only", a.Name, b.Name, x.Name)
		}
	}
	if !(c.K > -1 && c.K < 1) {
		return fmt.Errorf("circuit: coupling of %s and %s: coefficient is %g; give one between -1 and 1", a.Name, b.Name, c.K)
	}
	return nil
}

// isShort and isOpen tell the branches whose value is at the end of its range, so that the arrangement
// itself changes: a short joins its nodes, an open leaves the netlist.
func (b *Branch) isShort() bool {
	return (b.Kind == Resistor || b.Kind == Inductor) && b.Value == 0 && b.Loss == 0
}

func (b *Branch) isOpen() bool { return b.Kind == Capacitor && b.Value == 0 }

// joined gives, for each node, the node that stands for it once the shorts have merged their ends.
// Return and Amp stand for themselves; an error tells if a short lies across the amplifier.
func (n *Netlist) joined() ([]int, error) {
	root := make([]int, n.Nodes)
	for i := range root {
		root[i] = i
	}
	find := func(k int) int {
		for root[k] != k {
			root[k] = root[root[k]]
			k = root[k]
		}
		return k
	}
	for i := range n.Branches {
		b := &n.Branches[i]
		if !b.isShort() {
			continue
		}
		p, q := find(b.From), find(b.To)
		if p > q { // the lower number stands, so that Return and Amp do
			p, q = q, p
		}
		if p == Return && q == Amp {
			return nil, fmt.Errorf("circuit: %s: shorts the amplifier; give it a resistance above 0 Ω", b.Name)
		}
		root[q] = p
	}
	for k := range root {
		root[k] = find(k)
	}
	return root, nil
}
