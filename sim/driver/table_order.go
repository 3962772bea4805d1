package driver

import (
	"fmt"
	"math"
	"slices"
)

// goesBack returns the first row, in the order of the file, at which the frequencies turn back, having risen or fallen so far,
// and whether from there they run over what rows before cover already, as they do where two measurements stand one below
// the other; ok is false if they never turn back.
func goesBack(rows []Row) (at Row, over, ok bool) {
	turn, direction := 0, 0.
	lo, hi := math.Inf(1), 0. // of the rows before the turn
	for i, r := range rows {
		f := r.Frequency
		if i > 0 && f != rows[i-1].Frequency {
			step := math.Copysign(1, f-rows[i-1].Frequency)
			if direction == 0 {
				direction = step
			}
			if turn == 0 && step != direction {
				turn = i
			}
		}
		if turn == 0 {
			lo, hi = math.Min(lo, f), math.Max(hi, f)
		} else if lo < f && f < hi {
			return rows[turn], true, true
		}
	}
	return rows[turn], false, turn > 0
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
