package circuit_test

import (
	"fmt"
	"math"
	"math/rand/v2"

	"sixdown/sim/circuit"
)

// A generator makes networks of the shapes that people build, with values a builder could meet, from a seed.
type generator struct {
	r        *rand.Rand
	n        circuit.Netlist
	outs     []circuit.Output
	tone     bool // kΩ … MΩ and pF … nF instead of Ω, mH and µF
	lossless bool // ideal coils and capacitors
	most     int  // branches, at most
}

// randomNetworks is count networks of 4 … 40 branches. Every family of shapes appears in turn.
func randomNetworks(seed uint64, count int) []*testNetwork {
	families := []struct {
		name string
		make func(*generator)
	}{
		{"ladder", func(g *generator) { g.ladder(circuit.Amp, circuit.Return, 1+g.r.IntN(6), true) }},
		{"ways", (*generator).ways},
		{"bridged", (*generator).bridged},
		{"series-crossover", (*generator).seriesCrossover},
		{"tone", (*generator).toneNetwork},
		{"mesh", (*generator).mesh},
	}
	var list []*testNetwork
	for i := range count {
		f := families[i%len(families)]
		g := &generator{
			r:        rand.New(rand.NewPCG(seed, uint64(i))),
			n:        circuit.Netlist{Nodes: 2},
			lossless: i%5 == 0,
		}
		g.most = 6 + g.r.IntN(34) // a family may take a few more or less
		if i%3 != 0 {
			g.n.Source = g.logUniform(0.01, 2)
		}
		f.make(g)
		for len(g.n.Branches) < 4 {
			g.part(g.r.IntN(g.n.Nodes), circuit.Return)
		}
		g.couple()
		g.degenerate()
		for k := range g.n.Branches {
			g.n.Branches[k].Name = fmt.Sprintf("%c%d", "RLCX"[g.n.Branches[k].Kind], k)
		}
		list = append(list, &testNetwork{name: fmt.Sprintf("%d-%s", i, f.name), netlist: g.n, outs: g.outs})
	}
	return list
}

func (g *generator) chance(p float64) bool { return g.r.Float64() < p }

func (g *generator) logUniform(lo, hi float64) float64 {
	return lo * math.Pow(hi/lo, g.r.Float64())
}

func (g *generator) node() int {
	g.n.Nodes++
	return g.n.Nodes - 1
}

// room is how many more branches there may be.
func (g *generator) room() int { return g.most - len(g.n.Branches) }

// add puts a branch between a and b, facing either way, unless both are one node.
func (g *generator) add(kind circuit.Kind, a, b int) {
	if a == b {
		return
	}
	if g.chance(0.3) {
		a, b = b, a
	}
	br := circuit.Branch{Kind: kind, From: a, To: b}
	switch {
	case kind == circuit.Port:
		br.Port = g.driver()
	case kind == circuit.Resistor && g.tone:
		br.Value = g.logUniform(1e3, 2e6)
	case kind == circuit.Resistor:
		br.Value = g.logUniform(0.05, 1e3)
	case kind == circuit.Inductor && g.tone:
		br.Value, br.Loss = g.logUniform(0.1, 10), g.logUniform(10, 1e3)
	case kind == circuit.Inductor:
		br.Value, br.Loss = g.logUniform(5e-6, 15e-3), g.logUniform(0.02, 2)
	case kind == circuit.Capacitor && g.tone:
		br.Value, br.Loss = g.logUniform(47e-12, 1e-6), g.logUniform(0.1, 50)
	case kind == circuit.Capacitor:
		br.Value, br.Loss = g.logUniform(10e-9, 470e-6), g.logUniform(1e-3, 0.5)
	}
	if g.lossless || g.chance(0.2) {
		br.Loss = 0
	}
	g.n.Branches = append(g.n.Branches, br)
}

// part puts a resistor, a coil or a capacitor between a and b.
func (g *generator) part(a, b int) {
	kinds := []circuit.Kind{circuit.Resistor, circuit.Inductor, circuit.Inductor, circuit.Capacitor, circuit.Capacitor}
	if g.tone {
		kinds = []circuit.Kind{circuit.Resistor, circuit.Resistor, circuit.Resistor, circuit.Capacitor, circuit.Capacitor, circuit.Capacitor, circuit.Inductor}
	}
	g.add(kinds[g.r.IntN(len(kinds))], a, b)
}

