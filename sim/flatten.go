package sim

import (
	"fmt"
	"strings"

	"sixdown/sim/circuit"
	"sixdown/xover"
)

// A flattener turns arrangements into branches between numbered nodes.
type flattener struct {
	design   *xover.Design
	net      circuit.Netlist
	nodes    map[string]int   // node by its full name, "way.mark"
	branches map[string][]int // branches by part
	couples  []pendingCouple
}

// A pendingCouple is a coupling whose coils may not have been placed yet, since they may be another way's.
type pendingCouple struct {
	where string
	step  xover.Step
}

// A ladder is one arrangement, walked once to give its nodes names.
type ladder struct {
	scope string // the way's name; "" for a tone network
	steps []xover.Step
	hot   []int // hot[i] is the hot node before steps[i], hot[len(steps)] that at the end
}

func newFlattener(d *xover.Design) *flattener {
	return &flattener{
		design:   d,
		net:      circuit.Netlist{Nodes: 2, NodeNames: []string{"0", "amp"}},
		nodes:    map[string]int{},
		branches: map[string][]int{},
	}
}

// node makes a new node.
func (f *flattener) node(name string) int {
	f.net.Nodes++
	f.net.NodeNames = append(f.net.NodeNames, name)
	return f.net.Nodes - 1
}

// fullName returns what the node called name in a scope is called by all.
func fullName(scope, name string) string {
	if scope == "" || strings.Contains(name, ".") {
		return name
	}
	return scope + "." + name
}

// find returns the node that a step calls name. A node comes into being where it is first named, so that a
// bridge or a tone stack needs no marks; whether it hangs loose is for the circuit to say.
func (f *flattener) find(scope, name string) int {
	switch name {
	case "0":
		return circuit.Return
	case "amp":
		return circuit.Amp
	}
	full := fullName(scope, name)
	k, ok := f.nodes[full]
	if !ok {
		k = f.node(full)
		f.nodes[full] = k
	}
	return k
}

// walk numbers the nodes along the arrangement and takes note of its marks. All arrangements are walked
// before any part is placed, because a step may name a node of another way.
func (f *flattener) walk(scope string, steps []xover.Step) (*ladder, error) {
	l := &ladder{scope: scope, steps: steps, hot: make([]int, 0, len(steps)+1)}
	hot, rungs := circuit.Amp, 0
	for _, st := range steps {
		l.hot = append(l.hot, hot)
		switch st.Op {
		case xover.Series:
			rungs++
			hot = f.node(fullName(scope, fmt.Sprint(rungs)))
		case xover.Mark:
			full := fullName(scope, st.Name)
			if _, ok := f.nodes[full]; ok {
				return nil, fmt.Errorf("%s: mark %s: the name is given twice; choose another", l.where(), st.Name)
			}
			f.nodes[full] = hot
			if hot > circuit.Amp {
				f.net.NodeNames[hot] = full
			}
		}
	}
	l.hot = append(l.hot, hot)
	return l, nil
}

// where says which arrangement l is, for messages.
func (l *ladder) where() string {
	if l.scope == "" {
		return "tone network"
	}
	return fmt.Sprintf("way %q", l.scope)
}

// place lays the parts of an arrangement between its nodes. It returns the nodes between which the driver lies.
func (f *flattener) place(l *ladder) (from, to int, err error) {
	from, to = l.hot[len(l.steps)], circuit.Return
	for i, st := range l.steps {
		switch st.Op {
		case xover.Series:
			err = f.expr(l, st.Expr, l.hot[i], l.hot[i+1])
		case xover.Shunt:
			err = f.expr(l, st.Expr, l.hot[i], circuit.Return)
		case xover.Between:
			a, b := f.find(l.scope, st.From), f.find(l.scope, st.To)
			if st.Wiper == "" {
				err = f.expr(l, st.Expr, a, b)
			} else {
				err = f.wiper(l, st.Expr, a, b, f.find(l.scope, st.Wiper))
			}
		case xover.Couple:
			f.couples = append(f.couples, pendingCouple{where: l.where(), step: st})
		case xover.OpAmp:
			f.net.Amplifiers = append(f.net.Amplifiers, circuit.Amplifier{
				Name: st.Name, Plus: f.find(l.scope, st.Plus), Minus: f.find(l.scope, st.Minus), Out: f.find(l.scope, st.Out),
			})
		case xover.DriverPlace:
			from, to = f.find(l.scope, st.From), f.find(l.scope, st.To)
		case xover.Mark:
			// walk has done it.
		default:
			err = fmt.Errorf("%s: step %d has the unknown operation %d; use those of package xover", l.where(), i+1, st.Op)
		}
		if err != nil {
			return 0, 0, err
		}
	}
	return from, to, nil
}

