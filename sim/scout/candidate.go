package scout

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"

	"sixdown/sim"
	"sixdown/sim/tune"
	"sixdown/xover"
	"sixdown/xover/align"
	"sixdown/xover/ladder"
	"sixdown/xover/quantity"
)

// A plan is one arrangement, not yet sized.
type plan struct {
	points   []float64 // Hz, a crossover each, rising
	target   xover.Target
	low      int   // order of the low-pass ladders
	high     int   // order of the high-pass ladders
	reversed uint  // bit i: way i is reversed
	zobel    bool  // the drivers that a low-pass ends in get their voice coil compensated
	quieter  []int // ways that get a pad
}

// String says what the plan is: "2.2 kHz linkwitz-riley 4, low 2nd, high 3rd order".
func (p *plan) String() string {
	text := ""
	for i, f := range p.points {
		if i > 0 {
			text += " and "
		}
		text += quantity.Round(f, quantity.Hertz, 3)
	}
	text += fmt.Sprintf(" %s %d, low order %d, high order %d", p.target.Shape, p.target.Order, p.low, p.high)
	if p.zobel {
		text += ", Zobel"
	}
	return text
}

// A targetShape is what the ways should be at the ear, with the ladders that may get there: drivers add slopes of their own, so a
// ladder of a lower order often suffices.
type targetShape struct {
	shape  string
	order  int
	orders [][2]int // of low-pass and high-pass ladder
}

func targetShapes() []targetShape {
	return []targetShape{
		{"linkwitz-riley", 2, [][2]int{{1, 2}, {2, 2}}},
		{"butterworth", 3, [][2]int{{2, 2}, {2, 3}, {3, 3}}},
		{"linkwitz-riley", 4, [][2]int{{2, 2}, {2, 3}, {3, 3}, {4, 4}}},
	}
}

// So many points are tried at each crossing, besides the design's own.
const (
	pointsTwoWay   = 5
	pointsThreeWay = 4
)

// A leeway is where two ways may cross.
type leeway struct {
	low, high float64  // Hz
	reasons   []string // what bounds it, a sentence each
	unknown   []string // what should bound it and does not
}

// resonances returns the drivers' resonances in Hz by name: the data sheet's, or that which the impedance table tells to a twentieth.
func resonances(sys *sim.System, d *xover.Design) func(driver string) float64 {
	const sure = 0.05
	found := map[string]float64{}
	for _, f := range sys.Fits() {
		if f.Fit.Resonates() && f.Fit.Fs.Sigma < sure*f.Fit.Fs.Value {
			found[f.Driver] = f.Fit.Fs.Value
		}
	}
	for i := range d.Drivers {
		if x := &d.Drivers[i]; x.Fs > 0 {
			found[x.Name] = x.Fs
		}
	}
	return func(driver string) float64 { return found[driver] }
}

// ownPoint returns where the design itself has the crossing of ways i and i+1, by the targets of either; 0 if it has none.
func ownPoint(d *xover.Design, i int) float64 {
	for _, t := range d.Ways[i].Targets {
		if !t.HighPass {
			return t.Frequency
		}
	}
	for _, t := range d.Ways[i+1].Targets {
		if t.HighPass {
			return t.Frequency
		}
	}
	return 0
}

