package tune

import (
	"cmp"
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"runtime"
	"slices"
	"sync"
	"sync/atomic"
)

// Search is how Run looks. The zero value is a good one.
type Search struct {
	Starts   int                      // places to begin at; 0: 360, a few tenths of a second of work
	Seed     uint64                   // of the places
	Workers  int                      // goroutines; 0: as many as there are cores. It changes no digit of the result
	Progress func(done, best float64) // if not nil, called now and then, from one goroutine at a time: share of the work, and objective so far
}

// Status says how a search ended.
type Status uint8

// How a search ends.
const (
	Converged   Status = iota // no small change of values is better
	Interrupted               // the context was cancelled: the best so far
	Limited                   // the number of steps ran out
)

// A Result is what Run found.
type Result struct {
	Values      []float64 // Ω, H or F, by variable
	Before      Score     // of the design's own values, even where they are beyond their bounds
	After       Score     // of Values
	Binding     []Binding // what keeps Values from going further
	Unmet       bool      // the limit on the impedance cannot be met; Values come as near as was found
	Starts      int
	Evaluations int // of the objective
	Status      Status
}

// A Binding is a bound or a limit that the optimum lies at.
type Binding struct {
	Part  string  // or control; "": the least impedance
	Upper bool    // the greatest value, not the least
	Limit float64 // Ω, H or F
	At    float64 // Hz, of the least impedance
}

// defaultStarts is how many places a search begins at: a few tenths of a second of work.
const defaultStarts = 360

// A round of a search.
type round struct {
	rough    bool // on the coarse grid
	share    int  // it takes the best in so many of the starts
	least    int  // but at least so many
	children int  // and so many new places for each of them
	steps    int  // of each descent
}

// The rounds: all places take a few steps on the coarse grid, the better ones more; the best have children, to look into what
// lies near them and between them; and the best of all go all the way on the grid of the objective.
var rounds = [...]round{
	{rough: true, share: 1, least: 1, steps: 10},
	{rough: true, share: 5, least: 12, steps: 15},
	{rough: true, share: 18, least: 12, children: 5, steps: 12},
	{rough: true, share: 18, least: 12, children: 5, steps: 12},
	{rough: true, share: 18, least: 12, children: 5, steps: 12},
	{share: 45, least: 4, steps: 400},
}

// kept returns how many places a search of so many starts keeps for the round.
func (r *round) kept(starts int) int { return min(starts, max(starts/r.share, r.least)) }

// Run looks for the values of the least objective within the bounds and the limit on the impedance. ctx stops it; the best
// so far is then the result, with Status Interrupted and no error. The same Search gives the same Result.
func (p *Problem) Run(ctx context.Context, s Search) (*Result, error) {
	if len(p.vars) == 0 {
		return nil, errNothingMoves
	}
	before, err := p.Score(p.DesignValues())
	if err != nil {
		return nil, err
	}
	if s.Starts <= 0 {
		s.Starts = defaultStarts
	}
	places := p.scatter(s.Starts, s.Seed)
	r := &runner{p: p, ctx: ctx, search: s}
	r.workers = min(cmp.Or(s.Workers, runtime.GOMAXPROCS(0)), len(places))
	found, err := r.all(places)
	if err != nil {
		return nil, err
	}
	res := &Result{Before: before, Starts: s.Starts, Status: r.status}
	e, err := p.newEvaluator()
	if err != nil {
		return nil, err
	}
	x := found[0].x
	if p.limit > 0 {
		if x, err = r.holding(e, found); err != nil {
			return nil, err
		}
	}
	res.Values = p.values(x)
	if res.After, err = e.score(x); err != nil {
		return nil, err
	}
	res.Evaluations = int(r.calls.Load()) + e.calls
	if math.IsNaN(res.After.Objective) || math.IsInf(res.After.Objective, 0) {
		return nil, errors.New("tune: the objective has no number; look for levels or a curve beyond all bounds")
	}
	res.Unmet = res.After.MinImpedance < p.limit*(1-1e-9)
	res.Binding = p.binding(res)
	return res, nil
}

// DesignValues returns what the design has, by variable, within its bounds or not.
func (p *Problem) DesignValues() []float64 {
	values := make([]float64, len(p.vars))
	for v := range values {
		if values[v] = p.vars[v].Value; p.vars[v].Control == "" {
			values[v] = p.leader(p.design.Part(p.vars[v].Part)).Value
		}
	}
	return values
}

