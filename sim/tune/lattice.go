package tune

import (
	"math"
	"slices"
)

// How many lattice points are wanted, and how many places of the enumeration may be looked at to find them.
const (
	likelyPoints = 300
	likelyWork   = 200000
)

// A likelyChoice is a choice and what the quadratic model says it adds to the objective.
type likelyChoice struct {
	choice []int
	adds   float64
}

// likely returns the choices that the model f ≈ f₀ + (x - top)ᵀH(x - top) likes best, the best first. It is the search for close
// vectors of C. P. Schnorr and M. Euchner, "Lattice Basis Reduction: Improved Practical Algorithms and Solving Subset Sum
// Problems", Math. Programming 66, 1994, 181–199, on grids that need not be even: with H = RᵀR, a choice of the last variables
// fixes what they add, and the values of the one before are tried from the best on outward.
func (b *buyer) likely(top, hess []float64) [][]int {
	n := len(top)
	// The Cholesky factor of H with a little more on its diagonal, where parts do next to nothing.
	l := slices.Clone(hess)
	most := 0.0
	for i := range n {
		most = max(most, hess[i*n+i])
	}
	for i := range n {
		l[i*n+i] += 1e-9*most + math.SmallestNonzeroFloat64
	}
	if !cholesky(l, n) {
		return nil
	}
	var found []likelyChoice
	worst := math.Inf(1)
	choice, off := make([]int, n), make([]float64, n)
	work := 0
	// In H = LLᵀ, variable v adds (L[v][v]·off[v] + Σ_{w>v} L[w][v]·off[w])².
	var down func(v int, adds float64)
	down = func(v int, adds float64) {
		if v < 0 {
			at, _ := slices.BinarySearchFunc(found, adds, func(c likelyChoice, a float64) int {
				if c.adds < a {
					return -1
				}
				return 1
			})
			found = slices.Insert(found, at, likelyChoice{slices.Clone(choice), adds})
			if len(found) > likelyPoints {
				found = found[:likelyPoints]
			}
			if len(found) == likelyPoints {
				worst = found[len(found)-1].adds
			}
			return
		}
		lean := 0.0
		for w := v + 1; w < n; w++ {
			lean += l[w*n+v] * off[w]
		}
		diag := l[v*n+v]
		centre := top[v] - lean/diag
		all := b.market.candidates[v]
		up, _ := slices.BinarySearchFunc(all, centre, func(c candidate, x float64) int {
			if c.x < x {
				return -1
			}
			return 1
		})
		lo, hi := up-1, up
		for lo >= 0 || hi < len(all) {
			c := hi
			if hi >= len(all) || lo >= 0 && centre-all[lo].x < all[hi].x-centre {
				c = lo
				lo--
			} else {
				hi++
			}
			d := diag * (all[c].x - centre)
			work++
			if adds+d*d >= worst || work > likelyWork {
				return // those farther out add more
			}
			choice[v], off[v] = c, all[c].x-top[v]
			down(v-1, adds+d*d)
		}
	}
	down(n-1, 0)
	out := make([][]int, len(found))
	for i := range found {
		out[i] = found[i].choice
	}
	return out
}
