package sim

import (
	"errors"
	"fmt"
	"io"
	"math"

	"sixdown/sim/circuit"
	"sixdown/sim/driver"
	"sixdown/sim/field"
	"sixdown/xover"
)

// A port makes a driver's load a branch of the circuit.
type port struct{ driver.Load }

// Branches returns the driver's equivalent circuit; nil if it has none.
func (p port) Branches() []circuit.Branch {
	var bs []circuit.Branch
	for _, e := range p.Elements() {
		b := circuit.Branch{Name: e.Name, From: e.From, To: e.To, Value: e.Value}
		switch e.Kind {
		case driver.Resistor:
			b.Kind = circuit.Resistor
		case driver.Inductor:
			b.Kind = circuit.Inductor
		case driver.Capacitor:
			b.Kind = circuit.Capacitor
		}
		bs = append(bs, b)
	}
	return bs
}

// A speaker is a driver in its place.
type speaker struct {
	name     string
	load     driver.Load
	radiator driver.Radiator // nil: it has no acoustic output
	at       field.Point     // acoustic centre
	mic      field.Point     // where a measured response was taken
	path     func(field.Listener) field.Path
	around   *driver.Directivity                 // nil: not measured at angles
	bearing  func(ear field.Point) field.Bearing // of the ear from the axis on which around was measured
	measured bool                                // its response is a measurement, which has diaphragm and cabinet in it
	radius   float64                             // m, of the diaphragm, if it is not in the response already; 0: a point
	baffle   *field.Baffle                       // nil: its edges are not in the model, or in the response already
	tables   []table
	doubt    driver.Doubt // about the phases of all its responses
	notes    []string
}

// A table is a measurement with two ends.
type table interface {
	Name() string
	Range() (lo, hi float64)
	Beyond() string // how it is carried on there
	Notes() []string
}

// opener opens a file that a design names.
type opener func(name string) (io.ReadCloser, error)

// newSpeaker makes a speaker of what the design says about it.
func newSpeaker(d *xover.Driver, l field.Listener, baffle *field.Baffle, open opener) (*speaker, error) {
	sp := &speaker{name: d.Name, at: d.At}
	sheet, err := dataSheet(d)
	if err != nil {
		return nil, err
	}
	if err := sp.setLoad(d, sheet, open); err != nil {
		return nil, err
	}
	if err := sp.setRadiator(d, sheet, l, open); err != nil {
		return nil, err
	}
	if sp.radiator != nil && !sp.measured {
		sp.setBreakup(d)
		sp.setFront(d, baffle)
	}
	for _, t := range sp.tables {
		sp.notes = append(sp.notes, t.Notes()...)
	}
	sp.notes = append(sp.notes, sp.doubt.Notes()...)
	return sp, nil
}

// dataSheet returns the numbers of the data sheet, the box applied. Re is 0 if the sheet does not give it.
func dataSheet(d *xover.Driver) (driver.DataSheet, error) {
	s := driver.DataSheet{Re: d.Re, Le: d.Le, LossR2: d.LossR2, LossL2: d.LossL2, Fs: d.Fs, Qms: d.Qms, Qes: d.Qes}
	if s.Fs == 0 {
		return s, nil
	}
	if !(s.Qms > 0 && s.Qes > 0) {
		return s, fmt.Errorf("driver %q: fs is given without qms or qes; give all three", d.Name)
	}
	switch d.Box.Kind {
	case xover.ClosedBox:
		if !(d.Vas > 0 && d.Box.Volume > 0) {
			return s, fmt.Errorf("driver %q: a closed box needs vas and the box's volume; give both", d.Name)
		}
		s = s.InClosedBox(d.Vas, d.Box.Volume)
	case xover.VentedBox:
		if !(d.Vas > 0 && d.Box.Volume > 0 && d.Box.Tuning > 0) {
			return s, fmt.Errorf("driver %q: a vented box needs vas, the box's volume and its tuning; give all three", d.Name)
		}
		s = s.InVentedBox(d.Vas, d.Box.Volume, d.Box.Tuning, orDefault(d.Box.QL, defaultQL))
	}
	return s, nil
}

// setLoad chooses the electrical side: a plain resistance, else a table, else the data sheet.
func (sp *speaker) setLoad(d *xover.Driver, sheet driver.DataSheet, open opener) error {
	switch {
	case d.Resistance > 0:
		sp.load = driver.Resistance(d.Resistance)
	case d.ImpedanceFile != "":
		t, err := readTable(d, d.ImpedanceFile, open)
		if err != nil {
			return err
		}
		z, err := driver.NewImpedanceTable(t)
		if err != nil {
			return fmt.Errorf("driver %q: %w", d.Name, err)
		}
		sp.load = z
		sp.tables = append(sp.tables, z)
	case d.Re > 0:
		sp.load = sheet
	default:
		return fmt.Errorf("driver %q: nothing is said of its impedance; give impedance or re", d.Name)
	}
	return nil
}

