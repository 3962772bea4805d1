package preferred

import (
	"cmp"
	"math"
	"slices"
)

// Kind is what an Item is.
type Kind uint8

// The kinds of item.
const (
	Resistor  Kind = iota // Value in Ω
	Inductor              // Value in H
	Capacitor             // Value in F
)

// An Item is a part that can be bought. A number that is not stated is negative.
type Item struct {
	Kind  Kind
	Value float64 // Ω, H or F
	Tol   float64 // fraction of Value
	DCR   float64 // Ω, resistance of an Inductor's winding
	Price float64 // in the list's own currency
	Count int     // how many are on the shelf; negative: as many as are wanted
	Name  string  // what it is ordered by; "": not stated
}

// A Stock is what a shop or a shelf has.
type Stock struct {
	items []Item // by kind, then rising by value
}

// NewStock makes a Stock of items, whose values must be positive. Of several with one value the first that is stated is kept
// in front; it keeps a copy.
func NewStock(items []Item) *Stock {
	s := &Stock{slices.Clone(items)}
	slices.SortStableFunc(s.items, func(a, b Item) int {
		return cmp.Or(cmp.Compare(a.Kind, b.Kind), cmp.Compare(a.Value, b.Value))
	})
	return s
}

// Items returns all items, by kind and then rising by value.
func (s *Stock) Items() []Item { return slices.Clone(s.items) }

// Within returns the items of a kind with values from low to high, both included, rising.
func (s *Stock) Within(kind Kind, low, high float64) []Item {
	var some []Item
	for _, it := range s.items {
		if it.Kind == kind && it.Value >= low*(1-1e-12) && it.Value <= high*(1+1e-12) {
			some = append(some, it)
		}
	}
	return some
}

// A Shop sells every value of a series, in any number; nothing else is known of its parts.
type Shop struct{ Series Series }

// Within returns an item for each value of the series from low to high, both included, rising.
func (s Shop) Within(kind Kind, low, high float64) []Item {
	var some []Item
	for _, v := range s.Series.Within(low*(1-1e-12), high*(1+1e-12)) {
		some = append(some, Item{Kind: kind, Value: v, Tol: -1, DCR: -1, Price: -1, Count: -1})
	}
	return some
}

// Pairs returns what two items make of a kind in series and in parallel, with values from low to high, rising. parts are the
// indices in items of both; the resistance of two windings and the sum of two prices are stated if both are.
func Pairs(items []Item, low, high float64) (pairs []Pair) {
	for i, a := range items {
		for j := i; j < len(items); j++ {
			b := items[j]
			if i == j && a.Count == 1 {
				continue
			}
			add, across := a.Value+b.Value, a.Value*b.Value/(a.Value+b.Value)
			for _, parallel := range []bool{false, true} {
				p := Pair{A: i, B: j, Parallel: parallel, Value: add, DCR: -1, Price: -1}
				// Capacitors add up side by side, the others one after the other.
				if parallel != (a.Kind == Capacitor) {
					p.Value = across
				}
				if a.DCR >= 0 && b.DCR >= 0 {
					p.DCR = a.DCR + b.DCR
					if parallel {
						p.DCR = lossAcross(a, b)
					}
				}
				if a.Price >= 0 && b.Price >= 0 {
					p.Price = a.Price + b.Price
				}
				if p.Value >= low && p.Value <= high {
					pairs = append(pairs, p)
				}
			}
		}
	}
	slices.SortStableFunc(pairs, func(a, b Pair) int { return cmp.Compare(a.Value, b.Value) })
	return pairs
}

// A Pair is two items as one part.
type Pair struct {
	A, B     int // indices
	Parallel bool
	Value    float64 // Ω, H or F
	DCR      float64 // Ω; negative: not stated
	Price    float64 // negative: not stated
}

// lossAcross is the resistance of two coils side by side far above R/L, where their currents are as 1/L: the power
// R_a·i_a² + R_b·i_b² over (i_a + i_b)². At low frequencies it is R_a·R_b/(R_a + R_b), which is the same where both
// have the same R/L, as coils of one make nearly have.
func lossAcross(a, b Item) float64 {
	sum := a.Value + b.Value
	return (a.DCR*b.Value*b.Value + b.DCR*a.Value*a.Value) / math.Pow(sum, 2)
}