// span returns the crossover points that the drivers of ways i and i+1 leave open for a target of that order. All three rules
// are common practice, no source: a driver's high-pass lies above twice its resonance, more for low orders; its low-pass lies
// below where its diaphragm is a wavelength across; and the two are no farther apart than a wavelength.
//
// resonance returns that of a driver in Hz, 0 if it is not known.
func span(d *xover.Design, ways []xover.Way, i, order int, resonance func(driver string) float64) leeway {
	r := leeway{low: 80, high: 8000}
	atLeast := func(f float64, why string) {
		if f > r.low {
			r.low = f
			r.reasons = append(r.reasons, "above "+quantity.Round(f, quantity.Hertz, 3)+": "+why)
		}
	}
	atMost := func(f float64, why string) {
		if f < r.high {
			r.high = f
			r.reasons = append(r.reasons, "below "+quantity.Round(f, quantity.Hertz, 3)+": "+why)
		}
	}
	times := map[int]float64{1: 4, 2: 3, 3: 2.5}[order]
	if times == 0 {
		times = 2
	}
	sound := d.Air.SoundSpeed
	if sound == 0 {
		sound = 343
	}
	for _, name := range ways[i+1].DriverNames() {
		if fs := resonance(name); fs > 0 {
			atLeast(times*fs, fmt.Sprintf("%g times the resonance of %s, for order %d", times, name, order))
		} else {
			r.unknown = append(r.unknown, fmt.Sprintf("the resonance of %s is not known, so that nothing keeps the crossing above it", name))
		}
	}
	for _, name := range ways[i].DriverNames() {
		x := d.Driver(name)
		if x.Diameter > 0 {
			atMost(sound/x.Diameter, fmt.Sprintf("%s is a wavelength across there and beams above", name))
		}
		for _, other := range ways[i+1].DriverNames() {
			y := d.Driver(other)
			if apart := math.Hypot(x.At[0]-y.At[0], x.At[1]-y.At[1]); apart > 0 {
				atMost(sound/apart, fmt.Sprintf("%s and %s are a wavelength apart there", name, other))
			}
		}
	}
	return r
}

// plans returns all arrangements that the drivers' limits leave, and what those are, a sentence each.
func plans(d *xover.Design, loud []float64, resonance func(driver string) float64) (all []plan, limits []string) {
	n := len(d.Ways)
	count := pointsTwoWay
	if n > 2 {
		count = pointsThreeWay
	}
	say := func(limit string) {
		if !slices.Contains(limits, limit) {
			limits = append(limits, limit)
		}
	}
	for _, t := range targetShapes() {
		for _, o := range t.orders {
			spans := make([][]float64, n-1)
			for i := range spans {
				r := span(d, d.Ways, i, t.order, resonance)
				for _, why := range r.reasons {
					say(fmt.Sprintf("%s to %s crosses %s", d.Ways[i].Name, d.Ways[i+1].Name, why))
				}
				for _, what := range r.unknown {
					say(what)
				}
				if r.low > r.high {
					continue
				}
				for k := range count {
					// A cabinet's drivers rarely want a point at the very end of what they stand.
					spans[i] = append(spans[i], rounded(r.low*math.Pow(r.high/r.low, (float64(k)+0.5)/float64(count))))
				}
				if own := ownPoint(d, i); own >= r.low && own <= r.high {
					spans[i] = append(spans[i], own)
				}
				slices.Sort(spans[i])
				spans[i] = slices.Compact(spans[i])
			}
			for _, points := range products(spans) {
				if !slices.IsSorted(points) || len(points) > 1 && points[1] < 4*points[0] {
					continue // a mid of less than two octaves is hardly one
				}
				for _, zobel := range []bool{false, true} {
					for reversed := uint(0); reversed < 1<<n; reversed += 2 { // the lowest way as it is
						all = append(all, plan{
							points: points, target: xover.Target{Shape: t.shape, Order: t.order},
							low: o[0], high: o[1], reversed: reversed, zobel: zobel, quieter: loudOnes(loud),
						})
					}
				}
			}
		}
	}
	return all, limits
}

// rounded gives a frequency two figures.
func rounded(f float64) float64 {
	scale := math.Pow(10, math.Floor(math.Log10(f))-1)
	return math.Round(f/scale) * scale
}

// products returns every choice of one from each list.
func products(lists [][]float64) [][]float64 {
	all := [][]float64{nil}
	for _, list := range lists {
		var longer [][]float64
		for _, head := range all {
			for _, v := range list {
				longer = append(longer, append(slices.Clone(head), v))
			}
		}
		all = longer
	}
	return all
}

// leastPadDB is the difference in level from the quietest way that is worth a pad.
const leastPadDB = 1

func loudOnes(loud []float64) (ways []int) {
	for i, db := range loud {
		if db-slices.Min(loud) >= leastPadDB {
			ways = append(ways, i)
		}
	}
	return ways
}