// values returns what x are the logarithms of; at a bound, the bound to the last digit.
func (p *Problem) values(x []float64) []float64 {
	values := make([]float64, len(x))
	for v := range x {
		q := &p.vars[v]
		switch {
		case x[v] <= math.Log(q.Low):
			values[v] = q.Low
		case x[v] >= math.Log(q.High):
			values[v] = q.High
		default:
			values[v] = math.Exp(x[v])
		}
	}
	return values
}

// binding returns the bounds and limits that the result lies at.
func (p *Problem) binding(res *Result) []Binding {
	var bs []Binding
	for v, value := range res.Values {
		switch q := &p.vars[v]; {
		case value <= q.Low*(1+1e-9):
			bs = append(bs, Binding{Part: q.name(), Limit: q.Low})
		case value >= q.High*(1-1e-9):
			bs = append(bs, Binding{Part: q.name(), Upper: true, Limit: q.High})
		}
	}
	if p.limit > 0 && !res.Unmet && res.After.MinImpedance < p.limit*(1+1e-4) {
		bs = append(bs, Binding{Limit: p.limit, At: res.After.MinImpedanceAt})
	}
	return bs
}

// A place is where a descent has come to.
type place struct {
	x         []float64
	f, missed float64
	over      bool
	lost      bool // the circuit has no answer there
}

// worse orders places: first by the limit, then by the objective.
func (a *place) compare(b *place) int {
	const met = 1e-7 // of the limit's logarithm
	if a.lost != b.lost {
		if a.lost {
			return 1
		}
		return -1
	}
	if am, bm := a.missed > met, b.missed > met; am || bm {
		if c := cmp.Compare(max(a.missed, met), max(b.missed, met)); c != 0 {
			return c
		}
	}
	return cmp.Compare(a.f, b.f)
}

// A runner is one Run.
type runner struct {
	p       *Problem
	coils   windings
	ctx     context.Context
	search  Search
	workers int
	status  Status
	calls   atomic.Int64

	mu   sync.Mutex // for what follows
	done int
	best float64
}

// all goes through the rounds and returns the places reached, the best first.
func (r *runner) all(starts [][]float64) ([]place, error) {
	places := make([]place, len(starts))
	for i, x := range starts {
		places[i] = place{x: x, f: math.Inf(1)}
	}
	total := 0
	for _, round := range rounds {
		total += round.kept(len(starts)) * (1 + round.children)
	}
	r.best = math.Inf(1)
	random := rand.New(rand.NewPCG(r.search.Seed, 0x41c5)) // any second word
	rough := true
	for i, round := range rounds {
		if i > 0 {
			places = distinct(places)
		}
		places = places[:min(len(places), round.kept(len(starts)))]
		if rough && !round.rough {
			for k := range places {
				places[k].over = false
			}
		}
		rough = round.rough
		places = append(places, r.p.children(places, round.children, random)...)
		if err := r.round(places, &round, total); err != nil {
			return nil, err
		}
		slices.SortStableFunc(places, func(a, b place) int { return a.compare(&b) })
		if r.ctx.Err() != nil {
			r.status = Interrupted
			break
		}
		if places[0].f < exact*r.p.scale && places[0].missed == 0 {
			break // nothing can be better
		}
	}
	if places[0].lost || math.IsInf(places[0].f, 1) {
		if err := r.ctx.Err(); err != nil {
			return nil, err
		}
		return nil, errors.New("tune: the network has no answer for any values that were tried; check that it has no coil and capacitor without loss side by side")
	}
	if r.status == Converged && !places[0].over {
		r.status = Limited
	}
	return places, nil
}

// alike is how near in ln all values of two places are that count as one.
const alike = 1e-3

// distinct drops places that another one has come to as well; they are sorted, the best first. Only places in neighbouring slices of
// the first value are compared, since there may be tens of thousands.
func distinct(places []place) []place {
	var kept []place
	slices := map[int][]int{} // of the first value, to indices of kept
	for _, a := range places {
		slice := 0
		if len(a.x) > 0 {
			slice = int(math.Floor(a.x[0] / alike))
		}
		near := false
		for s := slice - 1; s <= slice+1 && !near; s++ {
			for _, k := range slices[s] {
				far := 0.0
				for v := range a.x {
					far = max(far, math.Abs(a.x[v]-kept[k].x[v]))
				}
				if near = far < alike; near {
					break
				}
			}
		}
		if !near {
			slices[slice] = append(slices[slice], len(kept))
			kept = append(kept, a)
		}
	}
	return kept
}

