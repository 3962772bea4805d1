package scout

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"math/cmplx"
	"slices"

	"sixdown/sim"
	"sixdown/sim/tune"
	"sixdown/xover"
)

// Settings are how Scout looks. The zero value is a good one.
type Settings struct {
	Starts   int // of each arrangement's tuning; 0: 24
	Seed     uint64
	Workers  int         // goroutines; 0: as many as there are cores. It changes no digit of the result
	Prices   tune.Source // a list with prices; nil: costs are not looked at
	Progress func(done float64)
}

// A Find is an arrangement, tuned.
type Find struct {
	Name         string        // what it is, in words
	Design       *xover.Design // its values tuned
	Points       []float64     // Hz
	ErrorDB      float64       // square root of the tuner's objective
	Score        tune.Score
	Parts        int
	Cost         float64 // of the nearest parts that Prices has; negative: not known
	Unpriced     string  // a part of which Prices has none near enough, or not enough, for which Cost is not known
	Reversed     []bool
	Frontier     bool    // no other is at least as good in error, parts, cost and least impedance, and better in one of them
	ExcursionMM  float64 // greatest peak excursion of a high-passed driver at the rated power; 0: not known
	ExcursionFor string  // whose
}

// A Report is what Scout found.
type Report struct {
	Finds   []Find      // all that were tuned and stay within the drivers' limits, by error
	Limits  []string    // what bounds the crossover points, a sentence each
	Points  [][]float64 // Hz, the crossover points of all that were tried, rising
	Tried   int         // looked at with a short search, if there were too many to tune
	Tuned   int
	Dropped int // not to be sized, or tuned and beyond a driver's excursion or the limit on the impedance
	Partial bool
}

// LeastLoad is the least impedance in Ω that is asked for where the design states none: 80 % of 4 Ω, by IEC 60268-5, 16.1.
const LeastLoad = 3.2

// Scout looks at the arrangements for the drivers of d, whose ways must be in order from the lowest. open opens driver tables. ctx
// stops it early: the report is then of what was tuned, Partial.
func Scout(ctx context.Context, d *xover.Design, open func(name string) (io.ReadCloser, error), s Settings) (*Report, error) {
	if len(d.Ways) < 2 || len(d.Ways) > 3 {
		return nil, fmt.Errorf("scout: the design has %d ways; give one with two or three, the lowest first", len(d.Ways))
	}
	base := *d
	if base.Tune.MinImpedance == 0 {
		base.Tune.MinImpedance = LeastLoad
	}
	sys, err := sim.New(&base, open)
	if err != nil {
		return nil, err
	}
	if !sys.Sums() {
		return nil, errors.New("scout: not every driver has an acoustic output; give each a response or a sensitivity")
	}
	sc := &scouting{base: &base, sys: sys, loud: loudness(sys, &base), open: open, set: &s, progress: func(float64) {}}
	if s.Progress != nil {
		sc.progress = s.Progress
	}
	all, limits := plans(&base, sc.loud, resonances(sys, &base))
	r := &Report{Limits: limits}
	if len(all) == 0 {
		return r, nil
	}
	for i := range all {
		if !slices.ContainsFunc(r.Points, func(p []float64) bool { return slices.Equal(p, all[i].points) }) {
			r.Points = append(r.Points, all[i].points)
		}
	}
	slices.SortFunc(r.Points, slices.Compare)
	share := 0.0 // of the work that choosing is
	if len(all) > mostTuned {
		share, r.Tried = choosing, len(all)
		if all, err = sc.promising(ctx, all); err != nil {
			return nil, err
		}
	}
	finds := make([]*Find, len(all))
	errs := make([]error, len(all))
	sc.each(ctx, len(all), func(i int) {
		finds[i], errs[i] = all[i].tuned(ctx, &base, sys, sc.loud, open, &s)
	}, func(done float64) { sc.progress(share + (1-share)*done) })
	r.Partial = ctx.Err() != nil
	for i, f := range finds {
		switch {
		case errors.Is(errs[i], errUnbuildable):
			r.Dropped++
			continue
		case errs[i] != nil && !errors.Is(errs[i], context.Canceled):
			return nil, errs[i]
		case f == nil:
			continue
		}
		r.Tuned++
		if !stands(&base, f) {
			r.Dropped++
			continue
		}
		r.Finds = append(r.Finds, *f)
	}
	if r.Partial && r.Tuned == 0 {
		return nil, ctx.Err()
	}
	slices.SortStableFunc(r.Finds, func(a, b Find) int { return cmp.Compare(a.ErrorDB, b.ErrorDB) })
	mark(r.Finds)
	return r, nil
}

var errUnbuildable = errors.New("scout: the arrangement cannot be sized")