// setRadiator chooses the acoustical side: a table, else the data sheet, else flat, else nothing.
func (sp *speaker) setRadiator(d *xover.Driver, sheet driver.DataSheet, l field.Listener, open opener) error {
	at := sp.at
	if at.Distance(l.Ear()) == 0 {
		return fmt.Errorf("driver %q: it stands where the ear is; move one of them", d.Name)
	}
	sp.path = func(l field.Listener) field.Path { return l.FromOneMetre(at) }
	switch {
	case d.ResponseFile != "":
		return sp.setMeasured(d, l, open)
	case !d.HasSensitivity:
		return nil
	case sheet.Fs == 0:
		sp.radiator = driver.NewFlat(d.Sensitivity)
	case sheet.Re == 0:
		return fmt.Errorf("driver %q: fs is given without re; give re too", d.Name)
	default:
		sp.radiator = driver.NewSheet(sheet, d.Sensitivity)
	}
	return nil
}

// setMeasured makes a measured response the radiator. It was measured at mic: where nothing is said of that, 1 m in
// front of the origin, or for minimum phase, which knows no common origin, 1 m straight ahead of the driver.
func (sp *speaker) setMeasured(d *xover.Driver, l field.Listener, open opener) error {
	sp.measured = true
	at, mic := field.Point(d.At), field.Point{0, 0, 1}
	if d.MinimumPhase {
		mic = field.Point{at[0], at[1], at[2] + 1}
	}
	if d.HasMic {
		mic = field.Point(d.Mic)
	}
	sp.mic = mic
	if at.Distance(mic) == 0 {
		return fmt.Errorf("driver %q: its microphone stands at its acoustic centre; correct mic or at", d.Name)
	}
	t, err := readTable(d, d.ResponseFile, open)
	if err != nil {
		return err
	}
	if d.MinimumPhase {
		r, err := driver.NewMinimumResponse(t)
		if err != nil {
			return fmt.Errorf("driver %q: %w", d.Name, err)
		}
		sp.radiator = r
		sp.tables = append(sp.tables, r)
		sp.path = func(l field.Listener) field.Path {
			p := l.FromOneMetre(at) // there is no flight time in the phase, wherever the microphone was
			p.Gain *= at.Distance(mic)
			return p
		}
		return sp.setAround(d, t, mic, l.SoundSpeed, open)
	}
	r, err := driver.NewResponseTable(t)
	if err != nil {
		return fmt.Errorf("driver %q: %w", d.Name, err)
	}
	sp.radiator = r
	sp.tables = append(sp.tables, r)
	sp.doubt = r.Doubt()
	sp.path = func(l field.Listener) field.Path { return l.FromMicrophone(at, mic) }
	return sp.setAround(d, t, mic, l.SoundSpeed, open)
}

// setBreakup puts the peaks of the diaphragm's resonances on the response.
func (sp *speaker) setBreakup(d *xover.Driver) {
	if len(d.Breakup) == 0 {
		return
	}
	peaks := make([]driver.Peak, len(d.Breakup))
	for i, p := range d.Breakup {
		peaks[i] = driver.Peak(p)
	}
	sp.radiator = driver.NewBreakup(sp.radiator, peaks)
}

// setFront says what of the speaker's own front the model has: the diaphragm's size and the baffle's edges.
func (sp *speaker) setFront(d *xover.Driver, baffle *field.Baffle) {
	sp.radius = d.Diameter / 2
	if sp.radius == 0 {
		sp.radius = math.Sqrt(d.Sd / math.Pi)
	}
	if baffle == nil {
		return
	}
	room := baffle.Room(sp.at)
	if room <= 0 {
		sp.notes = append(sp.notes, fmt.Sprintf("driver %q: it stands beside the baffle, whose edges are left out for it; correct at, or the baffle's width and height", sp.name))
		return
	}
	if room < sp.radius {
		sp.notes = append(sp.notes, fmt.Sprintf("driver %q: its diaphragm reaches over the edge of the baffle; correct its diameter, at, or the baffle's width and height", sp.name))
	}
	sp.baffle = baffle
}

// readTable opens and reads a table that a driver names.
func readTable(d *xover.Driver, name string, open opener) (t *driver.Table, err error) {
	if open == nil {
		return nil, fmt.Errorf("driver %q: %s: there is no way to open files here; give a way", d.Name, name)
	}
	r, err := open(name)
	if err != nil {
		return nil, fmt.Errorf("driver %q: %w", d.Name, err)
	}
	defer func() { err = errors.Join(err, r.Close()) }()
	t, err = driver.ReadTable(name, r)
	if err != nil {
		return nil, fmt.Errorf("driver %q: %w", d.Name, err)
	}
	return t, nil
}