// expr lays an expression from node a to node b.
func (f *flattener) expr(l *ladder, e *xover.Expr, a, b int) error {
	if e == nil {
		return fmt.Errorf("%s: a step names no part; name one", l.where())
	}
	switch e.Op {
	case xover.Leaf:
		return f.leaf(l, e.Part, a, b)
	case xover.InSeries:
		for i, arg := range e.Args {
			next := b
			if i < len(e.Args)-1 {
				next = f.node(fmt.Sprintf("%s behind %s", f.net.NodeNames[a], lastPart(arg)))
			}
			if err := f.expr(l, arg, a, next); err != nil {
				return err
			}
			a = next
		}
		return nil
	case xover.InParallel:
		for _, arg := range e.Args {
			if err := f.expr(l, arg, a, b); err != nil {
				return err
			}
		}
		return nil
	}
	return fmt.Errorf("%s: an expression has the unknown operation %d; use those of package xover", l.where(), e.Op)
}

// lastPart returns the name of a part at the far end of an expression.
func lastPart(e *xover.Expr) string {
	for e.Op != xover.Leaf && len(e.Args) > 0 {
		e = e.Args[len(e.Args)-1]
	}
	return e.Part
}

// part returns the part called name, its value that of the part it follows.
func (f *flattener) part(where, name string) (xover.Part, error) {
	p := f.design.Part(name)
	if p == nil {
		return xover.Part{}, fmt.Errorf("%s: part %q is not defined; define it under [parts]", where, name)
	}
	part := *p
	for hops := 0; p.Same != ""; hops++ {
		p = f.design.Part(p.Same)
		if p == nil || hops > len(f.design.Parts) {
			return part, fmt.Errorf("part %q: it follows %q, which leads nowhere; name a part that has a value", name, part.Same)
		}
		part.Value = p.Value
	}
	return part, nil
}

// leaf lays one part from a to b. A potentiometer with two terminals is a variable resistance.
func (f *flattener) leaf(l *ladder, name string, a, b int) error {
	p, err := f.part(l.where(), name)
	if err != nil {
		return err
	}
	br := circuit.Branch{Name: name, From: a, To: b, Value: p.Value}
	switch p.Kind {
	case xover.Resistor:
		br.Kind = circuit.Resistor
	case xover.Inductor:
		br.Kind, br.Loss = circuit.Inductor, p.DCR
	case xover.Capacitor:
		br.Kind, br.Loss = circuit.Capacitor, p.ESR
	case xover.Potentiometer:
		br.Kind = circuit.Resistor
		br.Value *= p.Fraction(f.design.Turn(name))
	default:
		return fmt.Errorf("part %q: unknown kind %d; use those of package xover", name, p.Kind)
	}
	f.add(name, br)
	return nil
}

// wiper lays a potentiometer from a to b with its wiper at w. Turned up by x, the wiper stands at the fraction
// x of the track from a, so at 0 it touches a.
func (f *flattener) wiper(l *ladder, e *xover.Expr, a, b, w int) error {
	if e == nil || e.Op != xover.Leaf {
		return fmt.Errorf("%s: a wiper is named for more than one part; name it for a potentiometer alone", l.where())
	}
	p, err := f.part(l.where(), e.Part)
	if err != nil {
		return err
	}
	if p.Kind != xover.Potentiometer {
		return fmt.Errorf("%s: %s has a wiper but is no potentiometer; give it a taper", l.where(), e.Part)
	}
	x := p.Fraction(f.design.Turn(p.Name))
	f.add(p.Name, circuit.Branch{Name: p.Name + " up to its wiper", Kind: circuit.Resistor, From: a, To: w, Value: p.Value * x})
	f.add(p.Name, circuit.Branch{Name: p.Name + " beyond its wiper", Kind: circuit.Resistor, From: w, To: b, Value: p.Value * (1 - x)})
	return nil
}

// add appends a branch and returns its index. part is "" for what is no part of the design.
func (f *flattener) add(part string, b circuit.Branch) int {
	i := len(f.net.Branches)
	f.net.Branches = append(f.net.Branches, b)
	if part != "" {
		f.branches[part] = append(f.branches[part], i)
	}
	return i
}

// join makes the couplings, once all coils have been placed.
func (f *flattener) join() error {
	for _, c := range f.couples {
		var coil [2]int
		for i, name := range []string{c.step.A, c.step.B} {
			bs := f.branches[name]
			if len(bs) != 1 || f.net.Branches[bs[0]].Kind != circuit.Inductor {
				return fmt.Errorf("%s: couple %s %s: %s is no coil that is placed just once; couple two such coils", c.where, c.step.A, c.step.B, name)
			}
			coil[i] = bs[0]
		}
		f.net.Couplings = append(f.net.Couplings, circuit.Coupling{A: coil[0], B: coil[1], K: c.step.K})
	}
	return nil
}
