package driver

import (
	"fmt"
	"math"
	"slices"
)

// A ResponseTable is a measured response: dB SPL and its phase for ReferenceVoltage across the terminals.
type ResponseTable struct {
	name   string
	lo, hi float64 // Hz, first and last row
	curve  curve   // the delay taken out
	delay  float64 // s
	excess float64 // s, as ExcessDelay finds it
	spread float64 // s, of it
	notes  []string
	doubt  Doubt
}

// NewResponseTable makes a radiator of a table with a phase in every row and values in dB SPL between -500
// and 500. The error is a *TableError.
func NewResponseTable(t *Table) (*ResponseTable, error) {
	excess, spread := ExcessDelay(t)
	r, err := newResponseTable(t, flight(excess, spread))
	if err != nil {
		return nil, err
	}
	r.excess, r.spread = excess, spread
	r.doubt = r.doubt.knowing(excess, spread)
	return r, nil
}

// newResponseTable is NewResponseTable with the flight time in s that is to be taken out before the phase is followed.
func newResponseTable(t *Table, delay float64) (*ResponseTable, error) {
	if !t.HasPhase {
		return nil, &TableError{File: t.Name, What: "the response has no phase column", Mend: "give three columns: Hz, dB, degrees; or let it be minimum phase with phase = \"minimum\""}
	}
	lnMag, err := t.lnPressures()
	if err != nil {
		return nil, err
	}
	// With the flight time out the phase turns slowly, and can be followed from row to row where the rows are far apart.
	freqs, _, deg := t.columns()
	for i, f := range freqs {
		deg[i] += 360 * f * delay
	}
	phase, doubtful := unwrap(deg)
	return &ResponseTable{
		name: t.Name, lo: freqs[0], hi: freqs[len(freqs)-1],
		curve: newCurve(freqs, lnMag, phase, math.Inf(1)),
		delay: delay,
		notes: slices.Concat(t.Notes, t.oddResponse()),
		doubt: t.doubtOf(outsideNulls(doubtful, freqs, lnMag), delay == 0),
	}, nil
}

// lnPressures returns ln of the pressures in Pa per volt that the levels stand for, which must lie between -500 and
// 500 dB SPL. The error is a *TableError.
func (t *Table) lnPressures() ([]float64, error) {
	if err := t.checkUnit("ohm", "give the sound pressure level in dB, or correct the header"); err != nil {
		return nil, err
	}
	ln := make([]float64, len(t.Rows))
	for i, r := range t.Rows {
		if !(math.Abs(r.Value) <= 500) {
			return nil, &TableError{File: t.Name, Line: r.Line, What: fmt.Sprintf("the level is %g dB", r.Value), Mend: "give the sound pressure level in dB"}
		}
		ln[i] = math.Log(pascal(r.Value))
	}
	return ln, nil
}

// Beyond says how the table is carried on beyond its ends.
func (r *ResponseTable) Beyond() string { return "the slope of its nearest third of an octave" }

// Pressure returns the interpolated pressure at f, where the microphone was, with what flight time the phase holds.
func (r *ResponseTable) Pressure(f float64) complex128 {
	lnMag, phase := r.curve.polar(f)
	return polarRect(lnMag, phase-2*math.Pi*f*r.delay)
}

// ExcessDelay returns what ExcessDelay finds in the table.
func (r *ResponseTable) ExcessDelay() (seconds, spread float64) { return r.excess, r.spread }

// Range returns the frequencies in Hz of the first and the last row; beyond them the response is invented.
func (r *ResponseTable) Range() (lo, hi float64) { return r.lo, r.hi }

// Doubt tells where its phase cannot be followed. It is not in Notes, since a driver may have many tables and one doubt.
func (r *ResponseTable) Doubt() Doubt { return r.doubt }

// Notes returns what is odd about the table, a sentence each, but for its doubt.
func (r *ResponseTable) Notes() []string { return r.notes }

// Name returns the file's name.
func (r *ResponseTable) Name() string { return r.name }
