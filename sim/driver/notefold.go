package driver

import (
	"fmt"
	"strings"
)

// A fold gathers the notes on many files of one driver, of which one export has the same oddity in all: each is told of
// the first file only, with how many more there are.
type fold struct {
	firsts []string
	more   map[string]int // files with a note of that kind, after the first
	kinds  []string
}

// add takes in a note on the named file; notes of one kind are told once.
func (f *fold) add(kind, note string) {
	n, known := f.more[kind]
	if known {
		f.more[kind] = n + 1
		return
	}
	if f.more == nil {
		f.more = map[string]int{}
	}
	f.more[kind] = 0
	f.firsts, f.kinds = append(f.firsts, note), append(f.kinds, kind)
}

// table takes in the notes of a table; what stands behind the place, file and line, is their kind.
func (f *fold) table(name string, notes []string) {
	for _, n := range notes {
		f.add(strings.TrimLeft(strings.TrimPrefix(n, name), ":0123456789"), n)
	}
}

// notes returns what is left to be told, a sentence each.
func (f *fold) notes() []string {
	var all []string
	for i, n := range f.firsts {
		if more := f.more[f.kinds[i]]; more > 0 {
			n += fmt.Sprintf("; so in %d more file(s)", more)
		}
		all = append(all, n)
	}
	return all
}
