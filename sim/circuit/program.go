package circuit

import "fmt"

// A cell is what the program evaluates as one admittance: a chain of parts in series, whose impedance is
// R + j(ωL - S/ω), or the tank of an edge, all its single parts without loss side by side, whose
// admittance is G + j(ωC - Γ/ω). The three numbers are kept as a triple: {R, L, S} or {G, C, Γ}.
type cell struct {
	tank     bool
	from, to int
	members  []int // netlist branches
	y        int   // slot of its admittance; tanks have none of their own
	dv       int   // slot of the voltage from from to to
}

// portCell is a one-port of the folded network.
type portCell struct {
	branch   int
	from, to int
	y        int // slot
}

// opcode says what an op does; see block.go for the arithmetic.
type opcode uint8

const (
	opTank      opcode = iota // dst = tank cell
	opChain                   // dst = chain cell
	opAdd                     // dst = a + b
	opSub                     // dst = a - b
	opWinding                 // the admittance matrix of winding `cell` into the slots from dst on
	opElimG                   // node with near a and the return b: factor dst, fill sum = src + …
	opElim2                   // node with near a and b: factors dst and dst+1, fill sum = src + …
	opShare                   // dst = a/(a+b)
	opPivot                   // dst = 1/Σ of aux slots
	opFill                    // sum = src + a·b; src -1: none
	opWatch                   // mark where the sum of aux slots nearly vanishes beside its terms
	opWatchSum                // mark where src + a·b does
	opWatchDiff               // mark where src - a·b does
	opMul                     // dst = a·b
	opMulAdd                  // dst = src + a·b
	opMulSub                  // dst = src - a·b
	opMulNeg                  // dst = -a·b
	opZero                    // dst = 0
)

type op struct {
	code     opcode
	dst      int32
	a, b     int32
	src, sum int32
	cell     int32
	aux      []int32
}

// noSlot marks what is not there: the admittance of an edge that does not exist, the voltage of the return.
const noSlot = -1

// program is a compiled elimination.
type program struct {
	slots  int
	ops    []op // elimination, and the voltages of the outputs
	more   []op // voltages across the cells, which the gradient needs
	rest   []op // every other voltage
	cells  []cell
	ports  []portCell
	wind   []windCell
	steps  []elim
	volts  []across // folded node → its voltage
	outs   []across // output → its voltage
	groups []across // group → voltage from its from to its to
	coils  [][]across
	yin    int   // slot of the admittance between Amp and Return
	one    int   // slot that holds 1
	cellOf []int // netlist branch → cell; -1: none
	params []param
	adj    []adjoint // one per output
}

// elim is a step with its slots.
type elim struct {
	node   int
	near   []int   // nodes other than the return
	factor []int   // slots: y_kj/Σ_k
	inv    int     // slot: 1/Σ_k; noSlot until something needs it
	ground int     // slot: admittance to the return, or noSlot
	all    []int32 // slots of the admittances that add up to Σ_k
	coiled bool    // part of a winding meets at the node
}

// across is a voltage per volt at Amp: the slot that holds it, or its negative; noSlot: 0 V.
type across struct {
	slot int
	neg  bool
}

// windCell is a winding with the slot where its admittance matrix (row by row, upper triangle) starts.
type windCell struct {
	winding
	y int
}

func (w *windCell) slot(i, j int) int {
	if i > j {
		i, j = j, i
	}
	n := len(w.coils)
	return w.y + i*n - i*(i-1)/2 + j - i
}

type edge struct{ a, b int } // a < b

func edgeOf(a, b int) edge {
	if a > b {
		a, b = b, a
	}
	return edge{a, b}
}

// assembler writes a program.
type assembler struct {
	program
	f      *folded
	driven []bool
	at     map[edge]int   // slot that holds the edge's admittance now
	dest   *[]op          // where operations go
	rank   []int          // folded node → when it is eliminated; Amp and Return come last
	known  map[[2]int]int // voltages that have a slot
	leak   map[int]int    // node → slot of y_ground/Σ
	coiled map[edge]bool  // edges that carry part of a winding, of either sign
}

func (p *assembler) slot() int {
	p.slots++
	return p.slots - 1
}

func (p *assembler) emit(o op) { *p.dest = append(*p.dest, o) }