// loudness returns the level of each way in dB SPL where it would play, without a network: the mean of its upper and middle part.
func loudness(sys *sim.System, d *xover.Design) []float64 {
	levels := make([]float64, len(d.Ways))
	for i := range levels {
		lo, hi := 300., 2000.
		switch {
		case i == len(levels)-1:
			lo, hi = 3000, 12000
		case i == 0 && len(levels) > 2:
			lo, hi = 100, 300
		case i > 0:
			lo, hi = 600, 2500
		}
		freqs := make([]float64, 13)
		for k := range freqs {
			freqs[k] = lo * math.Pow(hi/lo, float64(k)/12)
		}
		p := make([]complex128, len(freqs))
		sys.Pressures(p, i, freqs)
		for _, v := range p {
			levels[i] += 20 * math.Log10(cmplx.Abs(v)/20e-6) / float64(len(p))
		}
	}
	return levels
}

// build makes a design of a plan: d with other parts and networks. loud are the levels of the ways in dB.
func (p *plan) build(d *xover.Design, sys *sim.System, loud []float64) (*xover.Design, error) {
	load := func(way int, f float64) float64 {
		return cmplx.Abs(sys.LoadImpedance(way, d.Ways[way].Drivers, complex(0, 2*math.Pi*f)))
	}
	c := *d
	c.Parts, c.Ways, c.Controls = nil, nil, nil
	var namer ladder.Namer
	for i, old := range d.Ways {
		w := xover.Way{Name: old.Name, Driver: old.Driver, Drivers: old.Drivers, Reversed: p.reversed>>i&1 == 1}
		var n ladder.Network
		add := func(order int, high bool, f float64) error {
			t := p.target
			t.HighPass, t.Frequency = high, f
			w.Targets = append(w.Targets, t)
			a, err := align.New(align.Spec{Shape: align.Butterworth, Order: order})
			if err != nil {
				return err
			}
			size := ladder.LowPass
			if high {
				size = ladder.HighPass
			}
			rungs, err := size(a, f, load(i, f))
			n = append(n, rungs...)
			return err
		}
		if i > 0 {
			if err := add(p.high, true, p.points[i-1]); err != nil {
				return nil, err
			}
		}
		if i < len(d.Ways)-1 {
			if err := add(p.low, false, p.points[i]); err != nil {
				return nil, err
			}
			if le, re := coil(load(i, 10e3), load(i, p.points[i]/4)); p.zobel && le > 0 {
				zobel, err := ladder.VoiceCoil(re, le)
				if err != nil {
					return nil, err
				}
				n = append(n, zobel...)
			}
		}
		if slices.Contains(p.quieter, i) {
			pad, err := ladder.LPad(load(i, p.crossing(i)), loud[i]-slices.Min(loud))
			if err != nil {
				return nil, err
			}
			n = append(n, pad.Network()...)
		}
		c.Ways = append(c.Ways, w)
		way := &c.Ways[i]
		for _, e := range n {
			op := xover.Series
			if e.Shunt {
				op = xover.Shunt
			}
			way.Network = append(way.Network, xover.Step{Op: op, Expr: place(&c, &namer, e.Expr)})
		}
	}
	return &c, nil
}

// crossing is a frequency at which way i plays and crosses.
func (p *plan) crossing(i int) float64 { return p.points[max(i-1, 0)] }

// coil returns the inductance and resistance that an impedance rising from re to far at 10 kHz is like; 0 if it hardly rises.
func coil(far, re float64) (le, ohm float64) {
	if far < 1.3*re {
		return 0, re
	}
	return math.Sqrt(far*far-re*re) / (2 * math.Pi * 10e3), re
}

// place gives the parts of e names and puts them into the design.
func place(d *xover.Design, namer *ladder.Namer, e ladder.Expr) *xover.Expr {
	if e.Op != ladder.Leaf {
		x := &xover.Expr{Op: xover.InSeries}
		if e.Op == ladder.InParallel {
			x.Op = xover.InParallel
		}
		for _, arg := range e.Args {
			x.Args = append(x.Args, place(d, namer, arg))
		}
		return x
	}
	part := xover.Part{Name: namer.Next(e.Part.Kind), Value: e.Part.Value, Tol: -1}
	switch e.Part.Kind {
	case ladder.Inductor:
		part.Kind = xover.Inductor
		part.DCR = tune.WindingOhm(part.Value)
	case ladder.Capacitor:
		part.Kind = xover.Capacitor
	}
	d.Parts = append(d.Parts, part)
	return &xover.Expr{Part: part.Name}
}
