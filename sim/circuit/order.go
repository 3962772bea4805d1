package circuit

import "fmt"

// A step eliminates one node: near lists the nodes that it still touches, Return last if it is among
// them, and the others in rising order of the place at which they are eliminated themselves, Amp first.
type step struct {
	node     int
	near     []int
	reactive bool // nothing damps it, so that its pivot can nearly vanish
}

// reach finds which folded nodes the amplifier drives. A node that hangs in the air is an error; a node
// that touches the return alone stays at 0 V and counts as the return from here on.
func (f *folded) reach(n *Netlist, outs []Output) (driven []bool, err error) {
	metal := make([][]int, n.Nodes)  // joined by a conductor or a part
	magnet := make([][]int, n.Nodes) // joined through a winding
	join := func(g [][]int, a, b int) { g[a] = append(g[a], b); g[b] = append(g[b], a) }
	for _, g := range f.groups {
		join(metal, g.from, g.to)
	}
	for _, w := range f.windings {
		for _, c := range w.coils {
			if c.from != c.to {
				join(metal, c.from, c.to)
			}
			join(magnet, w.coils[0].from, c.from)
			join(magnet, c.from, c.to)
		}
	}
	visit := func(seen []bool, start int, graphs ...[][]int) {
		todo := []int{start}
		seen[start] = true
		for len(todo) > 0 {
			k := todo[len(todo)-1]
			todo = todo[:len(todo)-1]
			for _, g := range graphs {
				for _, j := range g[k] {
					if !seen[j] {
						seen[j] = true
						todo = append(todo, j)
					}
				}
			}
		}
	}
	held := make([]bool, n.Nodes)
	visit(held, Return, metal)
	visit(held, Amp, metal)
	for k := range held {
		if f.used[k] && !held[k] {
			return nil, fmt.Errorf("circuit: %s is joined to neither of the amplifier's terminals; its voltage is undefined: connect it, or leave its parts out", n.nodeName(k))
		}
	}
	for i, o := range outs {
		for _, k := range [2]int{f.node[o.From], f.node[o.To]} {
			if !f.used[k] && k != Return && k != Amp {
				return nil, fmt.Errorf("circuit: output %d: nothing is connected to %s; its voltage is undefined", i, n.nodeName(k))
			}
		}
	}
	driven = make([]bool, n.Nodes)
	driven[Return] = true // a wall: the search does not pass it
	visit(driven, Amp, metal, magnet)
	driven[Return] = false
	return driven, nil
}

// order chooses the order of elimination: a node that a resistor or a load damps before one that is all but purely
// reactive, and among those least degree first. A damped node's pivot cannot vanish; that of a
// reactive one nearly does where its branches resonate, which says nothing about the circuit: it is watched.
func (f *folded) order(n *Netlist, driven []bool) []step {
	touch := make([]map[int]bool, n.Nodes)
	damp := make([]bool, n.Nodes)
	var nodes []int
	for k := range touch {
		if driven[k] && k != Amp && f.used[k] {
			touch[k] = map[int]bool{}
			nodes = append(nodes, k)
		}
	}
	join := func(a, b int, damping bool) {
		a, b = f.alive(a, driven), f.alive(b, driven)
		if a == b {
			return
		}
		for _, e := range [2][2]int{{a, b}, {b, a}} {
			if touch[e[0]] != nil {
				touch[e[0]][e[1]] = true
				damp[e[0]] = damp[e[0]] || damping
			}
		}
	}
	for i := range f.groups {
		g := &f.groups[i]
		join(g.from, g.to, f.damped(n, g))
	}
	for _, w := range f.windings {
		for i, a := range w.coils {
			join(a.from, a.to, false)
			for _, b := range w.coils[i+1:] {
				for _, p := range [2]int{a.from, a.to} {
					join(p, b.from, false)
					join(p, b.to, false)
				}
			}
		}
	}
	place := make([]int, n.Nodes) // when a node goes
	var steps []step
	for len(nodes) > 0 {
		best := 0
		better := func(a, b int) bool {
			if damp[a] != damp[b] {
				return damp[a]
			}
			return len(touch[a]) < len(touch[b])
		}
		for i := range nodes {
			// From the far end: parts are listed from the amplifier on, and the far end carries the loads.
			if c := nodes[i]; !better(nodes[best], c) {
				best = i
			}
		}
		k := nodes[best]
		nodes = append(nodes[:best], nodes[best+1:]...)
		place[k] = len(steps) + 1
		st := step{node: k, reactive: !damp[k]}
		for j := range n.Nodes {
			if touch[k][j] {
				st.near = append(st.near, j)
				if touch[j] == nil {
					continue
				}
				delete(touch[j], k)
				damp[j] = damp[j] || damp[k]
				for i := range touch[k] {
					if i != j {
						touch[j][i] = true
					}
				}
			}
		}
		steps = append(steps, st)
	}
	for i := range steps {
		sortNear(steps[i].near, place)
	}
	return steps
}

// alive is the node that stands for k: Return for a node that the amplifier does not drive.
func (f *folded) alive(k int, driven []bool) int {
	if !driven[k] {
		return Return
	}
	return k
}

// Resistances in Ω, in series or across, that leave a resonance all but lossless do not damp a node; nor do the losses of
// coils and capacitors.
const (
	tooSmall = 0.1
	tooLarge = 1e5
)

// damped tells if the group turns so much power into heat that its nodes' pivots cannot vanish.
func (f *folded) damped(n *Netlist, g *group) bool {
	if g.port != nil {
		return true
	}
	for _, l := range g.members {
		if b := &n.Branches[l.branch]; b.Kind == Resistor && b.Value > tooSmall && b.Value < tooLarge {
			return true
		}
	}
	return false
}

// sortNear puts Amp first, Return last and the rest in between (insertion sort: the lists are short).
func sortNear(near []int, place []int) {
	key := func(k int) int {
		switch k {
		case Amp:
			return -1
		case Return:
			return 1 << 30
		}
		return place[k]
	}
	for i := 1; i < len(near); i++ {
		for j := i; j > 0 && key(near[j]) < key(near[j-1]); j-- {
			near[j], near[j-1] = near[j-1], near[j]
		}
	}
}
