package tune

import (
	"fmt"
	"math"
	"slices"
	"strconv"

	"sixdown/xover"
	"sixdown/xover/preferred"
	"sixdown/xover/quantity"
)

// A Source is where parts are bought: a preferred.Shop or a preferred.Stock.
type Source interface {
	// Within returns the items of a kind with values from low to high, rising.
	Within(kind preferred.Kind, low, high float64) []preferred.Item
}

// KindOf returns the kind of item that a kind of part is.
func KindOf(k xover.Kind) preferred.Kind {
	switch k {
	case xover.Inductor:
		return preferred.Inductor
	case xover.Capacitor:
		return preferred.Capacitor
	}
	return preferred.Resistor
}

// A candidate is a value that a variable can be bought in.
type candidate struct {
	x     float64 // ln value
	value float64
	ohm   float64 // resistance of a coil; 0: it does not matter
	price float64 // of all that the variable stands for; 0: not stated
	items [2]int  // indices of Problem-wide items; -1: none
	pair  *preferred.Pair
}

// A market is what can be bought for each variable.
type market struct {
	items      []preferred.Item
	candidates [][]candidate // by variable, rising
	parts      []int         // by variable: how many parts it stands for
}

// Pairs are of items within this ratio of a part's range, since a partner farther off hardly counts, and of no more than so many.
const (
	pairReach    = 10
	mostForPairs = 700
)

// market sets out what source has. With pairs, two items may make one part.
func (p *Problem) market(source Source, coils windings, pairs bool) (*market, error) {
	m := &market{candidates: make([][]candidate, len(p.vars))}
	known := map[preferred.Item]int{}
	index := func(it preferred.Item) int {
		i, ok := known[it]
		if !ok {
			i = len(m.items)
			known[it] = i
			m.items = append(m.items, it)
		}
		return i
	}
	for v := range p.vars {
		q := &p.vars[v]
		parts := 1 + len(q.Followers)
		m.parts = append(m.parts, parts)
		add := func(value, dcr, price float64, items [2]int, pair *preferred.Pair) {
			c := candidate{x: math.Log(value), value: value, items: items, pair: pair}
			if q.Kind == xover.Inductor {
				if c.ohm = dcr; !(dcr > 0) {
					c.ohm = threeFigures(coils.ohm(v, c.x))
				}
			}
			if price > 0 {
				c.price = price * float64(parts)
			}
			m.candidates[v] = append(m.candidates[v], c)
		}
		single := source.Within(KindOf(q.Kind), q.Low, q.High)
		for _, it := range single {
			if it.Count < 0 || it.Count >= parts {
				add(it.Value, it.DCR, it.Price, [2]int{index(it), -1}, nil)
			}
		}
		if pairs {
			all := source.Within(KindOf(q.Kind), q.Low/pairReach, q.High*pairReach)
			if len(all) > mostForPairs {
				return nil, fmt.Errorf("tune: %s may be made of pairs of %d items, which are too many; at most %d between %s and %s: take a coarser series, or narrow its range",
					q.Part, len(all), mostForPairs, quantity.Round(q.Low/pairReach, q.Kind.Unit(), 3), quantity.Round(q.High*pairReach, q.Kind.Unit(), 3))
			}
			wound := slices.Clone(all)
			for i := range wound {
				if it := &wound[i]; it.Kind == preferred.Inductor && !(it.DCR > 0) {
					it.DCR = threeFigures(coils.ohm(v, math.Log(it.Value)))
				}
			}
			for _, pr := range preferred.Pairs(wound, q.Low, q.High) {
				add(pr.Value, pr.DCR, pr.Price, [2]int{index(all[pr.A]), index(all[pr.B])}, &pr)
			}
		}
		slices.SortStableFunc(m.candidates[v], func(a, b candidate) int {
			switch {
			case a.x != b.x:
				if a.x < b.x {
					return -1
				}
				return 1
			case a.price != b.price:
				if a.price < b.price {
					return -1
				}
				return 1
			}
			return 0
		})
		m.candidates[v] = thinned(m.candidates[v])
	}
	return m, nil
}

// threeFigures rounds a resistance to what is known of one that was never measured.
func threeFigures(ohm float64) float64 {
	if !(ohm > 0) {
		return 0
	}
	rounded, _ := strconv.ParseFloat(strconv.FormatFloat(ohm, 'e', 2, 64), 64) // its own text always parses
	return rounded
}

// thinned leaves out candidates that differ from the one before by less than a thousandth, unless they are single items, which
// are no more trouble than pairs.
func thinned(all []candidate) []candidate {
	var kept []candidate
	for _, c := range all {
		if n := len(kept); n > 0 && c.x-kept[n-1].x < 1e-3 && c.pair != nil {
			continue
		} else if n > 0 && c.x-kept[n-1].x < 1e-3 && kept[n-1].pair != nil && c.pair == nil {
			kept[n-1] = c
			continue
		}
		kept = append(kept, c)
	}
	return kept
}

// nearest returns the index of the candidate of variable v that is nearest to x by ratio; -1 if there is none.
func (m *market) nearest(v int, x float64) int {
	best := -1
	for i := range m.candidates[v] {
		if best < 0 || math.Abs(m.candidates[v][i].x-x) < math.Abs(m.candidates[v][best].x-x) {
			best = i
		}
	}
	return best
}

// enough reports whether the shelf has what these choices take, -1 being one not made.
func (m *market) enough(choice []int) bool {
	for i, it := range m.items {
		if it.Count < 0 {
			continue
		}
		need := 0
		for v, c := range choice {
			if c < 0 {
				continue
			}
			for _, k := range m.candidates[v][c].items {
				if k == i {
					need += m.parts[v]
				}
			}
		}
		if need > it.Count {
			return false
		}
	}
	return true
}

// price returns what choices cost, as far as prices are stated.
func (m *market) price(choice []int) float64 {
	sum := 0.0
	for v, c := range choice {
		sum += m.candidates[v][c].price
	}
	return sum
}
