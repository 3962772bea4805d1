package xover

import (
	"fmt"
	"slices"
	"strings"
)

// Nearest returns the known name that name was most likely meant to be, "" if none is near: one that
// differs in case alone, else the one with the fewest slips, if they are no more than a third of its length.
func Nearest(name string, known []string) string {
	for _, k := range known {
		if strings.EqualFold(k, name) && k != name {
			return k
		}
	}
	a := []rune(name)
	if len(a) < 2 || len(a) > MaxNameRunes { // any letter is one slip from any other
		return ""
	}
	best, least := "", max(1, len(a)/3)+1
	for _, k := range known {
		b := []rune(k)
		if k == name || len(b)-len(a) >= least || len(a)-len(b) >= least {
			continue
		}
		// Among equals, a name with the same first letter is likelier: C3 for C9, not L9.
		slips := editDistance(a, b)
		if slips < least || slips == least && best != "" && best[0] != name[0] && k[0] == name[0] {
			best, least = k, slips
		}
	}
	return best
}

// editDistance counts the insertions, deletions, replacements and swaps of neighbours that turn a into b,
// no place being touched twice.
//
// F. J. Damerau, "A technique for computer detection and correction of spelling errors", Communications of
// the ACM 7(3), 1964, 171–176; by the usual dynamic programming over three rows.
func editDistance(a, b []rune) int {
	before, prev, row := make([]int, len(b)+1), make([]int, len(b)+1), make([]int, len(b)+1)
	for j := range prev {
		prev[j] = j
	}
	for i := 1; i <= len(a); i++ {
		row[0] = i
		for j := 1; j <= len(b); j++ {
			replace := prev[j-1]
			if a[i-1] != b[j-1] {
				replace++
			}
			row[j] = min(replace, prev[j]+1, row[j-1]+1)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				row[j] = min(row[j], before[j-2]+1)
			}
		}
		before, prev, row = prev, row, before
	}
	return prev[len(b)]
}

// didYouMean proposes the nearest known name, or says the fallback if there is none.
func didYouMean(name string, known []string, fallback string) string {
	if near := Nearest(name, known); near != "" {
		return fmt.Sprintf("did you mean %q?", near)
	}
	return fallback
}

// listed joins names for a message, the first dozen of them in order.
func listed(names []string) string {
	const most = 12
	if len(names) <= most {
		return strings.Join(names, ", ")
	}
	return strings.Join(names[:most], ", ") + ", …"
}

// sortedKeys returns the keys of a set in order, so that messages never change from run to run.
func sortedKeys[V any](set map[string]V) []string {
	keys := make([]string, 0, len(set))
	for k := range set {
		keys = append(keys, k)
	}
	slices.Sort(keys)
	return keys
}
