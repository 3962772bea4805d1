package tune

import (
	"math"
	"slices"
)

// Branch and bound: A. H. Land and A. G. Doig, "An Automatic Method of Solving Discrete Programming Problems", Econometrica 28,
// 1960, 497–520.

// retune is how many steps the rest takes when a part has been fixed.
const retune = 12

// branch looks at all choices of the variables that are -1 in choice, the others being made; x is the optimum of the rest so far.
func (b *buyer) branch(choice []int, x []float64) error {
	v := b.next(choice)
	if v < 0 {
		if ok, err := b.try(choice); err != nil || !ok {
			return err
		}
		return b.climb(b.best)
	}
	all := b.market.candidates[v]
	up, _ := slices.BinarySearchFunc(all, x[v], func(c candidate, at float64) int {
		if c.x < at {
			return -1
		}
		return 1
	})
	// From the optimum outward on both sides, the nearer first, each side until it can hold nothing better.
	lo, hi := up-1, up
	for lo >= 0 || hi < len(all) {
		c, low := hi, false
		if hi >= len(all) || lo >= 0 && x[v]-all[lo].x < all[hi].x-x[v] {
			c, low = lo, true
		}
		if b.ctx.Err() != nil || b.nodes >= b.most {
			return nil
		}
		choice[v] = c
		bound, y, err := b.bound(choice, x)
		if err != nil {
			return err
		}
		step := func(end int) { // one candidate further out, or to the end
			switch {
			case low && end > 0:
				lo = -1
			case low:
				lo--
			case end > 0:
				hi = len(all)
			default:
				hi++
			}
		}
		switch {
		case math.IsInf(bound, 1):
			step(0) // sold out, or out of reach of the limit: the next may not be
		case !(bound < b.bestF*(1-1e-9)):
			step(1)
		default:
			if err := b.branch(choice, y); err != nil {
				return err
			}
			step(0)
		}
		choice[v] = -1
	}
	return nil
}

// next returns the variable to be chosen next: the one that the objective depends on most, so that bad choices show early; -1 if
// all are made.
func (b *buyer) next(choice []int) int {
	best, most := -1, math.Inf(-1)
	for v, c := range choice {
		// A coarse choice of a strong part costs most.
		if gap := b.gap(v); c < 0 && b.bend[v]*gap*gap > most {
			best, most = v, b.bend[v]*gap*gap
		}
	}
	return best
}

// gap is the mean distance of a variable's candidates in ln.
func (b *buyer) gap(v int) float64 {
	all := b.market.candidates[v]
	if len(all) < 2 {
		return 10
	}
	return (all[len(all)-1].x - all[0].x) / float64(len(all)-1)
}

// bound returns the least objective that choice leaves possible, as far as a descent from x finds it, and where.
func (b *buyer) bound(choice []int, x []float64) (float64, []float64, error) {
	b.nodes++
	if b.tell != nil {
		b.tell(float64(b.nodes)/float64(b.most), b.bestF)
	}
	if !b.market.enough(choice) {
		return math.Inf(1), nil, nil
	}
	y := slices.Clone(x)
	for v, c := range choice {
		b.d.frozen[v] = c >= 0
		if c >= 0 {
			y[v] = b.market.candidates[v][c].x
		}
	}
	defer clear(b.d.frozen)
	if err := b.d.begin(y); err != nil {
		return math.Inf(1), nil, nil // a resonance without loss
	}
	for range retune {
		if b.d.over {
			break
		}
		// A bound that is below the best already needs no more digits.
		if err := b.d.run(1); err != nil {
			return 0, nil, err
		}
	}
	if b.d.missed > 1e-6 {
		return math.Inf(1), nil, nil
	}
	return b.d.f, slices.Clone(b.d.x), nil
}
