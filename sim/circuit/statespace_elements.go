package circuit

import "fmt"

// sourceKind is the kind of the one ideal source; it follows the kinds of a Branch.
const sourceKind = Port + 1

// An element is one ideal two-terminal part.
type element struct {
	kind     Kind // sourceKind, Capacitor, Resistor or Inductor
	from, to int
	value    float64 // F, Ω or H
	input    int     // of a source: which; 0 the network's own, then the amplifiers' outputs
}

// An elementGraph is a netlist taken apart into ideal elements: one-ports expanded, losses split off to resistors,
// the source resistance a resistor, shorts merged, opens left out.
type elementGraph struct {
	elements []element
	mutual   []mutual
	joined   []int // union-find over nodes
}

// mutual is an inductance between two elements, both coils.
type mutual struct {
	a, b  int
	value float64 // H
}

func newElementGraph(n *Netlist) (*elementGraph, error) {
	g := &elementGraph{}
	for range n.Nodes {
		g.newNode()
	}
	hot := Amp
	if n.Source > 0 {
		hot = g.newNode()
		g.add(Resistor, hot, Amp, n.Source)
	}
	coilOf := make([]int, len(n.Branches))
	for i := range n.Branches {
		b := &n.Branches[i]
		if b.Kind == Port {
			if err := g.expand(b); err != nil {
				return nil, err
			}
			continue
		}
		coilOf[i] = g.branch(b.Kind, b.From, b.To, b.Value, b.Loss)
	}
	if g.node(hot) == g.node(Return) {
		return nil, fmt.Errorf("circuit: the amplifier's terminals are shorted; give its source or what lies across it a resistance above 0 Ω")
	}
	g.elements = append(g.elements, element{kind: sourceKind, from: hot, to: Return})
	for i, a := range n.Amplifiers {
		if g.node(a.Out) == g.node(Return) || g.node(a.Out) == g.node(hot) {
			return nil, fmt.Errorf("circuit: %s: its output is shorted; give what lies across it a resistance above 0 Ω", a.Name)
		}
		g.elements = append(g.elements, element{kind: sourceKind, from: a.Out, to: Return, input: i + 1})
	}
	for _, c := range n.Couplings {
		a, b := coilOf[c.A], coilOf[c.B]
		if a < 0 || b < 0 {
			continue // no inductance, so nothing to couple
		}
		m := c.K * geometricMean(g.elements[a].value, g.elements[b].value)
		g.mutual = append(g.mutual, mutual{a, b, m})
	}
	for i := range g.elements {
		e := &g.elements[i]
		e.from, e.to = g.node(e.from), g.node(e.to)
	}
	return g, nil
}

// expand adds a one-port by its equivalent circuit.
func (g *elementGraph) expand(b *Branch) error {
	parts := b.Port.Branches()
	if len(parts) == 0 {
		return fmt.Errorf("circuit: %s: has no equivalent circuit of resistors, coils and capacitors; fit one before asking for its time response", b.Name)
	}
	nodes := map[int]int{Amp: b.From, Return: b.To}
	place := func(k int) int {
		if _, ok := nodes[k]; !ok {
			nodes[k] = g.newNode()
		}
		return nodes[k]
	}
	for i := range parts {
		p := &parts[i]
		if p.Kind >= Port {
			return fmt.Errorf("circuit: %s: %s in its equivalent circuit is no resistor, coil or capacitor; expand it there", b.Name, p.Name)
		}
		if !isValue(p.Value) || !isValue(p.Loss) {
			return fmt.Errorf("circuit: %s: %s in its equivalent circuit has value %g and series resistance %g; give finite numbers, zero or above", b.Name, p.Name, p.Value, p.Loss)
		}
		g.branch(p.Kind, place(p.From), place(p.To), p.Value, p.Loss)
	}
	return nil
}

// branch adds a resistor, coil or capacitor with its loss, and returns the index of the coil, -1 if it is none.
func (g *elementGraph) branch(kind Kind, from, to int, value, loss float64) int {
	switch {
	case kind == Resistor:
		g.resistor(from, to, value)
	case kind == Inductor && value == 0:
		g.resistor(from, to, loss)
	case kind == Capacitor && value == 0:
	case loss > 0:
		mid := g.newNode()
		g.add(Resistor, mid, to, loss)
		return g.add(kind, from, mid, value)
	default:
		return g.add(kind, from, to, value)
	}
	return -1
}

func (g *elementGraph) resistor(from, to int, value float64) {
	if value == 0 {
		g.joined[g.node(from)] = g.node(to)
		return
	}
	g.add(Resistor, from, to, value)
}

func (g *elementGraph) add(kind Kind, from, to int, value float64) int {
	g.elements = append(g.elements, element{kind: kind, from: from, to: to, value: value})
	if kind != Inductor {
		return -1
	}
	return len(g.elements) - 1
}

func (g *elementGraph) newNode() int {
	k := len(g.joined)
	g.joined = append(g.joined, k)
	return k
}

// node is the node that stands for k once shorts have merged their ends.
func (g *elementGraph) node(k int) int {
	for g.joined[k] != k {
		g.joined[k] = g.joined[g.joined[k]]
		k = g.joined[k]
	}
	return k
}
