package sim

import (
	"errors"
	"fmt"
	"io"
	"slices"
	"strings"

	"sixdown/sim/circuit"
	"sixdown/sim/field"
	"sixdown/xover"
)

// A System is a design made ready to answer. Its methods may be called from several goroutines at once.
type System struct {
	title    string
	level    float64 // V rms, open circuit
	tuneBand [2]float64
	tone     *xover.Tone // nil for a loudspeaker

	net      circuit.Netlist
	circuit  *circuit.Circuit
	outs     []circuit.Output
	names    []string
	ways     []way  // empty for a tone network
	units    []unit // those of the first way, then of the next
	branches map[string][]int
	listener field.Listener
	turned   field.Angle // of the ear, from where the design has it
	straight []air       // by unit, to the ear, turned by turned; of no meaning for one that makes no sound
	warnings []string
}

// A way is where one output goes.
type way struct {
	drivers     string // as the design has it, "upper | lower"
	first, past int    // its units
}

// Defaults for a Design that was put together in code and leaves these at 0; Parse gives the same.
const (
	defaultLevel    = 2.83 // V
	defaultDistance = 1    // m
	defaultSound    = 343  // m/s
	defaultQL       = 7    // of a vented box; common practice, no source
	tuneBandFrom    = 200  // Hz
	tuneBandTo      = 20e3 // Hz
)

// New makes a System of a design. open opens the driver tables that the design names, by the name it gives
// them; it may be nil if there are none. New keeps neither. The error names what in the design cannot be
// simulated and what to do instead.
func New(d *xover.Design, open func(name string) (io.ReadCloser, error)) (*System, error) {
	s := &System{
		title:    d.Title,
		level:    orDefault(d.Drive.Level, defaultLevel),
		tuneBand: d.Tune.Band,
	}
	if s.tuneBand == [2]float64{} {
		s.tuneBand = [2]float64{tuneBandFrom, tuneBandTo}
	}
	f := newFlattener(d)
	var err error
	switch {
	case d.Tone != nil && len(d.Ways) > 0:
		err = errors.New("design: it has both ways and a tone network; make two designs of it")
	case d.Tone != nil:
		err = s.addTone(d, f)
	case len(d.Ways) > 0:
		err = s.addWays(d, f, open)
	default:
		err = errors.New("design: it has neither ways nor a tone network; give one")
	}
	if err != nil {
		return nil, err
	}
	if err := f.join(); err != nil {
		return nil, err
	}
	s.net, s.branches = f.net, f.branches
	if s.circuit, err = circuit.Compile(&s.net, s.outs); err != nil {
		return nil, s.blameControl(d, err)
	}
	return s, nil
}

// blameControl adds to an error of the circuit which control has turned a potentiometer into a short, if one has: the
// circuit knows only the part.
func (s *System) blameControl(d *xover.Design, err error) error {
	for _, c := range d.Controls {
		for _, b := range s.branches[c.Part] {
			if br := &s.net.Branches[b]; br.Value == 0 && strings.Contains(err.Error(), br.Name+":") {
				return fmt.Errorf("control %q at %g: %w; turn it away from its end, or put a resistor in series", c.Name, c.At, err)
			}
		}
	}
	return err
}

func orDefault(v, def float64) float64 {
	if v == 0 {
		return def
	}
	return v
}

// addTone lays out a tone network: its source behind amp, its load across out.
func (s *System) addTone(d *xover.Design, f *flattener) error {
	tone := *d.Tone
	s.tone = &tone
	f.net.Source = tone.Source
	l, err := f.walk("", tone.Network)
	if err != nil {
		return err
	}
	if _, _, err := f.place(l); err != nil {
		return err
	}
	out, ok := f.nodes["out"]
	if !ok {
		return errors.New(`tone network: no node is called out; add "mark out" where the load is connected`)
	}
	if tone.Load > 0 {
		f.add("", circuit.Branch{Name: "load", Kind: circuit.Resistor, From: out, To: circuit.Return, Value: tone.Load})
	}
	s.outs = []circuit.Output{{From: out, To: circuit.Return}}
	s.names = []string{"out"}
	return nil
}

