package audioio

import (
	"cmp"
	"math"
	"math/cmplx"
	"slices"

	"sixdown/sim"
)

// Fault is what may be wrong with a build.
type Fault string

// The faults that suspects are tried for.
const (
	WrongValue   Fault = "value"    // the part has another value, Ω, H or F
	WrongLoss    Fault = "loss"     // the coil or capacitor has another series resistance, Ω
	WrongTurn    Fault = "turn"     // the potentiometer stands elsewhere, as a fraction of its track
	WrongPolar   Fault = "polarity" // the way is connected the other way round
	SwappedSides Fault = "swapped"  // two ways' channels are exchanged
)

// A Suspect would explain a failed verification by itself.
type Suspect struct {
	Part      string // or the way, or two ways, "low and high"
	Fault     Fault
	Nominal   float64 // what the design says; 0 for polarity and swapped
	Estimate  float64 // what fits the measurement best
	Sigma     float64 // how many standard deviations Estimate lies from Nominal, of noise as large as what is left; 0 for polarity and swapped
	Explained float64 // share of the squared deviation that goes away, 0 … 1
	Passes    bool    // with it, the recording would pass
}

// A knob is one number of the network that may be other than the design says.
type knob struct {
	part    string
	fault   Fault
	nominal float64
	set     func(value float64) error
	most    float64 // upper bound of value
}

// knobs are the numbers of the network: the value and the loss of each part, and the value and turn of each
// potentiometer.
func (p *predictor) knobs(sys *sim.System) []knob {
	var all []knob
	for _, name := range sys.Parts() {
		switch of := sys.PartBranches(name); len(of) {
		case 1:
			b := of[0]
			x := &p.net.Branches[b]
			if x.Value == 0 {
				continue
			}
			all = append(all, knob{name, WrongValue, x.Value, func(v float64) error { return p.sweep.SetValue(b, v) }, math.Inf(1)})
			if x.Loss > 0 {
				all = append(all, knob{name, WrongLoss, x.Loss, func(v float64) error { return p.sweep.SetLoss(b, v) }, math.Inf(1)})
			}
		case 2: // a potentiometer: what lies before and behind its wiper
			first, second := of[0], of[1]
			before, behind := p.net.Branches[first].Value, p.net.Branches[second].Value
			if before == 0 || behind == 0 {
				continue
			}
			track := before + behind
			both := func(a, b float64) error {
				if err := p.sweep.SetValue(first, a); err != nil {
					return err
				}
				return p.sweep.SetValue(second, b)
			}
			all = append(all,
				knob{name, WrongValue, track, func(v float64) error { return both(v*before/track, v*behind/track) }, math.Inf(1)},
				knob{name, WrongTurn, before / track, func(v float64) error { return both(v*track, (1-v)*track) }, 1 - 1e-6})
		}
	}
	return all
}

// suspects tries what could be wrong, one thing at a time, and returns what explains the deviation, the best
// first. If nothing explains it wholly, the one that comes nearest is returned, with Passes false.
func (p *predictor) suspects(sys *sim.System, v *Verification) ([]Suspect, error) {
	before := p.misfitOf(v.Points, nil)
	if !(before > 0) {
		return nil, nil
	}
	found := p.misconnected(sys, v, before)
	for _, k := range p.knobs(sys) {
		s, err := p.fit(k, v, before)
		if err != nil {
			return nil, err
		}
		found = append(found, s)
	}
	slices.SortStableFunc(found, func(a, b Suspect) int {
		return cmp.Or(cmp.Compare(math.Round(1000*b.Explained), math.Round(1000*a.Explained)), cmp.Compare(a.strangeness(), b.strangeness()))
	})
	passing := slices.DeleteFunc(slices.Clone(found), func(s Suspect) bool { return !s.Passes })
	switch {
	case len(passing) > 0:
		return passing, nil
	case len(found) > 0 && found[0].Explained >= 0.5:
		return found[:1], nil
	}
	return nil, nil
}

// strangeness orders suspects that explain alike, as a resistor and the loss of a capacitor in series with it do: the
// smaller change is the likelier, and a wrong value likelier than a wrong loss.
func (s *Suspect) strangeness() float64 {
	if s.Nominal == 0 {
		return 0
	}
	x := math.Abs(math.Log(s.Estimate / s.Nominal))
	if s.Fault == WrongLoss {
		x += math.Ln2
	}
	return x
}

// misconnected tries each way turned round and each two ways exchanged.
func (p *predictor) misconnected(sys *sim.System, v *Verification, before float64) []Suspect {
	names := sys.Names()
	var found []Suspect
	try := func(part string, f Fault, gains func(w int) []complex128) {
		s := Suspect{Part: part, Fault: f, Explained: 1 - p.misfitOf(v.Points, gains)/before}
		s.Passes = p.passes(v, gains)
		if s.Explained > 0 {
			found = append(found, s)
		}
	}
	gain := make([][]complex128, len(names))
	for w := range gain {
		gain[w] = make([]complex128, p.n)
		p.sweep.Gain(gain[w], w)
	}
	for w, name := range names {
		turned := make([]complex128, p.n)
		for i, g := range gain[w] {
			turned[i] = -g
		}
		try(name, WrongPolar, func(x int) []complex128 {
			if x == w {
				return turned
			}
			return gain[x]
		})
		for o := w + 1; o < len(names); o++ {
			try(name+" and "+names[o], SwappedSides, func(x int) []complex128 {
				switch x {
				case w:
					return gain[o]
				case o:
					return gain[w]
				}
				return gain[x]
			})
		}
	}
	return found
}

