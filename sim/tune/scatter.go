package tune

import (
	"math"
	"math/rand/v2"
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

// kick is the factor by which a value is moved at most.
const kick = 2.5

// kicked returns so many places about each of places, drawn by lot.
func (p *Problem) kicked(places []place, count int, seed uint64) []place {
	random := rand.New(rand.NewPCG(seed, 0x41c5)) // any second word
	var all []place
	for range count {
		for i := range places {
			x := make([]float64, len(p.vars))
			for v := range x {
				moved := places[i].x[v] + (2*random.Float64()-1)*math.Log(kick)
				x[v] = min(max(moved, math.Log(p.vars[v].Low)), math.Log(p.vars[v].High))
			}
			all = append(all, place{x: x, f: math.Inf(1)})
		}
	}
	return all
}