// addWays lays out the ways of a loudspeaker, drivers at the end of each.
func (s *System) addWays(d *xover.Design, f *flattener, open opener) error {
	f.net.Source = d.Drive.Source
	s.listener = field.Listener{
		Distance:   orDefault(d.Listen.Distance, defaultDistance),
		Height:     d.Listen.Height,
		SoundSpeed: orDefault(d.Air.SoundSpeed, defaultSound),
	}
	var baffle *field.Baffle
	if d.Baffle != nil {
		baffle = field.NewBaffle(d.Baffle.Width, d.Baffle.Height)
	}
	speakers := map[string]*speaker{}
	for i := range d.Drivers {
		name := d.Drivers[i].Name
		if !slices.ContainsFunc(d.Ways, func(w xover.Way) bool { return slices.Contains(w.DriverNames(), name) }) {
			continue // Parse warns of it
		}
		sp, err := newSpeaker(&d.Drivers[i], s.listener, baffle, open)
		if err != nil {
			return err
		}
		speakers[name] = sp
		for _, n := range sp.notes {
			if !slices.Contains(s.warnings, n) { // two of a kind share their files
				s.warnings = append(s.warnings, n)
			}
		}
	}
	ladders := make([]*ladder, len(d.Ways))
	for i, w := range d.Ways {
		var err error
		if ladders[i], err = f.walk(w.Name, w.Network); err != nil {
			return err
		}
	}
	for i, w := range d.Ways {
		from, to, err := f.place(ladders[i])
		if err != nil {
			return err
		}
		drivers := w.Drivers
		if drivers == nil {
			drivers = &xover.Expr{Part: w.Driver}
		}
		if !whole(drivers) {
			return fmt.Errorf("way %q: its drivers are joined by what is no expression; use those of package xover", w.Name)
		}
		j := &joiner{flattener: f, way: &w, index: i, speakers: speakers}
		if err := j.lay(&combo{}, drivers, from, to, nil); err != nil {
			return err
		}
		s.ways = append(s.ways, way{drivers.String(), len(s.units), len(s.units) + len(j.units)})
		s.units = append(s.units, j.units...)
		s.names = append(s.names, w.Name)
		if w.Reversed {
			from, to = to, from
		}
		s.outs = append(s.outs, circuit.Output{From: from, To: to})
	}
	for _, u := range s.units {
		var a air
		if u.speaker.radiator != nil {
			a = u.speaker.to(s.listener)
		}
		s.straight = append(s.straight, a)
	}
	s.warnSilent()
	s.warnTimeBase()
	return nil
}

// warnSilent says why there is no sum, if some drivers have an acoustic output and others have none.
func (s *System) warnSilent() {
	var silent, sounding []string
	for _, u := range s.units {
		if u.speaker.radiator == nil {
			silent = append(silent, u.speaker.name)
		} else {
			sounding = append(sounding, u.speaker.name)
		}
	}
	if len(silent) > 0 && len(sounding) > 0 {
		s.warnings = append(s.warnings, fmt.Sprintf("driver %q: it has neither response nor sensitivity, so no sum is given; give one of them", silent[0]))
	}
}

// Title returns the design's title.
func (s *System) Title() string { return s.title }

// Level returns the amplifier's open-circuit voltage in V rms that sound pressures are for.
func (s *System) Level() float64 { return s.level }

// Warnings returns what the builder should know about the answers, a sentence each: rows of tables that were
// passed over, what the design asks that is left out. What Predict had to invent outside a table is in its
// Response.
func (s *System) Warnings() []string { return slices.Clone(s.warnings) }

// Netlist returns a copy of the circuit, its one-ports shared.
func (s *System) Netlist() *circuit.Netlist {
	n := s.net
	n.NodeNames = slices.Clone(n.NodeNames)
	n.Branches = slices.Clone(n.Branches)
	n.Couplings = slices.Clone(n.Couplings)
	return &n
}

// Circuit returns the compiled circuit, whose outputs are Outputs.
func (s *System) Circuit() *circuit.Circuit { return s.circuit }

// Outputs returns the voltages that Names names: one per way across its driver, or across all of several, from minus to
// plus where the way is wired in reverse, so that a gain has the wiring polarity in it; for a tone network its one
// output.
func (s *System) Outputs() []circuit.Output { return slices.Clone(s.outs) }

// Names returns the names of the ways in the order of the design; "out" for a tone network.
func (s *System) Names() []string { return slices.Clone(s.names) }

// PartBranches returns the indices of a part's branches in the netlist: none if it is not used, two for a
// potentiometer with a wiper, the one up to the wiper first.
func (s *System) PartBranches(part string) []int { return slices.Clone(s.branches[part]) }

// DriverBranches returns the indices of the branches of way's drivers, in the order in which they are written; way
// indexes Names, and a tone network has none.
func (s *System) DriverBranches(way int) []int {
	var branches []int
	for _, u := range s.unitsOf(way) {
		branches = append(branches, u.branch)
	}
	return branches
}

// LoadImpedance returns the impedance in Ω that the drivers of a way have together at the complex frequency at, in rad/s: drivers is
// their arrangement, nil for one.
func (s *System) LoadImpedance(way int, drivers *xover.Expr, at complex128) complex128 {
	units := s.unitsOf(way)
	next := 0
	var of func(e *xover.Expr) complex128
	of = func(e *xover.Expr) complex128 {
		if e == nil || e.Op == xover.Leaf {
			next++
			return units[next-1].speaker.load.Impedance(at)
		}
		sum := complex128(0)
		for _, arg := range e.Args {
			if z := of(arg); e.Op == xover.InSeries {
				sum += z
			} else {
				sum += 1 / z
			}
		}
		if e.Op == xover.InSeries {
			return sum
		}
		return 1 / sum
	}
	return of(drivers)
}

func (s *System) unitsOf(way int) []unit { return s.units[s.ways[way].first:s.ways[way].past] }
