package tune

import (
	"math"
	"math/rand/v2"
	"slices"
)

// scatter returns places to begin at, as logarithms within the bounds: the design's own first, then a sequence that fills the
// space evenly, a factor of 2, 4 or 12 to each side in turn: one place in three about the design's own values, the others about
// the natural ones. The sequence is Kronecker's with the powers of the root
// of t^(n+1) = t + 1 as its steps, which keeps any number of points well apart in n dimensions (M. Roberts, "The
// Unreasonable Effectiveness of Quasirandom Sequences", 2018, from memory); seed shifts it.
func (p *Problem) scatter(count int, seed uint64) [][]float64 {
	n := len(p.vars)
	root := 1.5
	for range 64 {
		root = math.Pow(1+root, 1/float64(n+1))
	}
	random := rand.New(rand.NewPCG(seed, 0x5ca7)) // any second word
	shift := make([]float64, n)
	for v := range shift {
		shift[v] = random.Float64()
	}
	factors := []float64{2, 4, 12}
	natural := p.natural()
	places := make([][]float64, count)
	for i := range places {
		places[i] = make([]float64, n)
		for v := range n {
			own := math.Log(p.vars[v].Value)
			if i > 0 {
				_, u := math.Modf(shift[v] + float64(i)*math.Pow(root, -float64(v+1)))
				if i%3 > 0 {
					about := natural[v]
					own = math.Log(about[(i/3)%len(about)])
				}
				own += (2*u - 1) * math.Log(factors[i/3%len(factors)])
			}
			places[i][v] = min(max(own, math.Log(p.vars[v].Low)), math.Log(p.vars[v].High))
		}
	}
	return places
}

// What children are like. Chosen on problems by lot and judged on others, as the rest of the search.
const (
	mixed  = 0.4 // share of those that have one way's values from another place
	moving = 1.5 // how many of a child's values are moved on average
	shaken = 0.2 // share of those of which all values are
	kick   = 2.5 // the factor by which a value is moved at most
)

// children returns so many new places for each of places, drawn by lot. Some take all values of one way from another place: ways
// meet at the amplifier and at the ear alone, so that what is good in two places may be good together.
func (p *Problem) children(places []place, count int, random *rand.Rand) []place {
	byWay := make([][]int, len(p.design.Ways))
	for w := range byWay {
		byWay[w] = p.variablesOf(w)
	}
	var all []place
	for range count {
		for i := range places {
			x := slices.Clone(places[i].x)
			if random.Float64() < mixed && len(byWay) > 0 {
				other := &places[random.IntN(len(places))]
				for _, v := range byWay[random.IntN(len(byWay))] {
					x[v] = other.x[v]
				}
			}
			chance := 2 * moving * random.Float64() / float64(len(x))
			if random.Float64() < shaken {
				chance = 1
			}
			for v := range x {
				if random.Float64() < chance {
					moved := x[v] + (2*random.Float64()-1)*math.Log(kick)
					x[v] = min(max(moved, math.Log(p.vars[v].Low)), math.Log(p.vars[v].High))
				}
			}
			all = append(all, place{x: x, f: math.Inf(1)})
		}
	}
	return all
}

// variablesOf returns which variables way w's network has, those that its parts follow too.
func (p *Problem) variablesOf(w int) (vars []int) {
	for _, part := range partsOf(p.design.Ways[w].Network) {
		v := slices.IndexFunc(p.vars, func(q Variable) bool { return q.Part == part || slices.Contains(q.Followers, part) })
		if v >= 0 && !slices.Contains(vars, v) {
			vars = append(vars, v)
		}
	}
	return vars
}
