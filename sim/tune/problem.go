package tune

import (
	"errors"
	"fmt"
	"io"
	"math"

	"sixdown/sim"
	"sixdown/sim/circuit"
	"sixdown/sim/field"
	"sixdown/xover"
)

// What the search looks at.
const (
	perOctave = 24    // points of the grid, as the objective is defined
	coarse    = 8     // points of the grid on which a search begins
	floorDB   = -20   // a way's target counts where it is above this
	within    = 12    // dB below the sum within which both ways have a say in the phase between them
	phaseUnit = 10    // degrees that count as much as 1 dB
	loadFrom  = 20.   // Hz, from where the least impedance is looked for
	loadTo    = 20e3  // Hz
	loadGrid  = 48    // points an octave
	silent    = -400. // dB, for what cannot be heard at all
)

// A Variable is a part whose value may be moved, or a control that may be turned.
type Variable struct {
	Part      string // of a control, the potentiometer
	Control   string // its name; "": the value of a part. Value, Low and High are then settings
	Kind      xover.Kind
	Value     float64  // Ω, H or F: where the search begins, the design's own value unless Moved
	Low, High float64  // least and greatest, the same unit
	Followers []string // parts that have the same value
	Moved     bool     // the design's value was beyond Low or High
}

// A Problem is a design to be tuned. It does not change, and may be used from several goroutines.
type Problem struct {
	design   *xover.Design
	sys      *sim.System
	open     func(name string) (io.ReadCloser, error)
	vars     []Variable
	branches [][]int // of the netlist, by variable, those of its followers too

	grid  float64   // points an octave, at least
	freqs []float64 // Hz
	terms []term
	ears  []ear
	fixed bool        // the level is given
	level float64     // dB, then
	phase float64     // weight of each pair's phase
	meets []phasePair // where the targets say that it counts; nil: they do not say
	limit float64     // Ω, least |Zin|; 0: none
	scale float64     // the largest weight: what is a small objective is so times this

	rough *Problem // the same on a coarser grid; nil in itself
}

// An ear is a place at which pressures are: the listening point first, then those of the design's tune angles. press holds the
// pressures in Pa for a gain of 1, by way; without sound it is nil.
type ear struct{ press [][]complex128 }

// A term is one mean square of the objective, of levels in dB less what they should be.
type term struct {
	way    int       // of the design; -1: the sum
	ear    int       // index of Problem.ears
	at     []int     // indices of Problem.freqs
	aim    []float64 // dB, for each of at
	weight float64   // of each point: the term's own over the number of points
	level  int       // terms with the same one have their level in common
}

// New makes a Problem of a design and the System that was made of it. open opens the file that [tune] curve names; it
// may be nil if there is none. New keeps all three. The error says what is missing and how to mend it.
func New(d *xover.Design, sys *sim.System, open func(name string) (io.ReadCloser, error)) (*Problem, error) {
	p, err := newProblem(d, sys, open, perOctave)
	if err != nil {
		return nil, err
	}
	p.rough, err = newProblem(d, sys, open, coarse)
	return p, err
}

// WithLimit returns the same problem with another limit on the impedance, in Ω; 0: none.
func (p *Problem) WithLimit(ohm float64) *Problem {
	q, rough := *p, *p.rough
	q.limit, rough.limit = ohm, ohm
	q.rough = &rough
	return &q
}

var errNothingMoves = errors.New("tune: no part may be moved; take hold off one, or name one in a network")

