package driver

import (
	"fmt"
	"math"
	"slices"
)

// goesBack returns the first row, in the order of the file, at which the frequency goes back over what rows before it cover
// already, as it does where two measurements stand one below the other; ok is false if there is none. Files that fall,
// and bands that stand in any order, are fine.
func goesBack(rows []Row) (at Row, ok bool) {
	if len(rows) == 0 {
		return at, false
	}
	lo, hi := rows[0].Frequency, rows[0].Frequency   // of the runs before
	from, to := rows[0].Frequency, rows[0].Frequency // of this run
	direction, begin := 0., 0
	over := func() bool { return begin > 0 && from < hi*(1-closest) && to > lo*(1+closest) }
	for i := 1; i < len(rows); i++ {
		f, last := rows[i].Frequency, rows[i-1].Frequency
		step := math.Copysign(1, f-last)
		switch {
		case f == last:
			continue
		case direction == 0 || step == direction:
			direction = step
			from, to = math.Min(from, f), math.Max(to, f)
		default: // a run begins
			if over() {
				return rows[begin], true
			}
			lo, hi = math.Min(lo, from), math.Max(hi, to)
			from, to, direction, begin = f, f, 0, i
		}
	}
	return rows[begin], over()
}

// gap returns a note about the widest gap between two rows, if it is far wider than the others are. In a spectrum of
// equal steps in Hz it is one octave, from its first row to its second.
func (t *Table) gap() []string {
	const (
		widest  = 1.5 // octaves
		wider   = 6   // than the median
		fewRows = 8
	)
	if len(t.Rows) < fewRows {
		return nil
	}
	steps := make([]float64, len(t.Rows)-1)
	most := 0
	for i := range steps {
		if steps[i] = math.Log2(t.Rows[i+1].Frequency / t.Rows[i].Frequency); steps[i] > steps[most] {
			most = i
		}
	}
	octaves := steps[most]
	a, b := t.Rows[most], t.Rows[most+1]
	slices.Sort(steps)
	if octaves < widest || octaves < wider*steps[len(steps)/2] {
		return nil
	}
	return []string{fmt.Sprintf("%s:%d: there are no rows from %s to %s Hz, over %.1f octaves; what is there is a curve drawn through the rows beside it", t.Name, b.Line, hertz(a.Frequency), hertz(b.Frequency), octaves)}
}
