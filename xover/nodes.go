package xover

import (
	"fmt"
	"strings"
)

// A wiring is the graph that the networks of a design make: its nodes, and how many part ends reach each.
// It exists to find nodes that hang loose; the circuit itself is made elsewhere.
type wiring struct {
	*parser
	nodes  []wireNode
	scopes []scope
}

// A wireNode is one node. The first two are the return and the amplifier's hot terminal.
type wireNode struct {
	label string // for messages, `node "x"`
	name  string // "" for a node of the ladder that has none
	scope int
	pos   Position
	ends  int    // of parts, drivers and the load
	last  string // the part or step that reached it last, for messages
	root  int    // towards the representative of what it is connected with; see find
}

// A scope holds the nodes of one network.
type scope struct {
	way   string // "" for a tone network
	label string // `way "low"`
	names map[string]int
}

// checkWiring reports every node that hangs loose, that is connected to neither terminal of the amplifier,
// or that does not exist.
func (p *parser) checkWiring() {
	w := &wiring{parser: p, nodes: []wireNode{{label: "the return", root: 0}, {label: "amp", root: 1}}}
	for _, way := range p.design.Ways {
		w.scopes = append(w.scopes, scope{way.Name, fmt.Sprintf("way %q", way.Name), map[string]int{}})
	}
	if p.design.Tone != nil {
		w.scopes = append(w.scopes, scope{"", "[tone]", map[string]int{}})
	}
	// The names come first, for all networks: a step may name a node that is marked further down, or in
	// another way.
	for i := range w.scopes {
		w.nameMarks(i)
	}
	for i := range w.scopes {
		w.nameOthers(i)
	}
	before := len(p.errors)
	for i := range w.scopes {
		w.connect(i)
	}
	if len(p.errors) == before {
		w.report()
	}
}

func (w *wiring) network(i int) []Step {
	if w.scopes[i].way == "" {
		return w.design.Tone.Network
	}
	return w.design.Ways[i].Network
}

func (w *wiring) add(n wireNode) int {
	n.root = len(w.nodes)
	w.nodes = append(w.nodes, n)
	return n.root
}

// nameMarks makes the nodes of the ladder and gives them the names that `mark` says. The nodes of a scope's
// ladder are consecutive, so that connect can walk them again.
func (w *wiring) nameMarks(i int) {
	s := &w.scopes[i]
	hot := 1
	for _, step := range w.network(i) {
		switch step.Op {
		case Series:
			hot = w.add(wireNode{label: fmt.Sprintf("the node behind %q", shortened(step.String())), scope: i, pos: step.Pos})
		case Mark:
			if _, again := s.names[step.Name]; again {
				w.fail(step.Pos, fmt.Sprintf("%s marks two nodes %q", s.label, step.Name), "give each a name of its own")
				continue
			}
			s.names[step.Name] = hot
			if hot > 1 {
				w.nodes[hot].label, w.nodes[hot].name = fmt.Sprintf("node %q", step.Name), step.Name
			}
		}
	}
}

// nameOthers makes the nodes that steps name and no mark does.
func (w *wiring) nameOthers(i int) {
	s := &w.scopes[i]
	for _, step := range w.network(i) {
		for _, name := range []string{step.From, step.To, step.Wiper, step.Plus, step.Minus, step.Out} {
			if _, known := s.names[name]; known || name == "" || isTerminal(name) || strings.Contains(name, ".") {
				continue
			}
			s.names[name] = w.add(wireNode{label: fmt.Sprintf("node %q", name), name: name, scope: i, pos: step.Pos})
		}
	}
}

// connect counts the ends that the steps of one network put to its nodes.
func (w *wiring) connect(i int) {
	s := &w.scopes[i]
	hot, next := 1, w.firstOfLadder(i)
	var placed bool
	for _, step := range w.network(i) {
		switch step.Op {
		case Series:
			w.join(hot, next, step.Expr.String())
			hot, next = next, next+1
		case Shunt:
			w.join(hot, 0, step.Expr.String())
		case Between:
			from, to := w.resolve(i, step, step.From), w.resolve(i, step, step.To)
			w.join(from, to, step.Expr.String())
			if step.Wiper != "" {
				wiper := w.resolve(i, step, step.Wiper)
				w.end(wiper, step.Expr.String())
				w.unite(wiper, from)
			}
		case OpAmp:
			// It makes its inputs alike and holds its output, so none of the three hangs loose by it; what is not otherwise reached is.
			out := w.resolve(i, step, step.Out)
			w.end(out, "opamp "+step.Name)
			w.end(w.resolve(i, step, step.Plus), "opamp "+step.Name)
			w.end(w.resolve(i, step, step.Minus), "opamp "+step.Name)
			w.unite(out, 0)
		case DriverPlace:
			if placed {
				w.fail(step.Pos, s.label+" places its driver twice", "keep one of them")
			}
			placed = true
			w.join(w.resolve(i, step, step.From), w.resolve(i, step, step.To), "the driver")
		}
	}
	switch {
	case s.way != "" && !placed:
		w.join(hot, 0, "the driver")
	case s.way == "":
		if out, ok := s.names[outNode]; ok {
			w.nodes[out].ends++ // the load, or whoever measures there
		} else {
			w.fail(w.design.Tone.Pos, `[tone] has no node "out"`, `add "mark out" where the load is connected`)
		}
	}
}