// newProblem is New with so many points an octave, without a rough one.
func newProblem(d *xover.Design, sys *sim.System, open func(name string) (io.ReadCloser, error), grid float64) (*Problem, error) {
	p := &Problem{design: d, sys: sys, open: open, grid: grid, limit: d.Tune.MinImpedance, fixed: d.Tune.HasLevel && (sys.Sums() || d.Tone != nil), level: d.Tune.Level} // a level in SPL is none for gains
	band := d.Tune.Band
	if band == [2]float64{} {
		band = [2]float64{200, 20e3}
	}
	p.freqs = logGrid(band[0], band[1], grid)
	p.variables()
	if len(p.vars) == 0 && len(d.Controls) == 0 {
		return nil, errNothingMoves
	}
	if err := p.listen(); err != nil {
		return nil, err
	}
	aim, err := sim.Aim(&d.Tune, p.freqs, open)
	if err != nil {
		return nil, fmt.Errorf("tune: %w", err)
	}
	return p, p.setTerms(aim)
}

// logGrid returns frequencies in Hz from lo to hi, both included, evenly spaced in their logarithm, at least n an octave.
func logGrid(lo, hi float64, n float64) []float64 {
	steps := max(1, int(math.Ceil(n*math.Log2(hi/lo)-1e-9)))
	f := make([]float64, steps+1)
	for i := range f {
		f[i] = lo * math.Pow(hi/lo, float64(i)/float64(steps))
	}
	f[0], f[steps] = lo, hi
	return f
}

// bounds returns what can be bought of a kind, in Ω, H or F: for crossovers, or for tone networks (common practice, no source).
func (p *Problem) bounds(k xover.Kind) (low, high float64) {
	if p.design.Tone != nil {
		switch k {
		case xover.Inductor:
			return 1e-3, 100
		case xover.Capacitor:
			return 10e-12, 100e-6
		}
		return 10, 10e6
	}
	switch k {
	case xover.Inductor:
		return 0.02e-3, 15e-3
	case xover.Capacitor:
		return 0.1e-6, 470e-6
	}
	return 0.1, 100
}

// leader returns the part whose value p has in the end.
func (p *Problem) leader(part *xover.Part) *xover.Part {
	for hops := 0; part.Same != "" && hops <= len(p.design.Parts); hops++ {
		part = p.design.Part(part.Same)
	}
	return part
}

// variables finds the parts that may be moved: those that the network uses, are no potentiometers, and are not held.
func (p *Problem) variables() {
	index := map[string]int{}
	for i := range p.design.Parts {
		part := &p.design.Parts[i]
		lead := p.leader(part)
		used := p.sys.PartBranches(part.Name)
		if len(used) == 0 || lead.Kind == xover.Potentiometer || lead.Hold || part.Hold {
			continue
		}
		v, ok := index[lead.Name]
		if !ok {
			v = len(p.vars)
			index[lead.Name] = v
			low, high := p.bounds(lead.Kind)
			if lead.Range != [2]float64{} {
				low, high = lead.Range[0], lead.Range[1]
			}
			value := min(max(lead.Value, low), high)
			p.vars = append(p.vars, Variable{Part: lead.Name, Kind: lead.Kind, Value: value, Low: low, High: high, Moved: value != lead.Value})
			p.branches = append(p.branches, nil)
		}
		if part != lead {
			p.vars[v].Followers = append(p.vars[v].Followers, part.Name)
		}
		p.branches[v] = append(p.branches[v], used...)
	}
}

// listen takes the pressures at the listening point and at the design's other places of the ear.
func (p *Problem) listen() error {
	if !p.sys.Sums() {
		p.ears = []ear{{}}
		return nil
	}
	angles := append([]xover.EarAngle{{}}, p.design.Tune.Angles...)
	for _, a := range angles {
		sys, err := p.sys.Turned(field.Angle{HorizontalDeg: a.HorizontalDeg, VerticalDeg: a.VerticalDeg})
		if err != nil {
			return fmt.Errorf("tune: %w", err)
		}
		e := ear{}
		for i := range sys.Names() {
			press := make([]complex128, len(p.freqs))
			sys.Pressures(press, i, p.freqs)
			e.press = append(e.press, press)
		}
		p.ears = append(p.ears, e)
	}
	return nil
}

