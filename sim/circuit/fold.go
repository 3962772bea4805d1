package circuit

import (
	"errors"
	"fmt"
	"math"
)

// A group is a part of the folded network with one admittance: the parts in it are in series (a chain),
// or it is one lossless or purely resistive part (it joins the tank of its edge), or a one-port.
type group struct {
	from, to int    // folded nodes
	members  []link // branches, in order from → to
	tank     bool   // a single R, L or C without loss: its admittance is a plain product
	port     OnePort
}

// A link is a branch in a chain; flip tells that the chain runs it from To to From.
type link struct {
	branch int
	flip   bool
}

// A coil is an inductor that is coupled to another.
type coil struct {
	branch   int
	from, to int
}

// A winding is a set of coils that are coupled directly or through each other.
type winding struct {
	coils []coil
	k     [][]float64 // coupling coefficients, 1 on the diagonal
}

// folded is the network after shorts are merged, opens dropped and chains collapsed.
type folded struct {
	node     []int // netlist node → the folded node that stands for it
	groups   []group
	windings []winding
	inner    map[int]tap // netlist nodes inside a chain
	groupOf  []int       // netlist branch → group, -1 none
	coilOf   [][2]int    // netlist branch → winding and coil, {-1,-1} none
	used     []bool      // folded node has a branch
}

// A tap is a place inside a chain: behind its first n members.
type tap struct{ group, n int }

// fold simplifies the netlist without changing what can be asked of it. The nodes of outs stay.
func fold(n *Netlist, outs []Output) (*folded, error) {
	node, err := n.joined()
	if err != nil {
		return nil, err
	}
	f := &folded{node: node, inner: map[int]tap{}, used: make([]bool, n.Nodes)}
	coupled := make([]bool, len(n.Branches))
	for _, c := range n.Couplings {
		coupled[c.A], coupled[c.B] = true, true
	}
	keep := make([]bool, n.Nodes) // nodes that must not vanish into a chain
	keep[Return], keep[Amp] = true, true
	for _, o := range outs {
		keep[node[o.From]], keep[node[o.To]] = true, true
	}
	for i := range n.Branches {
		b := &n.Branches[i]
		from, to := node[b.From], node[b.To]
		switch {
		case b.isShort() || b.isOpen():
		case coupled[i]:
			keep[from], keep[to] = true, true
			f.used[from], f.used[to] = true, true
		case from == to:
		default:
			if b.Kind == Port {
				keep[from], keep[to] = true, true
			}
			f.used[from], f.used[to] = true, true
			f.groups = append(f.groups, group{from: from, to: to, members: []link{{branch: i}}, port: b.Port})
		}
	}
	f.chain(n, keep)
	for i := range f.groups {
		g := &f.groups[i]
		if g.port == nil && len(g.members) == 1 {
			b := &n.Branches[g.members[0].branch]
			g.tank = b.Kind == Resistor || b.Loss == 0
		}
	}
	if err := f.wind(n, coupled); err != nil {
		return nil, err
	}
	f.index(len(n.Branches))
	return f, nil
}

// chain joins groups in series wherever just two of them meet at a node that is not kept.
func (f *folded) chain(n *Netlist, keep []bool) {
	at := make([][]int, n.Nodes) // folded node → groups that end there
	for i, g := range f.groups {
		at[g.from] = append(at[g.from], i)
		at[g.to] = append(at[g.to], i)
	}
	dead := make([]bool, len(f.groups))
	for k := range at {
		if keep[k] || len(at[k]) != 2 {
			continue
		}
		a, b := at[k][0], at[k][1]
		ga, gb := &f.groups[a], &f.groups[b]
		if a == b || ga.port != nil || gb.port != nil {
			continue
		}
		if ga.to != k {
			ga.reverse()
		}
		if gb.from != k {
			gb.reverse()
		}
		if ga.from == gb.to { // a loop that hangs on one node: the elimination deals with it
			continue
		}
		ga.members = append(append([]link(nil), ga.members...), gb.members...)
		ga.to = gb.to
		dead[b] = true
		f.used[k] = false
		for j, g := range at[ga.to] {
			if g == b {
				at[ga.to][j] = a
			}
		}
	}
	alive := f.groups[:0]
	for i, g := range f.groups {
		if !dead[i] {
			alive = append(alive, g)
		}
	}
	f.groups = alive
	for i := range f.groups {
		g := &f.groups[i]
		for m := 1; m < len(g.members); m++ {
			l := g.members[m]
			start := n.Branches[l.branch].From
			if l.flip {
				start = n.Branches[l.branch].To
			}
			f.inner[f.node[start]] = tap{i, m}
		}
	}
}

