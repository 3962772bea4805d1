package driver

import (
	"fmt"
	"math"
)

// A Doubt is where the phase of responses turns too far from one row to the next to be followed. The zero Doubt is none.
type Doubt struct {
	table     string // of the first place
	line      int    // in its file
	frequency float64
	places    int
	tables    int  // that have such places
	flight    bool // some may hold flight time that can be taken out
}

// doubtOf returns the doubt about rows of a table. flight tells whether it may hold flight time.
func (t *Table) doubtOf(rows []int, flight bool) Doubt {
	if len(rows) == 0 {
		return Doubt{}
	}
	r := t.Rows[rows[0]]
	return Doubt{t.Name, r.Line, r.Frequency, len(rows), 1, flight}
}

// knowing returns d with what ExcessDelay found in its table: where there surely is no flight time, none can be taken out.
func (d Doubt) knowing(excess, spread float64) Doubt {
	if (math.Abs(excess)+spread)*flightSpeed < worthTaking {
		d.flight = false
	}
	return d
}

// Plus returns the doubt of d's tables and of other's.
func (d Doubt) Plus(other Doubt) Doubt {
	if d.places == 0 {
		return other
	}
	d.places += other.places
	d.tables += other.tables
	d.flight = d.flight || other.flight
	return d
}

// Notes says it in a sentence; there is none where there is no doubt.
func (d Doubt) Notes() []string {
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
	mend := "measure in finer steps"
	if d.flight {
		mend = "take the flight time out, or measure in finer steps"
	}
	return []string{fmt.Sprintf("%s:%d: the phase turns by more than 135 degrees from one row to the next near %s Hz%s, so which way it went is a guess; %s", d.table, d.line, hertz(d.frequency), where, mend)}
}

// A null is a place where the level falls this much below what it is within half an octave on both sides. There the phase turns
// by up to half a circle, and whichever way it is taken to turn makes little sound. Near a null at f0 the pressure goes as
// |f - f0|, so of rows an nth of an octave apart the nearer is 20·log10(n) dB down: one shows from six rows an octave on.
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