// fit finds the value of a knob that explains the points best: Gauss-Newton on its logarithm, with a difference
// quotient for the one derivative. Steps are limited to a factor of two, and one that makes things worse is halved.
func (p *predictor) fit(k knob, v *Verification, before float64) (s Suspect, err error) {
	s = Suspect{Part: k.part, Fault: k.fault, Nominal: k.nominal, Estimate: k.nominal}
	defer func() {
		if e := p.look(k, k.nominal); err == nil {
			err = e
		}
	}()
	value := func(u float64) float64 { return min(k.nominal*math.Exp(u), k.most) }
	least, u, stiff := before, 0.0, 0.0
	for range 20 {
		var slope float64
		if slope, stiff, err = p.normal(k, value(u), v.Points); err != nil {
			return s, err
		}
		if !(stiff > 0) {
			return s, nil
		}
		step := min(max(slope/stiff, -math.Ln2), math.Ln2)
		if math.Abs(step) < 1e-10 {
			break
		}
		better := false
		for range 8 {
			if err = p.look(k, value(u+step)); err != nil {
				return s, err
			}
			if now := p.misfitOf(v.Points, nil); now < least {
				least, u, better = now, u+step, true
				break
			}
			step /= 2
		}
		if !better {
			break
		}
	}
	if err = p.look(k, value(u)); err != nil {
		return s, err
	}
	s.Estimate, s.Passes = value(u), p.passes(v, nil)
	s.Explained = 1 - least/before
	counted := 0
	for i := range v.Points {
		if v.Points[i].Counted {
			counted += 2 // a level and a phase
		}
	}
	noise := math.Sqrt(max(least, 1e-18) / float64(max(counted-1, 1)))
	s.Sigma = math.Abs(u) * math.Sqrt(stiff) / noise
	return s, nil
}

// look solves with another value of a knob.
func (p *predictor) look(k knob, value float64) error {
	if err := k.set(value); err != nil {
		return err
	}
	return p.sweep.Solve()
}

// normal are the two sides of the normal equation for the logarithm of a knob, at a value of it. The sweep is
// left a little beside that value.
func (p *predictor) normal(k knob, value float64, points []Point) (slope, stiff float64, err error) {
	const h = 1e-5 // of the logarithm: its square is below what the gains are good for
	ways := (len(points) + p.n - 1) / p.n
	at := func(u float64) ([][]complex128, error) {
		if err := p.look(k, min(value*math.Exp(u), k.most)); err != nil {
			return nil, err
		}
		g := make([][]complex128, ways)
		for w := range g {
			g[w] = make([]complex128, p.n)
			p.sweep.Gain(g[w], w)
		}
		return g, nil
	}
	up, err := at(h)
	if err != nil {
		return 0, 0, err
	}
	down, err := at(-h)
	if err != nil {
		return 0, 0, err
	}
	here, err := at(0)
	if err != nil {
		return 0, 0, err
	}
	for i := range points {
		w, f := i/p.n, i%p.n
		d, ok := distance(&points[i], here[w][f])
		if !ok {
			continue
		}
		j := logRatio(up[w][f], down[w][f]) / (2 * h)
		slope += real(j)*real(d) + imag(j)*imag(d)
		stiff += real(j)*real(j) + imag(j)*imag(j)
	}
	return slope, stiff, nil
}

// distance is ln(measured/gain) of a point that counts.
func distance(p *Point, gain complex128) (complex128, bool) {
	if !p.Counted {
		return 0, false
	}
	d := logRatio(p.Measured, gain)
	return d, !cmplx.IsNaN(d) && !cmplx.IsInf(d)
}

// misfitOf is the sum of the points' squared distances from gains, one slice a way; nil: the sweep's present ones.
func (p *predictor) misfitOf(points []Point, gains func(way int) []complex128) float64 {
	sum := 0.0
	p.each(points, gains, func(pt *Point, g complex128) {
		if d, ok := distance(pt, g); ok {
			sum += real(d)*real(d) + imag(d)*imag(d)
		}
	})
	return sum
}

// passes tells if the points would pass against gains.
func (p *predictor) passes(v *Verification, gains func(way int) []complex128) bool {
	ok := true
	p.each(v.Points, gains, func(pt *Point, g complex128) {
		if pt.Counted {
			x := Point{Fitted: g, Measured: pt.Measured}
			ok = ok && math.Abs(x.GainErrorDB()) <= v.LimitGainDB && math.Abs(x.PhaseErrorDeg()) <= v.LimitPhaseDeg
		}
	})
	return ok
}

// each goes through the points with the gain that goes with each.
func (p *predictor) each(points []Point, gains func(way int) []complex128, do func(*Point, complex128)) {
	var g []complex128
	own := make([]complex128, p.n)
	for i := range points {
		if i%p.n == 0 {
			if g = own; gains != nil {
				g = gains(i / p.n)
			} else {
				p.sweep.Gain(own, i/p.n)
			}
		}
		do(&points[i], g[i%p.n])
	}
}