// setTerms lays out the objective; aim is what the sum should do, in dB over the grid.
func (p *Problem) setTerms(aim []float64) error {
	w := p.design.Tune.Weights
	if w == (xover.Weights{}) {
		w = xover.Weights{Sum: 1, Ways: 1, Angles: 1}
	}
	if p.scale = max(w.Sum, w.Ways, w.Phase); len(p.design.Tune.Angles) > 0 {
		p.scale = max(p.scale, w.Angles)
	}
	if p.scale == 0 || p.design.Tone != nil {
		p.scale = 1
	}
	all := make([]int, len(p.freqs))
	for i := range all {
		all[i] = i
	}
	n := float64(len(all))
	if p.sys.Sums() {
		p.terms = append(p.terms, term{way: -1, at: all, aim: aim, weight: w.Sum / n})
	}
	if p.design.Tone != nil {
		p.terms = append(p.terms, term{way: 0, at: all, aim: aim, weight: 1 / n})
		return nil
	}
	targets := make([][]float64, len(p.design.Ways))
	for i := range p.design.Ways {
		way := &p.design.Ways[i]
		if len(way.Targets) == 0 {
			continue
		}
		target, err := sim.TargetDB(way.Targets, p.freqs)
		if err != nil {
			return fmt.Errorf("tune: way %q: %w", way.Name, err)
		}
		targets[i] = target
		t := term{way: i}
		for k, v := range target {
			if v > floorDB {
				t.at, t.aim = append(t.at, k), append(t.aim, v)
			}
		}
		if len(t.at) > 0 {
			t.weight = w.Ways / float64(len(t.at))
			p.terms = append(p.terms, t)
		}
	}
	if len(p.terms) == 0 {
		return errors.New("tune: there is nothing to aim at; give the drivers an acoustic output, or a way a target within [tune] band")
	}
	for e := 1; e < len(p.ears); e++ {
		p.terms = append(p.terms, term{way: -1, ear: e, at: all, aim: aim, weight: w.Angles / n, level: e})
	}
	if p.sys.Sums() && len(p.design.Ways) > 1 {
		p.phase, p.meets = w.Phase, meetings(targets)
	}
	return nil
}

// Variables returns the parts that may be moved, in the order of the design.
func (p *Problem) Variables() []Variable {
	vars := make([]Variable, len(p.vars))
	copy(vars, p.vars)
	return vars
}

// Start returns the values at which the search begins, by variable.
func (p *Problem) Start() []float64 {
	start := make([]float64, len(p.vars))
	for i := range start {
		start[i] = p.vars[i].Value
	}
	return start
}

// outputs is how many ways there are.
func (p *Problem) outputs() int { return len(p.sys.Names()) }

// newSweep prepares the circuit over freqs. With coils, every coil that has a winding is compiled with a resistance.
func (p *Problem) newSweep(freqs []float64, coils windings) (*circuit.Sweep, error) {
	c := p.sys.Circuit()
	if coils != nil {
		net := p.sys.Netlist()
		for v := range coils {
			for _, b := range p.branches[v] {
				if coils[v] != nil && net.Branches[b].Loss == 0 {
					net.Branches[b].Loss = leastOhm
				}
			}
		}
		var err error
		if c, err = circuit.Compile(net, p.sys.Outputs()); err != nil {
			return nil, fmt.Errorf("tune: %w", err)
		}
	}
	s, err := c.NewSweep(freqs)
	if err != nil {
		return nil, fmt.Errorf("tune: %w", err)
	}
	return s, nil
}

// move gives variable v of a sweep the value of which x is the logarithm.
func (p *Problem) move(s *circuit.Sweep, coils windings, v int, x float64) error {
	if p.vars[v].Control != "" {
		return p.turn(s, v, math.Exp(x))
	}
	for _, b := range p.branches[v] {
		if err := s.SetValue(b, math.Exp(x)); err != nil {
			return err
		}
		if ohm := coils.ohm(v, x); ohm > 0 {
			if err := s.SetLoss(b, ohm); err != nil {
				return err
			}
		}
	}
	return nil
}