// firstOfLadder returns the number of the first node that nameMarks made for a scope.
func (w *wiring) firstOfLadder(i int) int {
	first := 2
	for k := range i {
		for _, step := range w.network(k) {
			if step.Op == Series {
				first++
			}
		}
	}
	return first
}

// resolve returns the node that a step calls name; the return, and an error, if there is none.
func (w *wiring) resolve(i int, step Step, name string) int {
	switch name {
	case returnNode:
		return 0
	case ampNode:
		return 1
	}
	way, node, dotted := strings.Cut(name, ".")
	if !dotted {
		return w.scopes[i].names[name]
	}
	var ways []string
	for _, s := range w.scopes {
		if s.way == "" {
			w.fail(step.Pos, fmt.Sprintf("node %q is of another way, and a tone network has none", name), fmt.Sprintf("write %s alone", node))
			return 0
		}
		if s.way != way {
			ways = append(ways, s.way)
			continue
		}
		if n, ok := s.names[node]; ok {
			return n
		}
		names := sortedKeys(s.names)
		mend := fmt.Sprintf("add \"mark %s\" to way %q", node, way)
		if near := Nearest(node, names); near != "" {
			mend = fmt.Sprintf("did you mean %q?", way+"."+near)
		}
		w.fail(step.Pos, fmt.Sprintf("node %q is not defined: way %q has no %q", name, way, node), mend)
		return 0
	}
	w.fail(step.Pos, fmt.Sprintf("node %q is not defined: there is no way %q", name, way), didYouMean(way, ways, "the ways are "+listed(ways)))
	return 0
}

// join puts a branch between two nodes.
func (w *wiring) join(a, b int, by string) {
	w.end(a, by)
	w.end(b, by)
	w.unite(a, b)
}

func (w *wiring) end(n int, by string) {
	w.nodes[n].ends++
	w.nodes[n].last = by
}

// unite and find are union-find with path halving: R. E. Tarjan and J. van Leeuwen, "Worst-case analysis of
// set union algorithms", Journal of the ACM 31(2), 1984, 245–281. The lower number represents.
func (w *wiring) unite(a, b int) {
	a, b = w.find(a), w.find(b)
	w.nodes[max(a, b)].root = min(a, b)
}

func (w *wiring) find(n int) int {
	for w.nodes[n].root != n {
		w.nodes[n].root = w.nodes[w.nodes[n].root].root
		n = w.nodes[n].root
	}
	return n
}

// report names the nodes that one end alone reaches, and of each island, which no path connects with the
// amplifier, the first node.
func (w *wiring) report() {
	for n := 2; n < len(w.nodes) && !w.full(); n++ {
		node := &w.nodes[n]
		s := &w.scopes[node.scope]
		switch {
		case node.ends < 2:
			mend := "connect something else there, or leave it out"
			if others := w.othersThan(node); node.name != "" && Nearest(node.name, others) != "" {
				mend = fmt.Sprintf("did you mean node %q?", Nearest(node.name, others))
			}
			w.fail(node.pos, fmt.Sprintf("%s: %s hangs loose: only %s reaches it", s.label, node.label, shortened(node.last)), mend)
		case w.find(n) == n:
			w.fail(node.pos, fmt.Sprintf("%s: %s is connected neither to amp nor to the return", s.label, node.label), "connect it to the rest of the network")
		}
	}
}

// othersThan lists the other named nodes of the same network.
func (w *wiring) othersThan(node *wireNode) []string {
	var names []string
	for _, name := range sortedKeys(w.scopes[node.scope].names) {
		if name != node.name {
			names = append(names, name)
		}
	}
	return names
}
