package sim

import (
	"cmp"
	"maps"
	"slices"
)

// Parts returns the names of the parts that the network uses, in the order of its branches.
func (s *System) Parts() []string {
	return slices.SortedFunc(maps.Keys(s.branches), func(a, b string) int {
		return cmp.Compare(s.branches[a][0], s.branches[b][0])
	})
}
