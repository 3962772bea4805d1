package driver

import (
	"fmt"
	"math"
)

// A doubt is where the phase turns too far from one row to the next to be followed. Doubts of several tables add up to one.
type doubt struct {
	table     string // of the first place
	line      int    // in its file
	frequency float64
	places    int
	tables    int // that have such places
}

// doubtOf returns the doubt about rows of a table.
func (t *Table) doubtOf(rows []int) doubt {
	if len(rows) == 0 {
		return doubt{}
	}
	r := t.Rows[rows[0]]
	return doubt{t.Name, r.Line, r.Frequency, len(rows), 1}
}

// add adds the doubt of another table.
func (d *doubt) add(other doubt) {
	if d.places == 0 {
		*d = other
		return
	}
	d.places += other.places
	d.tables += other.tables
}

// note says it in a sentence, or nothing where there is no doubt. flightOut tells whether flight time was taken out already.
func (d *doubt) note(flightOut bool) []string {
	if d.places == 0 {
		return nil
	}
	where := ""
	switch more := d.places - 1; {
	case d.tables > 1:
		where = fmt.Sprintf(", and in %d more places of %d tables", more, d.tables)
	case more > 0:
		where = fmt.Sprintf(", and in %d more places", more)
	}
	mend := "take the flight time out, or measure in finer steps"
	if flightOut {
		mend = "measure in finer steps"
	}
	return []string{fmt.Sprintf("%s:%d: the phase turns by more than 135 degrees from one row to the next near %s Hz%s, so which way it went is a guess; %s", d.table, d.line, hertz(d.frequency), where, mend)}
}

// A null is a place where the level falls this much below what it is within half an octave on both sides. There the phase turns
// by up to half a circle, and whichever way it is taken to turn makes little sound.
const (
	nullDepth = 15 * math.Ln10 / 20 // neper
	nullReach = math.Sqrt2          // ratio of frequencies
)

// outsideNulls returns those of the rows, at which the phase turns far from the row before, that are not at nulls of lnMag.
func outsideNulls(rows []int, freqs, lnMag []float64) []int {
	var kept []int
	for _, i := range rows {
		low := min(lnMag[i-1], lnMag[i])
		var below, above bool
		for k := i - 1; k >= 0 && freqs[k] > freqs[i]/nullReach; k-- {
			below = below || lnMag[k] > low+nullDepth
		}
		for k := i; k < len(freqs) && freqs[k] < freqs[i]*nullReach; k++ {
			above = above || lnMag[k] > low+nullDepth
		}
		if !(below && above) {
			kept = append(kept, i)
		}
	}
	return kept
}