// assemble turns the folded network and its order into a program.
func assemble(n *Netlist, f *folded, driven []bool, steps []step, outs []Output) *program {
	p := &assembler{f: f, driven: driven, at: map[edge]int{}, coiled: map[edge]bool{}}
	p.dest = &p.ops
	p.one = p.slot()
	p.tanks()
	p.chains()
	p.windings()
	for _, s := range steps {
		p.eliminate(s)
	}
	p.yin = p.edge(Amp, Return)
	if p.yin == noSlot {
		p.yin = p.slot()
		p.emit(op{code: opZero, dst: int32(p.yin)})
	}
	p.back(n.Nodes, outs)
	p.listParams(n)
	p.dest = &p.more
	for _, o := range outs {
		p.pivots(f.alive(f.node[o.From], driven), f.alive(f.node[o.To], driven))
	}
	for _, o := range outs {
		p.adj = append(p.adj, p.adjoint(f.alive(f.node[o.From], driven), f.alive(f.node[o.To], driven), n.Source == 0))
	}
	return &p.program
}

func (p *assembler) edge(a, b int) int {
	if s, ok := p.at[edgeOf(a, b)]; ok {
		return s
	}
	return noSlot
}

// add puts slot y on the edge a–b, with sign -1 for subtraction.
func (p *assembler) add(a, b, y, sign int) {
	a, b = p.f.alive(a, p.driven), p.f.alive(b, p.driven)
	if a == b {
		return
	}
	e := edgeOf(a, b)
	old, ok := p.at[e]
	if !ok && sign > 0 {
		p.at[e] = y
		return
	}
	dst := p.slot()
	if !ok {
		old = p.slot()
		p.emit(op{code: opZero, dst: int32(old)})
	}
	code := opAdd
	if sign < 0 {
		code = opSub
	}
	p.emit(op{code: code, dst: int32(dst), a: int32(old), b: int32(y)})
	p.at[e] = dst
}

func (p *assembler) tanks() {
	of := map[edge]int{}
	for i := range p.f.groups {
		g := &p.f.groups[i]
		if !g.tank {
			continue
		}
		a, b := p.f.alive(g.from, p.driven), p.f.alive(g.to, p.driven)
		if a == b {
			continue
		}
		e := edgeOf(a, b)
		c, ok := of[e]
		if !ok {
			c = len(p.cells)
			of[e] = c
			p.cells = append(p.cells, cell{tank: true, from: a, to: b, y: noSlot})
		}
		p.cells[c].members = append(p.cells[c].members, g.members[0].branch)
	}
	for c := range p.cells {
		y := p.slot()
		p.emit(op{code: opTank, dst: int32(y), cell: int32(c)})
		p.at[edgeOf(p.cells[c].from, p.cells[c].to)] = y
	}
}

func (p *assembler) chains() {
	for i := range p.f.groups {
		g := &p.f.groups[i]
		if g.tank || p.f.alive(g.from, p.driven) == p.f.alive(g.to, p.driven) {
			continue
		}
		y := p.slot()
		from, to := p.f.alive(g.from, p.driven), p.f.alive(g.to, p.driven)
		if g.port != nil {
			p.ports = append(p.ports, portCell{branch: g.members[0].branch, from: from, to: to, y: y})
		} else {
			c := cell{from: from, to: to, y: y}
			for _, l := range g.members {
				c.members = append(c.members, l.branch)
			}
			p.emit(op{code: opChain, dst: int32(y), cell: int32(len(p.cells))})
			p.cells = append(p.cells, c)
		}
		p.add(g.from, g.to, y, 1)
	}
}

// windings stamps coupled coils. With I_a = Σ_b Y_ab·(V_pb - V_qb), each pair of coils adds Y_ab between
// p_a and q_b and between q_a and p_b, and takes it away between the p and between the q.
func (p *assembler) windings() {
	for _, w := range p.f.windings {
		c := windCell{winding: w, y: p.slots}
		p.slots += len(w.coils) * (len(w.coils) + 1) / 2
		p.emit(op{code: opWinding, dst: int32(c.y), cell: int32(len(p.wind))})
		p.wind = append(p.wind, c)
		for i, a := range w.coils {
			p.add(a.from, a.to, c.slot(i, i), 1)
			for j := i + 1; j < len(w.coils); j++ {
				b, y := w.coils[j], c.slot(i, j)
				p.add(a.from, b.to, y, 1)
				p.add(a.to, b.from, y, 1)
				p.add(a.from, b.from, y, -1)
				p.add(a.to, b.to, y, -1)
				for _, x := range [2]int{a.from, a.to} {
					for _, z := range [2]int{b.from, b.to} {
						p.coiled[edgeOf(p.f.alive(x, p.driven), p.f.alive(z, p.driven))] = true
					}
				}
			}
		}
	}
}