// tuned tunes the plan.
func (p *plan) tuned(ctx context.Context, base *xover.Design, sys *sim.System, loud []float64, open func(string) (io.ReadCloser, error), s *Settings) (*Find, error) {
	d, err := p.build(base, sys, loud)
	if err != nil {
		return nil, errUnbuildable // such as by a pad of 300 dB: others may do
	}
	search := tune.Search{Starts: cmp.Or(s.Starts, 24), Seed: s.Seed, Workers: 1}
	if _, err := settle(ctx, d, open, search); err != nil {
		return nil, fmt.Errorf("scout: %s: %w", p, err)
	}
	// The coils are other ones now: with the resistances of these, once more from here.
	for i := range d.Parts {
		if part := &d.Parts[i]; part.Kind == xover.Inductor {
			part.DCR = fourFigures(tune.WindingOhm(part.Value))
		}
	}
	search.Starts = 1
	score, err := settle(ctx, d, open, search)
	if err != nil {
		return nil, fmt.Errorf("scout: %s: %w", p, err)
	}
	f := &Find{
		Name: p.String(), Design: d, Points: p.points, Score: score, Parts: len(d.Parts),
		ErrorDB: math.Sqrt(score.Objective),
	}
	f.Cost, f.Unpriced = cost(d, s.Prices)
	for _, w := range d.Ways {
		f.Reversed = append(f.Reversed, w.Reversed)
	}
	// What a driver moves does not depend on the cabinet's edges, which its sound has in it.
	wall := *d
	wall.Baffle = nil
	if final, err := sim.New(&wall, open); err != nil {
		return nil, err
	} else if err := f.excursion(final); err != nil {
		return nil, err
	}
	return f, nil
}

// settle tunes d in place, to four figures, and returns its score then.
func settle(ctx context.Context, d *xover.Design, open func(string) (io.ReadCloser, error), search tune.Search) (tune.Score, error) {
	sys, err := sim.New(d, open)
	if err != nil {
		return tune.Score{}, err
	}
	problem, err := tune.New(d, sys, open)
	if err != nil {
		return tune.Score{}, err
	}
	res, err := problem.Run(ctx, search)
	if err != nil {
		return tune.Score{}, err
	}
	values := make([]float64, len(res.Values))
	for v, q := range problem.Variables() {
		values[v] = fourFigures(res.Values[v])
		d.Part(q.Part).Value = values[v]
	}
	return problem.Score(values)
}

// fourFigures rounds a value to four figures.
func fourFigures(v float64) float64 {
	if !(v > 0) {
		return v
	}
	scale := math.Pow(10, 3-math.Floor(math.Log10(v)))
	return math.Round(v*scale) / scale
}

// stands reports whether a find holds the limit on the impedance and the drivers' excursion.
func stands(d *xover.Design, f *Find) bool {
	if f.Score.MinImpedance < d.Tune.MinImpedance*0.999 { // values have four figures
		return false
	}
	if f.ExcursionFor == "" {
		return true
	}
	return f.ExcursionMM/1000 <= d.Driver(f.ExcursionFor).Xmax
}

// excursion finds how far the drivers with a high-pass move at the rated power, where the design states it and they state xmax and
// an area: a diaphragm of area S that moves by x peak gives the pressure ρ·S·ω²·x/(2√2·π·r) rms at r in front of a wall (the
// simple source on a plane; e.g. L. L. Beranek, "Acoustics", 1954).
func (f *Find) excursion(sys *sim.System) error {
	d := f.Design
	if d.Drive.RatedPower == 0 {
		return nil
	}
	drive := math.Sqrt(d.Drive.RatedPower*cmp.Or(d.Drive.RatedLoad, 8)) / sys.Level()
	freqs := make([]float64, 73)
	for k := range freqs {
		freqs[k] = 100 * math.Pow(100, float64(k)/72)
	}
	r, err := sys.Predict(freqs)
	if err != nil {
		return err
	}
	distance := cmp.Or(d.Listen.Distance, 1)
	density := cmp.Or(d.Air.Density, 1.2)
	worst := 0.0
	for i, w := range d.Ways[1:] {
		names := w.DriverNames()
		for _, name := range names {
			x := d.Driver(name)
			area := cmp.Or(x.Sd, math.Pi*x.Diameter*x.Diameter/4)
			if x.Xmax == 0 || area == 0 {
				continue
			}
			for k, freq := range freqs {
				omega := 2 * math.Pi * freq
				// Of several drivers each gives its part.
				moves := cmplx.Abs(r.Ways[i+1].P[k]) / float64(len(names)) * drive * 2 * math.Sqrt2 * math.Pi * distance / (density * area * omega * omega)
				if moves/x.Xmax > worst {
					worst = moves / x.Xmax
					f.ExcursionMM, f.ExcursionFor = 1000*moves, x.Name
				}
			}
		}
	}
	return nil
}

// load is the least impedance, rounded down to a quarter of an ohm: less makes no difference to an amplifier.
func (f *Find) load() float64 { return math.Floor(4*f.Score.MinImpedance+1e-9) / 4 }

// price is the cost, infinite if it is not known: what cannot be bought is no bargain.
func (f *Find) price() float64 {
	if f.Cost < 0 {
		return math.Inf(1)
	}
	return f.Cost
}

// mark marks the frontier.
func mark(finds []Find) {
	for i := range finds {
		a := &finds[i]
		a.Frontier = true
		for j := range finds {
			b := &finds[j]
			if i == j || b.ErrorDB > a.ErrorDB || b.Parts > a.Parts || b.price() > a.price() || b.load() < a.load() {
				continue
			}
			if b.ErrorDB < a.ErrorDB || b.Parts < a.Parts || b.price() < a.price() || b.load() > a.load() || j < i {
				a.Frontier = false
				break
			}
		}
	}
}