func (g *group) reverse() {
	g.from, g.to = g.to, g.from
	m := make([]link, len(g.members))
	for i, l := range g.members {
		m[len(m)-1-i] = link{l.branch, !l.flip}
	}
	g.members = m
}

// wind gathers the coupled coils into windings and checks that each winding can exist: its matrix of
// coupling coefficients must be positive definite, else the coils would give energy.
func (f *folded) wind(n *Netlist, coupled []bool) error {
	of := make(map[int]int) // branch → winding
	for i := range n.Branches {
		if coupled[i] {
			of[i] = len(f.windings)
			b := &n.Branches[i]
			f.windings = append(f.windings, winding{coils: []coil{{i, f.node[b.From], f.node[b.To]}}})
		}
	}
	for _, c := range n.Couplings {
		a, b := of[c.A], of[c.B]
		if a == b {
			continue
		}
		for _, x := range f.windings[b].coils {
			of[x.branch] = a
		}
		f.windings[a].coils = append(f.windings[a].coils, f.windings[b].coils...)
		f.windings[b].coils = nil
	}
	alive := f.windings[:0]
	for _, w := range f.windings {
		if len(w.coils) == 0 {
			continue
		}
		place := map[int]int{}
		w.k = make([][]float64, len(w.coils))
		for i, c := range w.coils {
			place[c.branch] = i
			w.k[i] = make([]float64, len(w.coils))
			w.k[i][i] = 1
		}
		for _, c := range n.Couplings {
			i, ok := place[c.A]
			if !ok {
				continue
			}
			j := place[c.B]
			if w.k[i][j] != 0 {
				return fmt.Errorf("circuit: coils %s and %s are coupled twice; couple them once", n.Branches[c.A].Name, n.Branches[c.B].Name)
			}
			w.k[i][j], w.k[j][i] = c.K, c.K
		}
		if !positiveDefinite(w.k) {
			return errors.New("circuit: coupled coils: these coefficients cannot hold together, the coils would give energy; lower the largest of them")
		}
		alive = append(alive, w)
	}
	f.windings = alive
	return nil
}

// positiveDefinite tries a Cholesky factorisation.
func positiveDefinite(m [][]float64) bool {
	n := len(m)
	l := make([][]float64, n)
	for i := range m {
		l[i] = make([]float64, n)
		for j := 0; j <= i; j++ {
			s := m[i][j]
			for k := 0; k < j; k++ {
				s -= l[i][k] * l[j][k]
			}
			if i != j {
				l[i][j] = s / l[j][j]
				continue
			}
			if !(s > 1e-12) {
				return false
			}
			l[i][i] = math.Sqrt(s)
		}
	}
	return true
}

// index fills the maps from netlist branches to where they went.
func (f *folded) index(branches int) {
	f.groupOf = make([]int, branches)
	f.coilOf = make([][2]int, branches)
	for i := range f.groupOf {
		f.groupOf[i] = -1
		f.coilOf[i] = [2]int{-1, -1}
	}
	for g := range f.groups {
		for _, l := range f.groups[g].members {
			f.groupOf[l.branch] = g
		}
	}
	for w := range f.windings {
		for c, x := range f.windings[w].coils {
			f.coilOf[x.branch] = [2]int{w, c}
		}
	}
}