// chain puts one to three parts in series between a and b.
func (g *generator) chain(a, b int) {
	for range g.r.IntN(3) {
		c := g.node()
		g.part(a, c)
		a = c
	}
	g.part(a, b)
}

// driver is a tweeter to a woofer; one in four is a bare coil, one in three of the rest has a lossy one.
func (g *generator) driver() *sheetDriver {
	d := &sheetDriver{Re: g.logUniform(2, 16), Le: g.logUniform(10e-6, 3e-3)}
	if g.chance(0.25) {
		return d
	}
	fs, qms, qes := g.logUniform(20, 2000), g.logUniform(1, 12), g.logUniform(0.2, 2)
	d.Res = d.Re * qms / qes
	d.Cmes = qes / (2 * math.Pi * fs * d.Re)
	d.Lces = d.Re / (2 * math.Pi * fs * qes)
	if g.chance(0.33) {
		d.R2, d.L2 = g.logUniform(1, 30), g.logUniform(50e-6, 3e-3)
	}
	return d
}

// load closes a way between hot and ret, and asks for its voltage.
func (g *generator) load(hot, ret int) {
	kind := circuit.Port
	if g.tone || g.chance(0.25) {
		kind = circuit.Resistor
	}
	g.add(kind, hot, ret)
	last := g.n.Branches[len(g.n.Branches)-1]
	g.outs = append(g.outs, circuit.Output{From: last.From, To: last.To})
}

// ladder leads from hot by stages of series and shunt arms to a load, and returns its nodes.
func (g *generator) ladder(hot, ret, stages int, loaded bool) []int {
	nodes := []int{hot}
	for range stages {
		if g.room() < 8 {
			break
		}
		next := g.node()
		g.part(hot, next)
		if g.chance(0.2) {
			g.part(hot, next) // a trap
		}
		hot = next
		nodes = append(nodes, hot)
		for range g.r.IntN(3) {
			if g.chance(0.4) {
				g.chain(hot, ret)
			} else {
				g.part(hot, ret)
			}
		}
	}
	if len(nodes) == 1 {
		hot = g.node()
		g.part(nodes[0], hot)
		nodes = append(nodes, hot)
	}
	if loaded {
		g.load(hot, ret)
	}
	return nodes
}

// ways is two to four ladders from the amplifier, some of them reaching across to each other.
func (g *generator) ways() {
	g.most = max(g.most, 16)
	var all []int
	for range 2 + g.r.IntN(3) {
		if g.room() < 4 {
			break
		}
		all = append(all, g.ladder(circuit.Amp, circuit.Return, 1+g.r.IntN(3), true)...)
	}
	for range g.r.IntN(3) {
		g.across(all)
	}
}

// across puts a part between any two of the nodes, and asks for the voltage between them half of the time.
func (g *generator) across(nodes []int) {
	a, b := nodes[g.r.IntN(len(nodes))], nodes[g.r.IntN(len(nodes))]
	if a == b || g.room() < 1 {
		return
	}
	g.part(a, b)
	if g.chance(0.5) {
		g.outs = append(g.outs, circuit.Output{From: a, To: b})
	}
}

// bridged is a ladder with arms that jump over its stages.
func (g *generator) bridged() {
	nodes := g.ladder(circuit.Amp, circuit.Return, 3+g.r.IntN(5), true)
	for range 1 + g.r.IntN(4) {
		g.across(nodes)
	}
}

// seriesCrossover is drivers in a chain across the amplifier, each with its parts beside it.
func (g *generator) seriesCrossover() {
	hot := circuit.Amp
	drivers := 2 + g.r.IntN(2)
	g.most = max(g.most, 12*drivers)
	for k := range drivers {
		next := circuit.Return
		if k < drivers-1 {
			next = g.node()
		}
		for range 1 + g.r.IntN(2) {
			g.chain(hot, next)
		}
		if g.chance(0.5) {
			g.ladder(hot, next, 1, true)
		} else {
			g.load(hot, next)
		}
		hot = next
	}
}

