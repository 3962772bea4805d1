package sim

import (
	"fmt"
	"math"

	"sixdown/sim/circuit"
	"sixdown/sim/driver"
)

// A DriverFit is the equivalent circuit that stands for a driver's impedance table in the time domain.
type DriverFit struct {
	Driver string
	File   string
	Fit    *driver.Fit
}

// A fitter is a load that is known by measurement.
type fitter interface {
	driver.Load
	Name() string
	Fit() *driver.Fit
}

// Fits returns the fit of each driver with an impedance table, in the order of the ways. The first call takes the
// time of the fitting, some tens of milliseconds a driver.
func (s *System) Fits() []DriverFit {
	var fits []DriverFit
	seen := map[*speaker]bool{}
	for _, u := range s.units {
		t, ok := u.speaker.load.(fitter)
		if !ok || seen[u.speaker] {
			continue
		}
		seen[u.speaker] = true
		fits = append(fits, DriverFit{u.speaker.name, t.Name(), t.Fit()})
	}
	return fits
}

// coarseFit is the error in per cent above which a table holds what no driver's impedance does.
const coarseFit = 10

// FitNotes returns what sound files take in place of the drivers' impedance tables and how near it is, a
// sentence each; none if there are no tables.
func (s *System) FitNotes() []string {
	var notes []string
	for _, f := range s.Fits() {
		note := fmt.Sprintf("driver %q: in sound files its impedance is an equivalent circuit, within %.2g %% of %s (worst %.2g %% at %s)",
			f.Driver, math.Max(f.Fit.RMSPercent, 0.01), f.File, math.Max(f.Fit.WorstPercent, 0.01), hertz(f.Fit.WorstAt))
		if f.Fit.WorstPercent > coarseFit {
			note += "; that is far for a driver: check the table"
		}
		notes = append(notes, note)
	}
	return notes
}

// FittedNetlist is Netlist with each driver's equivalent circuit in place of its impedance table: the circuit
// that sound files are of. It differs from Netlist by the fits' errors alone, and not at all without tables.
func (s *System) FittedNetlist() *circuit.Netlist {
	n := s.Netlist()
	for _, u := range s.units {
		if t, ok := u.speaker.load.(fitter); ok {
			n.Branches[u.branch].Port = port{t.Fit()}
		}
	}
	return n
}