// round lets each place take steps further down. The result does not depend on how the places are shared out.
func (r *runner) round(places []place, round *round, total int) error {
	p := r.p
	if round.rough {
		p = p.rough
	}
	var next atomic.Int64
	errs := make([]error, r.workers)
	var wg sync.WaitGroup
	for w := range r.workers {
		wg.Go(func() {
			e, err := p.newEvaluatorWith(r.coils)
			if err != nil {
				errs[w] = err
				return
			}
			d := p.newDescent(e)
			for i := int(next.Add(1)) - 1; i < len(places) && r.ctx.Err() == nil; i = int(next.Add(1)) - 1 {
				if at := &places[i]; !at.over && !at.lost {
					*at = r.descend(d, at.x, round.steps)
				}
				r.tell(&places[i], total)
			}
			r.calls.Add(int64(e.calls))
		})
	}
	wg.Wait()
	return errors.Join(errs...)
}

const manyParts = 40

// descend goes down from x by at most so many steps, unless the context is cancelled on the way: then as far as it has come.
// Where the place decides which phases count, they are chosen anew at the end, for places to be compared by the same measure, and the descent
// goes on if it is over and what it gained is not lost by the new choice.
func (r *runner) descend(d *descent, x []float64, steps int) place {
	const choices = 8
	best := place{x: x, lost: true}
	for n, over := 0, true; d.begin(x) == nil; n++ {
		here := d.place()
		here.over = over && n > 0
		if !best.lost && here.compare(&best) >= 0 {
			best.over = here.over
			break
		}
		best = here
		if !over || n == choices {
			break
		}
		// The context is asked at every step of a large network, whose steps take long.
		chunk := 5
		if len(x) > manyParts {
			chunk = 1
		}
		for done := 0; done < steps && !d.over && r.ctx.Err() == nil; done += chunk {
			if d.run(min(chunk, steps-done)) != nil {
				break
			}
		}
		if d.e.p.phase == 0 || d.e.p.meets != nil {
			return d.place()
		}
		x, over = slices.Clone(d.x), d.over
	}
	return best
}

// tell reports progress.
func (r *runner) tell(at *place, total int) {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.done++
	if !at.lost && at.missed == 0 {
		r.best = min(r.best, at.f)
	}
	if r.search.Progress != nil {
		r.search.Progress(float64(r.done)/float64(total), r.best)
	}
}

// mostHeld is how many places are made to hold the limit between the grid's points, for the best of them to be found.
const mostHeld = 6

// holding returns the best place that holds the limit everywhere, beginning at those found, the best first; if none does, the design's
// own values if they do, else the place that comes nearest.
func (r *runner) holding(e *evaluator, found []place) ([]float64, error) {
	p := r.p
	if err := e.measureAt(found[0].x); err != nil {
		return nil, err
	}
	var best []float64
	f := math.Inf(1)
	nearest, most := found[0].x, 0.0
	for i, at := range distinct(found) {
		if i == mostHeld || at.lost || at.f >= f {
			break // the limit makes no place better
		}
		x, ohm, err := p.keepLimit(e, at.x)
		if err != nil {
			return nil, err
		}
		if ohm > most {
			nearest, most = x, ohm
		}
		if ohm < p.limit*(1-1e-9) {
			continue
		}
		g, err := e.objective(x)
		if err != nil {
			return nil, err
		}
		if g < f {
			best, f = x, g
		}
	}
	if best != nil {
		return best, nil
	}
	own, err := p.logs(p.Start())
	if err != nil {
		return nil, err
	}
	ohm, _, err := p.leastImpedance(own, nil)
	if err != nil {
		return nil, err
	}
	if ohm > most {
		return own, nil
	}
	return nearest, nil
}

// keepLimit goes down from x once more until the limit holds between the points of the grid too: where |Zin| falls short of it
// there, that frequency is watched from then on, and what little remains is made up for by a higher limit. It returns the place and
// the least |Zin| there.
func (p *Problem) keepLimit(e *evaluator, x []float64) ([]float64, float64, error) {
	d := p.newDescent(e)
	raise := 1.0
	best, most := x, 0.0
	for range 40 {
		d.limit = p.limit * raise
		if err := d.begin(x); err != nil {
			return nil, 0, err
		}
		if err := d.run(60); err != nil {
			return nil, 0, err
		}
		x = slices.Clone(d.x)
		ohm, at, err := p.leastImpedance(x, nil)
		if err != nil {
			return nil, 0, err
		}
		if ohm > most {
			best, most = x, ohm
		}
		switch short := p.limit / ohm; {
		case short <= 1+1e-9 && (raise == 1 || short > 1-1e-6):
			return x, ohm, nil
		case short > 1.001 && !e.watches(at):
			if err := e.watch(at); err != nil {
				return nil, 0, err
			}
		case short > 1.05:
			return best, most, nil // it is watched and cannot be helped
		default:
			raise *= short * (1 + 2e-10)
		}
	}
	return best, most, nil
}
