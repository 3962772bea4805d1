package driver

import (
	"fmt"
	"math"
	"slices"
)

// A MinimumResponse is a measured level in dB SPL for ReferenceVoltage across the terminals, with the minimum
// phase that belongs to it instead of a measured one. So it holds no flight time, and no sign: a driver whose
// terminals were swapped looks the same.
type MinimumResponse struct {
	name   string
	lo, hi float64 // Hz, first and last row
	phase  *minimumPhase
	notes  []string
}

// NewMinimumResponse makes a radiator of a table with values in dB SPL between -500 and 500; a phase column is not
// looked at. Between rows the level is interpolated as in a ResponseTable; beyond the ends it goes on with the slope
// of the nearest octave, which Notes states, since the phase near the ends leans on it. The error is a *TableError.
func NewMinimumResponse(t *Table) (*MinimumResponse, error) {
	lnMag, err := t.lnPressures()
	if err != nil {
		return nil, err
	}
	freqs, _, _ := t.columns()
	r := &MinimumResponse{
		name: t.Name, lo: freqs[0], hi: freqs[len(freqs)-1],
		phase: minimumPhaseOf(freqs, lnMag),
		notes: slices.Concat(t.Notes, t.oddLevels()),
	}
	r.notes = append(r.notes, fmt.Sprintf("%s: its minimum phase takes the level to be one that %s below %s Hz and %s above %s Hz",
		t.Name, r.phase.low.say(), hertz(r.lo), r.phase.top.say(), hertz(r.hi)))
	if octaves := math.Log2(r.hi / r.lo); octaves > 0 && float64(len(freqs)-1) < 3*octaves {
		r.notes = append(r.notes, fmt.Sprintf("%s: it has %.1f rows an octave, so the phase is that of a smooth curve through them; give ten or more", t.Name, float64(len(freqs)-1)/octaves))
	}
	return r, nil
}

// minimumPhaseOf returns the minimum phase of rows: freqs in Hz, rising, and ln|H|.
func minimumPhaseOf(freqs, lnMag []float64) *minimumPhase {
	x := make([]float64, len(freqs))
	for i, f := range freqs {
		x[i] = math.Log(f)
	}
	return newMinimumPhase(newLine(x, lnMag), x)
}

// Pressure returns the pressure at f, where the microphone was, without flight time.
func (r *MinimumResponse) Pressure(f float64) complex128 { return polarRect(r.phase.polar(f)) }

// Range returns the frequencies in Hz of the first and the last row; beyond them the response is invented.
func (r *MinimumResponse) Range() (lo, hi float64) { return r.lo, r.hi }

// Beyond says how the table is carried on beyond its ends.
func (r *MinimumResponse) Beyond() string { return "the slope fitted to its nearest octave" }

// Notes returns what is odd about the table and what is assumed beyond its ends, a sentence each.
func (r *MinimumResponse) Notes() []string { return r.notes }

// Name returns the file's name.
func (r *MinimumResponse) Name() string { return r.name }