// toneNetwork is high-impedance ladders with a potentiometer's two halves and treble and bass arms, into a load.
func (g *generator) toneNetwork() {
	g.tone = true
	g.most = max(g.most, 14)
	if g.n.Source > 0 {
		g.n.Source = g.logUniform(100, 50e3)
	}
	top, wiper := g.node(), g.node()
	g.add(circuit.Capacitor, circuit.Amp, top)
	bottom := g.ladder(circuit.Amp, circuit.Return, 1+g.r.IntN(2), false)
	end := bottom[len(bottom)-1]
	g.add(circuit.Resistor, top, wiper)
	g.add(circuit.Resistor, wiper, end)
	g.chain(end, circuit.Return)
	if g.chance(0.5) {
		g.across([]int{top, wiper, end, circuit.Amp})
	}
	g.load(wiper, circuit.Return)
}

// mesh is no shape at all: a random tree over its nodes, then parts between random nodes.
func (g *generator) mesh() {
	g.most = max(g.most, 10)
	for range 2 + g.r.IntN(g.most/3) {
		at := g.r.IntN(g.n.Nodes)
		g.part(at, g.node())
	}
	// No loose ends: every node but the two terminals has two branches.
	for node := 2; node < g.n.Nodes; node++ {
		g.part(node, (node+1+g.r.IntN(g.n.Nodes-1))%g.n.Nodes)
	}
	g.part(circuit.Amp, g.n.Nodes-1)
	g.part(circuit.Return, g.n.Nodes-2)
	g.add(circuit.Resistor, circuit.Return, 2) // hangs a tree on Amp from Return, and the other way round
	g.add(circuit.Resistor, circuit.Amp, 2)
	for g.room() > 0 && g.chance(0.9) {
		g.part(g.r.IntN(g.n.Nodes), g.r.IntN(g.n.Nodes))
	}
	g.outs = append(g.outs, circuit.Output{From: g.n.Nodes - 1, To: circuit.Return})
	if g.n.Nodes > 3 {
		g.outs = append(g.outs, circuit.Output{From: 2, To: g.n.Nodes - 1})
	}
}

// couple joins coils, in half of the networks that have two or more: mostly neighbours by stray coupling, sometimes
// tightly as in a tapped coil.
func (g *generator) couple() {
	var coils []int
	for k, b := range g.n.Branches {
		if b.Kind == circuit.Inductor {
			coils = append(coils, k)
		}
	}
	if len(coils) < 2 || g.chance(0.5) {
		return
	}
	g.r.Shuffle(len(coils), func(i, j int) { coils[i], coils[j] = coils[j], coils[i] })
	k := g.logUniform(0.005, 0.3)
	if g.chance(0.25) {
		k = 0.95
	}
	if g.chance(0.5) {
		k = -k
	}
	g.n.Couplings = append(g.n.Couplings, circuit.Coupling{A: coils[0], B: coils[1], K: k})
	if len(coils) > 2 && g.chance(0.5) {
		// |k| ≤ 0.2 beside 0.95 or less keeps the inductance matrix positive definite: 1 - 0.95² > 0.2².
		g.n.Couplings = append(g.n.Couplings, circuit.Coupling{A: coils[2], B: coils[1], K: g.logUniform(0.01, 0.2)})
	}
	if len(coils) > 4 {
		g.n.Couplings = append(g.n.Couplings, circuit.Coupling{A: coils[3], B: coils[4], K: 0.05})
	}
}

// degenerate cuts a part off at one end and mends the cut with a wire, in one network of five; it also puts an empty
// place for a capacitor there. Both ends of the range of values are the solver's business.
func (g *generator) degenerate() {
	if !g.chance(0.2) {
		return
	}
	cut := &g.n.Branches[g.r.IntN(len(g.n.Branches))]
	end := cut.To
	for _, o := range g.outs {
		if o == (circuit.Output{From: cut.From, To: cut.To}) {
			return
		}
	}
	cut.To = g.node()
	wire := circuit.Branch{Kind: circuit.Resistor, From: cut.To, To: end}
	empty := circuit.Branch{Kind: circuit.Capacitor, From: cut.From, To: g.r.IntN(g.n.Nodes - 1)}
	g.n.Branches = append(g.n.Branches, wire, empty)
}
