package tune

import (
	"math"
	"math/rand/v2"
	"slices"
)

// How far the neighbourhood of a choice goes.
const (
	wholeShelf = 40      // candidates of one part, up to which all are tried for it; of more, those near the present one
	nearOnes   = 6       // on each side
	wholePairs = 10      // candidates, up to which all are tried for two parts at once; of more, the next on each side
	smallShelf = 1e7     // choices in all, up to which climbs begin at some drawn by lot too
	scattered  = 16      // how many
	randomWord = 0x5e1ec // any
)

// climb goes from a choice to better ones that differ in one part or in two, until there are none.
func (b *buyer) climb(choice []int) error {
	if choice == nil {
		return nil
	}
	at := slices.Clone(choice)
	f, err := b.value(at, math.Inf(1))
	if err != nil {
		return err
	}
	if _, err := b.keep(at, f); err != nil {
		return err
	}
	next := slices.Clone(at)
	better := func() (bool, error) {
		g, err := b.value(next, f)
		if err != nil || !(g < f) {
			return false, err
		}
		f = g
		copy(at, next)
		_, err = b.keep(at, f)
		return true, err
	}
	for moved := true; moved && b.ctx.Err() == nil; {
		moved = false
		for v := range at {
			if b.ctx.Err() != nil {
				return nil
			}
			copy(next, at)
			for _, c := range b.around(v, at[v], wholeShelf, nearOnes) {
				next[v] = c
				ok, err := better()
				if err != nil {
					return err
				}
				moved = moved || ok
			}
		}
		if moved {
			continue // pairs only where one part alone leads no further
		}
		for v := range at {
			for w := v + 1; w < len(at); w++ {
				if b.ctx.Err() != nil {
					return nil
				}
				for _, c := range b.around(v, at[v], wholePairs, 1) {
					for _, d := range b.around(w, at[w], wholePairs, 1) {
						copy(next, at)
						next[v], next[w] = c, d
						ok, err := better()
						if err != nil {
							return err
						}
						moved = moved || ok
					}
				}
			}
		}
	}
	return nil
}

// around returns the candidates of variable v to be tried from c on: all of few, else those near on each side.
func (b *buyer) around(v, c, few, near int) []int {
	n := len(b.market.candidates[v])
	lo, hi := 0, n-1
	if n > few {
		lo, hi = max(c-near, 0), min(c+near, n-1)
	}
	var some []int
	for i := lo; i <= hi; i++ {
		if i != c {
			some = append(some, i)
		}
	}
	return some
}

// scattered returns choices drawn by lot, if there are few enough of all that they stand for them.
func (b *buyer) scattered() [][]int {
	all := 1.0
	for _, c := range b.market.candidates {
		all *= float64(len(c))
	}
	if all > smallShelf {
		return nil
	}
	random := rand.New(rand.NewPCG(randomWord, uint64(len(b.market.candidates))))
	choices := make([][]int, scattered)
	for i := range choices {
		choices[i] = make([]int, len(b.market.candidates))
		for v, c := range b.market.candidates {
			choices[i][v] = random.IntN(len(c))
		}
	}
	return choices
}
