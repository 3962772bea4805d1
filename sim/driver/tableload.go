package driver

import (
	"fmt"
	"math"
	"math/cmplx"
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
	fit    func() (*Fit, error)
}

// NewImpedanceTable makes a load of a table with a phase in every row and values in Ω, > 0 and below 1 GΩ.
// The error is a *TableError.
func NewImpedanceTable(t *Table) (*ImpedanceTable, error) {
	if !t.HasPhase {
		return nil, &TableError{File: t.Name, What: "the impedance has no phase column", Mend: "give three columns: Hz, ohm, degrees"}
	}
	freqs, ohms, deg := t.columns()
	lnMag := make([]float64, len(ohms))
	active := 0
	for i, z := range ohms {
		if !(z > 0 && z < 1e9) {
			return nil, &TableError{File: t.Name, Line: t.Rows[i].Line, What: fmt.Sprintf("the impedance is %g ohm", z), Mend: "give its magnitude in ohm, above 0"}
		}
		lnMag[i] = math.Log(z)
		if active == 0 && math.Cos(deg[i]*math.Pi/180) < 0 {
			active = t.Rows[i].Line
		}
	}
	phase, doubtful := unwrap(deg)
	z := &ImpedanceTable{
		name: t.Name, freqs: freqs, lo: freqs[0], hi: freqs[len(freqs)-1],
		ends:  [2]float64{ohms[0], ohms[len(ohms)-1]},
		curve: newCurve(freqs, lnMag, phase, 1), // no passive impedance rises or falls faster for long than a coil's or a capacitor's
		notes: append(append([]string(nil), t.Notes...), t.doubts(doubtful)...),
	}
	if active > 0 {
		z.notes = append(z.notes, fmt.Sprintf("%s:%d: the impedance's angle is beyond 90 degrees, which no driver's is; check how it was measured", t.Name, active))
	}
	z.fit = sync.OnceValues(func() (*Fit, error) { return FitImpedance(z, FitSettings{}) })
	return z, nil
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
func (z *ImpedanceTable) Fit() (*Fit, error) { return z.fit() }

// Elements returns those of Fit; nil if the table has too few rows for one.
func (z *ImpedanceTable) Elements() []Element {
	f, err := z.Fit()
	if err != nil {
		return nil
	}
	return f.Elements()
}

// Range returns the frequencies in Hz of the first and the last row; beyond them the impedance is invented.
func (z *ImpedanceTable) Range() (lo, hi float64) { return z.lo, z.hi }

// Beyond says how the table is carried on beyond its ends.
func (z *ImpedanceTable) Beyond() string { return "the slope of its nearest third of an octave" }

// Notes returns what is odd about the table, a sentence each.
func (z *ImpedanceTable) Notes() []string { return z.notes }

// Name returns the file's name.
func (z *ImpedanceTable) Name() string { return z.name }
