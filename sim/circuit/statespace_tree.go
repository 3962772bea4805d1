package circuit

import "math"

// A normalTree is a spanning tree that takes in, in this order, the source, as many capacitors as it can, then
// resistors, and coils only where nothing else is left. The voltages of the tree's elements give all others by
// the loop law, the currents of the links (the elements outside) give all others by the cut law.
//
// Within a kind the tree prefers the largest capacitance, the largest conductance and the smallest inductance. Then the
// links only ever add something small to a pivot, and values that lie decades apart do not spoil each other's digits.
//
// Which equations hang on which is decided here by counting, never by comparing rounded numbers.
type normalTree struct {
	source []int              // the source, one element
	tree   [Port + 2][]int    // elements in the tree, by kind
	link   [Port + 2][]int    // elements outside it, by kind
	place  []int              // element → position in its list
	nodeV  [][]treeVoltage    // node → the tree voltages from its root to it
	root   []int              // node → the root of its connected part
	from   []element          // the elements
	fill   map[[2]Kind]matrix // loops, by kinds of tree element and link
}

// treeVoltage is ± the voltage of one tree element.
type treeVoltage struct {
	element int
	sign    float64
}

func newNormalTree(g *elementGraph) *normalTree {
	nodes := len(g.joined)
	t := &normalTree{
		from:  g.elements,
		place: make([]int, len(g.elements)),
		nodeV: make([][]treeVoltage, nodes),
		root:  make([]int, nodes),
		fill:  map[[2]Kind]matrix{},
	}
	t.choose(g)
	t.walk(nodes)
	t.trace()
	return t
}

// choose grows the tree, best element first (Kruskal's algorithm).
func (t *normalTree) choose(g *elementGraph) {
	order := upTo(len(g.elements))
	rank := func(e *element) (int, float64) {
		switch e.kind {
		case sourceKind:
			return 0, 0
		case Capacitor:
			return 1, -e.value
		case Resistor:
			return 2, e.value
		}
		return 3, e.value
	}
	sortBy(order, func(i, j int) bool {
		ki, vi := rank(&g.elements[i])
		kj, vj := rank(&g.elements[j])
		return ki < kj || ki == kj && vi < vj
	})
	part := upTo(len(g.joined))
	find := func(k int) int {
		for part[k] != k {
			part[k] = part[part[k]]
			k = part[k]
		}
		return k
	}
	for _, i := range order {
		e := &g.elements[i]
		list := &t.link[e.kind]
		if p, q := find(e.from), find(e.to); p != q {
			part[p] = q
			list = &t.tree[e.kind]
		}
		t.place[i] = len(*list)
		*list = append(*list, i)
	}
	t.source = t.tree[sourceKind]
}

// walk expresses the voltage of every node against the root of its connected part by tree voltages.
func (t *normalTree) walk(nodes int) {
	at := make([][]int, nodes)
	for _, list := range t.tree {
		for _, i := range list {
			e := &t.from[i]
			at[e.from] = append(at[e.from], i)
			at[e.to] = append(at[e.to], i)
		}
	}
	seen := make([]bool, nodes)
	for start := range nodes { // Return is node 0 and so a root
		if seen[start] {
			continue
		}
		seen[start] = true
		t.root[start] = start
		for queue := []int{start}; len(queue) > 0; queue = queue[1:] {
			k := queue[0]
			for _, i := range at[k] {
				e := &t.from[i]
				next, sign := e.from, 1.0
				if next == k {
					next, sign = e.to, -1
				}
				if seen[next] {
					continue
				}
				seen[next] = true
				t.root[next] = start
				way := t.nodeV[k]
				t.nodeV[next] = append(way[:len(way):len(way)], treeVoltage{i, sign})
				queue = append(queue, next)
			}
		}
	}
}

// trace fills in the fundamental loops F: the voltages of the links are Fᵀ × those of the tree,
// the currents of the tree are -F × those of the links.
func (t *normalTree) trace() {
	kinds := []Kind{sourceKind, Capacitor, Resistor, Inductor}
	for _, a := range kinds {
		for _, b := range kinds {
			t.fill[[2]Kind{a, b}] = newMatrix(len(t.tree[a]), len(t.link[b]))
		}
	}
	for _, b := range kinds {
		for col, i := range t.link[b] {
			e := &t.from[i]
			t.along(e.from, e.to, func(kind Kind, row int, sign float64) {
				f := t.fill[[2]Kind{kind, b}]
				f.set(row, col, f.at(row, col)+sign)
			})
		}
	}
}

// along calls visit for each tree voltage on the way from one node to another, those
// on the way from the root to where they part included: there they cancel.
func (t *normalTree) along(from, to int, visit func(kind Kind, row int, sign float64)) {
	for _, v := range t.nodeV[from] {
		visit(t.from[v.element].kind, t.place[v.element], v.sign)
	}
	for _, v := range t.nodeV[to] {
		visit(t.from[v.element].kind, t.place[v.element], -v.sign)
	}
}

// loops is the part of F with tree elements of one kind as rows and links of another as columns; entries are 0 and ±1.
func (t *normalTree) loops(tree, link Kind) matrix { return t.fill[[2]Kind{tree, link}] }

// A treePath is a voltage between two nodes as a sum of tree voltages.
type treePath map[Kind]matrix

// of is the path's row over the tree's elements of a kind.
func (p treePath) of(kind Kind) matrix { return p[kind] }

// path is the way between two nodes; ok is false if nothing joins them.
func (t *normalTree) path(from, to int) (path treePath, ok bool) {
	if t.root[from] != t.root[to] {
		return nil, false
	}
	path = treePath{}
	for _, kind := range []Kind{sourceKind, Capacitor, Resistor, Inductor} {
		path[kind] = newMatrix(1, len(t.tree[kind]))
	}
	t.along(from, to, func(kind Kind, row int, sign float64) {
		path[kind].set(0, row, path[kind].at(0, row)+sign)
	})
	return path, true
}

// independentRows picks rows of m, whose entries are 0 and ±1, that all others are combinations of.
// It returns which, and basis with row i of m = Σ basis[i][k] × row independent[k]. m is a part of
// a loop matrix, therefore totally unimodular: elimination meets no number but 0 and ±1, and is exact.
func independentRows(m matrix) (independent []int, basis matrix) {
	type pivotRow struct {
		row   []float64
		pivot int
		made  []float64 // by which combination of independent rows
	}
	var pivots []pivotRow
	made := make([][]float64, m.rows)
	for i := range m.rows {
		row := append([]float64(nil), m.data[i*m.cols:(i+1)*m.cols]...)
		combination := make([]float64, m.rows)
		for _, p := range pivots {
			f := row[p.pivot] / p.row[p.pivot]
			if f == 0 {
				continue
			}
			for j := range row {
				row[j] -= f * p.row[j]
			}
			for j := range combination {
				combination[j] += f * p.made[j]
			}
		}
		pivot := -1
		for j, v := range row {
			if math.Abs(v) > 0.5 {
				pivot = j
				break
			}
		}
		if pivot < 0 {
			made[i] = combination
			continue
		}
		own := make([]float64, m.rows)
		for j, v := range combination {
			own[j] = -v
		}
		own[len(independent)] = 1
		pivots = append(pivots, pivotRow{row, pivot, own})
		made[i] = make([]float64, m.rows)
		made[i][len(independent)] = 1
		independent = append(independent, i)
	}
	basis = newMatrix(m.rows, len(independent))
	for i := range m.rows {
		copy(basis.data[i*basis.cols:(i+1)*basis.cols], made[i])
	}
	return independent, basis
}