// eliminate writes the star-mesh step of one node: with Σ the sum of its admittances and a_j = y_j/Σ,
// every pair of its neighbours gains a_i·y_j.
func (p *assembler) eliminate(s step) {
	e := elim{node: s.node, inv: noSlot, ground: p.edge(s.node, Return)}
	ys := make([]int, 0, len(s.near))
	near := make([]int, 0, len(s.near))
	for _, j := range s.near {
		if y := p.edge(s.node, j); y != noSlot {
			ys, near = append(ys, y), append(near, j)
		}
	}
	for _, y := range ys {
		e.all = append(e.all, int32(y))
	}
	for _, j := range near {
		e.coiled = e.coiled || p.coiled[edgeOf(s.node, j)]
	}
	if s.reactive || e.coiled {
		p.emit(op{code: opWatch, aux: e.all})
	}
	for _, j := range near {
		if j != Return {
			e.near, e.factor = append(e.near, j), append(e.factor, p.slot())
		}
	}
	switch {
	case len(near) == 1: // it hangs on one node, whose voltage it has
		e.factor[0] = p.one
	case len(near) == 2:
		o := op{code: opElimG, dst: int32(e.factor[0]), a: int32(ys[0]), b: int32(ys[1]),
			src: int32(p.edge(near[0], near[1])), sum: int32(p.renew(near[0], near[1]))}
		if near[1] != Return {
			o.code = opElim2
		}
		p.emit(o)
		p.watchFill(&e, near[0], near[1], o.src, o.dst, o.b)
	default:
		e.inv = p.invert(e.all)
		for i, fac := range e.factor {
			p.emit(op{code: opMul, dst: int32(fac), a: int32(ys[i]), b: int32(e.inv)})
			for j := i + 1; j < len(near); j++ {
				o := op{code: opFill, a: int32(fac), b: int32(ys[j]),
					src: int32(p.edge(near[i], near[j])), sum: int32(p.renew(near[i], near[j]))}
				p.emit(o)
				p.watchFill(&e, near[i], near[j], o.src, o.a, o.b)
			}
		}
	}
	p.steps = append(p.steps, e)
}

// watchFill has the sum src + a·b watched that a fill of the edge between i and j has made, if part of a winding is
// in it: then its terms may cancel.
func (p *assembler) watchFill(e *elim, i, j int, src, a, b int32) {
	ed := edgeOf(i, j)
	if !e.coiled && !p.coiled[ed] {
		return
	}
	p.coiled[ed] = true
	if src != noSlot {
		p.emit(op{code: opWatchSum, src: src, a: a, b: b})
	}
}

// invert writes the reciprocal of a sum.
func (p *assembler) invert(ys []int32) int {
	s := p.slot()
	p.emit(op{code: opPivot, dst: int32(s), aux: ys})
	return s
}

// renew gives the edge a fresh slot; the old value stays where it was.
func (p *assembler) renew(a, b int) int {
	s := p.slot()
	p.at[edgeOf(a, b)] = s
	return s
}

// A Circuit is a compiled netlist. It never changes; any number of goroutines may use it.
type Circuit struct {
	net  Netlist
	outs []Output
	f    *folded
	p    *program

	active *active // not nil: there are amplifiers, and f and p are those of its parts
}

// Compile checks n, folds it, and compiles its elimination. outs are the voltages that the caller will ask
// gains of; every other voltage and current can be had too, more slowly. Compile keeps copies.
//
// A branch of value 0 (a potentiometer at its end) is part of the arrangement: a short or an open.
func Compile(n *Netlist, outs []Output) (*Circuit, error) {
	if err := n.check(outs); err != nil {
		return nil, err
	}
	c := &Circuit{net: *n, outs: append([]Output(nil), outs...)}
	c.net.Branches = append([]Branch(nil), n.Branches...)
	c.net.Couplings = append([]Coupling(nil), n.Couplings...)
	c.net.NodeNames = append([]string(nil), n.NodeNames...)
	if len(n.Amplifiers) > 0 {
		var err error
		if c.active, err = compileActive(c); err != nil {
			return nil, err
		}
		return c, nil
	}
	f, err := fold(&c.net, outs)
	if err != nil {
		return nil, err
	}
	driven, err := f.reach(&c.net, outs)
	if err != nil {
		return nil, err
	}
	c.f = f
	c.p = assemble(&c.net, f, driven, f.order(&c.net, driven), outs)
	return c, nil
}

// Outputs is how many outputs the circuit was compiled for.
func (c *Circuit) Outputs() int { return len(c.outs) }

// branch checks the index of a branch that a caller names.
func (c *Circuit) branch(i int) error {
	if i < 0 || i >= len(c.net.Branches) {
		return fmt.Errorf("circuit: branch %d; they are numbered 0 to %d", i, len(c.net.Branches)-1)
	}
	return nil
}
