package driver

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"
	"sync"
)

// An ImpedanceTable is a measured impedance: |Z| in Ω and its angle, interpolated as said of type curve. Its
// equivalent circuit is fitted when it is first asked for.
type ImpedanceTable struct {
	name   string
	freqs  []float64 // Hz, of the rows
	lo, hi float64   // Hz, first and last row
	ends   [2]float64
	curve  curve
	notes  []string
	fit    func() *Fit
}

// NewImpedanceTable makes a load of a table with a phase in every row and values in Ω, > 0 and below 1 GΩ.
// The error is a *TableError.
func NewImpedanceTable(t *Table) (*ImpedanceTable, error) {
	if !t.HasPhase {
		return nil, &TableError{File: t.Name, What: "the impedance has no phase column", Mend: "give three columns: Hz, ohm, degrees"}
	}
	if err := t.checkUnit("dB", "give the impedance in ohm, or correct the header"); err != nil {
		return nil, err
	}
	freqs, ohms, deg := t.columns()
	lnMag := make([]float64, len(ohms))
	for i, z := range ohms {
		if !(z > 0 && z < 1e9) {
			return nil, &TableError{File: t.Name, Line: t.Rows[i].Line, What: fmt.Sprintf("the impedance is %g ohm", z), Mend: "give its magnitude in ohm, above 0"}
		}
		lnMag[i] = math.Log(z)
	}
	phase, doubtful := unwrap(deg)
	z := &ImpedanceTable{
		name: t.Name, freqs: freqs, lo: freqs[0], hi: freqs[len(freqs)-1],
		ends:  [2]float64{ohms[0], ohms[len(ohms)-1]},
		curve: newCurve(freqs, lnMag, phase, 1), // no passive impedance rises or falls faster for long than a coil's or a capacitor's
		notes: slices.Concat(t.Notes, t.doubtOf(doubtful, false).Notes(), t.active(), t.oddImpedance()),
	}
	z.fit = sync.OnceValue(func() *Fit { return FitImpedance(z, FitSettings{}) })
	return z, nil
}

// active returns a note about the rows in which the resistance, the real part of the impedance, is negative: where they
// begin and end, and the worst.
func (t *Table) active() []string {
	var first, last, worst Row
	least, rows := 0.0, 0
	for _, r := range t.Rows {
		resistance := r.Value * math.Cos(r.PhaseDeg*math.Pi/180)
		if resistance >= 0 {
			continue
		}
		if rows++; rows == 1 {
			first = r
		}
		last = r
		if resistance < least {
			least, worst = resistance, r
		}
	}
	where := fmt.Sprintf("%d rows from %s to %s Hz, at worst", rows, hertz(first.Frequency), hertz(last.Frequency))
	switch rows {
	case 0:
		return nil
	case 1:
		where = "one row,"
	}
	return []string{fmt.Sprintf("%s:%d: the real part of the impedance is negative in %s %.3g ohm at %s Hz, and no passive driver gives power; check how it was measured", t.Name, worst.Line, where, least, hertz(worst.Frequency))}
}

// Impedance returns the interpolated impedance at s = ±j2πf. At a real s it is a resistance, the magnitude in
// the row at the nearer end of the table; elsewhere off the jω axis, where a table says nothing, the value at
// |s| stands in. Outside the table the angle stays within ±90°, as a passive load's must.
func (z *ImpedanceTable) Impedance(s complex128) complex128 {
	f := cmplx.Abs(s) / (2 * math.Pi)
	if imag(s) == 0 {
		if f*f < z.lo*z.hi {
			return complex(z.ends[0], 0)
		}
		return complex(z.ends[1], 0)
	}
	lnMag, phase := z.curve.polar(f)
	if f < z.lo || f > z.hi {
		phase = math.Max(-math.Pi/2, math.Min(math.Pi/2, phase))
	}
	if imag(s) < 0 {
		phase = -phase
	}
	return polarRect(lnMag, phase)
}

// Fit returns the equivalent circuit that stands for the table in the time domain, as FitImpedance makes it. It is
// fitted at the first call; all goroutines get the same.
func (z *ImpedanceTable) Fit() *Fit { return z.fit() }

// Elements returns those of Fit.
func (z *ImpedanceTable) Elements() []Element { return z.Fit().Elements() }

// Range returns the frequencies in Hz of the first and the last row; beyond them the impedance is invented.
func (z *ImpedanceTable) Range() (lo, hi float64) { return z.lo, z.hi }

// Beyond says how the table is carried on beyond its ends.
func (z *ImpedanceTable) Beyond() string { return "the slope of its nearest third of an octave" }

// Notes returns what is odd about the table, a sentence each.
func (z *ImpedanceTable) Notes() []string { return z.notes }

// Name returns the file's name.
func (z *ImpedanceTable) Name() string { return z.name }
