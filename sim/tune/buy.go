package tune

import (
	"context"
	"errors"
	"fmt"
	"math"
	"runtime"
	"slices"
	"strings"

	"sixdown/xover/preferred"
	"sixdown/xover/quantity"
)

// noneFor says that nothing can be bought for a variable.
func noneFor(v *Variable) error {
	unit := v.Kind.Unit()
	return fmt.Errorf("tune: the list has no %s between %s and %s for %s; add some, hold the part, or widen its range",
		v.Kind, quantity.Format(v.Low, unit), quantity.Format(v.High, unit), v.Part)
}

// tooFew says what the shelf has too little of for any set, as the nearest values would need it.
func (p *Problem) tooFew(m *market, choice []int) error {
	for i, it := range m.items {
		need := 0
		var parts []string
		for v, c := range choice {
			for _, k := range m.candidates[v][c].items {
				if k == i {
					need += m.parts[v]
					parts = append(append(parts, p.vars[v].Part), p.vars[v].Followers...)
				}
			}
		}
		if it.Count >= 0 && need > it.Count {
			unit := p.vars[slices.IndexFunc(p.vars, func(q Variable) bool { return q.Part == parts[0] })].Kind.Unit()
			return fmt.Errorf("tune: the list has too few parts for any set that was tried: of %s there are %d, and %s need %d; add some, or lower what is asked",
				quantity.Format(it.Value, unit), it.Count, strings.Join(parts, ", "), need)
		}
	}
	return errors.New("tune: no set was found before the search was interrupted; let it go on for longer")
}

// BuySettings are how Buy looks. The zero value is a good one.
type BuySettings struct {
	Pairs    bool                     // two items in series or in parallel may make one part
	Nodes    int                      // places of the search tree that are re-tuned at most; 0: 800
	Progress func(done, best float64) // if not nil, called now and then: share of the work at most, and objective so far
}

// Bought is a set of parts that can be bought.
type Bought struct {
	Values  []float64 // Ω, H or F, by variable
	Ohms    []float64 // Ω, by variable: the resistance that a coil then has; 0: as the design states it
	Score   Score
	Rounded Score // of the nearest values to the optimum, for comparison
	Choices []Choice
	Price   float64 // of all, as far as prices are stated
	Unmet   bool    // no set that was tried holds the limit on the impedance; this is the one that comes nearest
	Nodes   int     // places of the search tree
	Proved  bool    // the tree was searched to its end: no set is better, as far as re-tuning finds what is best of the rest
	Status  Status
}

// A Choice is what one variable is bought as.
type Choice struct {
	Part  string
	Items []preferred.Item // one, or two as a pair
	// Parallel: the two are side by side; else one after the other.
	Parallel bool
	Parts    int // how many parts of the design it stands for
}

// Tol returns the tolerance of what is bought, as a fraction: the wider of a pair's, which is what the two have at worst; negative
// where it is not stated.
func (c *Choice) Tol() float64 {
	tol := -1.0
	for _, it := range c.Items {
		if it.Tol < 0 {
			return -1
		}
		tol = max(tol, it.Tol)
	}
	return tol
}

// A buyer looks for the best set.
type buyer struct {
	p      *Problem
	market *market
	e      *evaluator
	d      *descent
	limit  float64 // ln Ω; -Inf: none

	bend      []float64 // by variable: how much the objective bends with it at the optimum
	best      []int     // candidate by variable; nil: none yet
	nearest   []int     // of those that the shelf has enough for, the one that comes nearest to the limit; nil: none yet
	highest   float64   // ln of the least |Zin| of nearest
	bestF     float64
	bestPrice float64
	x         []float64 // for value
	tell      func(done, best float64)
	nodes     int
	most      int
	ctx       context.Context
}

// Buy looks for the set of parts from source with the least objective, beginning at values near the optimum. Coils have the
// resistance that the source states or, where it states none, that of the design's coil if it were wound of the same wire.
//
// The rounded optimum comes first; then the lattice points that a quadratic model of the objective about the optimum likes
// best; then a branch and bound, in which one part after another is fixed and the others tuned anew to bound what is
// possible from there; and at each better set its neighbours, by one and by two parts. ctx stops it with the best so far.
func (p *Problem) Buy(ctx context.Context, from []float64, source Source, set BuySettings) (*Bought, error) {
	x, err := p.logs(from)
	if err != nil {
		return nil, err
	}
	coils := p.windings(source)
	market, err := p.market(source, coils, set.Pairs)
	if err != nil {
		return nil, err
	}
	b := &buyer{p: p, ctx: ctx, market: market, bestF: math.Inf(1), x: make([]float64, len(x)), most: set.Nodes, tell: set.Progress, limit: math.Inf(-1), highest: math.Inf(-1)}
	if b.most <= 0 {
		b.most = 800
	}
	if p.limit > 0 {
		b.limit = math.Log(p.limit)
	}
	for v, all := range b.market.candidates {
		if len(all) == 0 {
			return nil, noneFor(&p.vars[v])
		}
	}
	if b.e, err = p.newEvaluatorWith(coils); err != nil {
		return nil, err
	}
	if err := b.e.measureAt(x); err != nil {
		return nil, err
	}
	b.d = p.newDescent(b.e)
	rounded := make([]int, len(x))
	for v := range x {
		rounded[v] = b.market.nearest(v, x[v])
	}
	res := &Bought{}
	if res.Rounded, err = b.score(rounded); err != nil {
		return nil, err
	}
	if err := b.search(x, rounded); err != nil {
		return nil, err
	}
	if b.best == nil {
		if b.nearest == nil {
			return nil, p.tooFew(b.market, rounded)
		}
		b.best, res.Unmet = b.nearest, true
	}
	if res.Score, err = b.score(b.best); err != nil {
		return nil, err
	}
	res.Price, res.Nodes, res.Proved = b.market.price(b.best), b.nodes, b.nodes < b.most && ctx.Err() == nil && !res.Unmet
	if ctx.Err() != nil {
		res.Status = Interrupted
	}
	for v, c := range b.best {
		q := &b.market.candidates[v][c]
		res.Values, res.Ohms = append(res.Values, q.value), append(res.Ohms, q.ohm)
		choice := Choice{Part: p.vars[v].Part, Parts: b.market.parts[v]}
		for _, i := range q.items {
			if i >= 0 {
				choice.Items = append(choice.Items, b.market.items[i])
			}
		}
		choice.Parallel = q.pair != nil && q.pair.Parallel
		res.Choices = append(res.Choices, choice)
	}
	return res, nil
}

// place returns where a choice is, each coil with the resistance of what was chosen.
func (b *buyer) place(choice []int) ([]float64, windings) {
	x, ohms := make([]float64, len(choice)), make([]float64, len(choice))
	for v, c := range choice {
		x[v], ohms[v] = b.market.candidates[v][c].x, b.market.candidates[v][c].ohm
	}
	return x, b.p.fixedOhms(x, ohms)
}

// score returns the score of a choice.
func (b *buyer) score(choice []int) (Score, error) {
	x, coils := b.place(choice)
	e, err := b.p.newEvaluatorWith(coils)
	if err != nil {
		return Score{}, err
	}
	return e.score(x)
}

// value returns the objective of a choice; infinite if the shelf has not enough of something, the network has no answer, or the
// limit on the impedance is not held, which is looked at only below a worth.
func (b *buyer) value(choice []int, worth float64) (float64, error) {
	if !b.market.enough(choice) {
		return math.Inf(1), nil
	}
	for v, c := range choice {
		b.x[v] = b.market.candidates[v][c].x
	}
	if err := b.e.set(b.x); err != nil {
		return 0, err
	}
	if err := b.exactOhms(choice); err != nil {
		return 0, err
	}
	f, err := b.e.objectiveHere()
	if err != nil {
		return math.Inf(1), nil // a resonance without loss
	}
	if b.p.limit == 0 || f > worth {
		return f, nil
	}
	lowest, err := b.e.lowest()
	if err != nil {
		return math.Inf(1), err
	}
	b.approach(choice, lowest)
	if lowest < b.limit {
		return math.Inf(1), nil
	}
	return f, nil
}

// approach keeps the choice that comes nearest to the limit on the impedance, for ln of its least |Zin|.
func (b *buyer) approach(choice []int, lowest float64) {
	if lowest > b.highest && b.best == nil {
		b.nearest, b.highest = slices.Clone(choice), lowest
	}
}

// try keeps a choice if it is the best so far; it reports whether it is.
func (b *buyer) try(choice []int) (bool, error) {
	f, err := b.value(choice, b.bestF)
	if err != nil {
		return false, err
	}
	return b.keep(choice, f)
}

// keep keeps a choice of objective f if it is the best so far; of equally good ones, the cheapest.
func (b *buyer) keep(choice []int, f float64) (bool, error) {
	price := b.market.price(choice)
	if math.IsInf(f, 1) || f > b.bestF || f == b.bestF && price >= b.bestPrice {
		return false, nil
	}
	if b.p.limit > 0 {
		// What lies between the grid's points is looked at only for what would be chosen.
		x, coils := b.place(choice)
		ohm, _, err := b.p.leastImpedance(x, coils)
		if err != nil {
			return false, err
		}
		if ohm < b.p.limit*(1-1e-9) {
			b.approach(choice, math.Log(ohm))
			return false, nil
		}
	}
	b.best, b.bestF, b.bestPrice = slices.Clone(choice), f, price
	return true, nil
}

// exactOhms gives coils the resistance of what was chosen, where it is not what the source has on the whole for such a coil.
func (b *buyer) exactOhms(choice []int) error {
	for v, c := range choice {
		q := &b.market.candidates[v][c]
		if !(q.ohm > 0) {
			continue
		}
		if err := b.e.setOhm(v, q.ohm); err != nil {
			return err
		}
	}
	return nil
}

// search goes through all the stages.
func (b *buyer) search(x []float64, rounded []int) error {
	if _, err := b.try(rounded); err != nil || b.ctx.Err() != nil {
		return err
	}
	tops, err := b.tops(x)
	if err != nil {
		return err
	}
	var first []float64
	for i, top := range tops {
		if err := b.d.begin(top); err != nil {
			return err
		}
		if i == 0 {
			first = top
			for v := range top {
				b.bend = append(b.bend, b.d.hess[v*len(top)+v])
			}
		}
		for _, choice := range b.likely(top, b.d.hess) {
			if _, err := b.try(choice); err != nil {
				return err
			}
		}
		if err := b.climb(b.best); err != nil {
			return err
		}
	}
	if b.ctx.Err() != nil {
		return nil
	}
	for _, choice := range b.scattered() {
		if err := b.climb(choice); err != nil {
			return err
		}
	}
	choice := make([]int, len(x))
	for v := range choice {
		choice[v] = -1
	}
	return b.branch(choice, first)
}

// mostTops is how many optima with the coils' resistances as they would be are looked about in.
const mostTops = 3

// tops returns the best optima with the coils' resistances as they would be, the best first: a search of its own, since it may
// well be that those of ideal coils are none.
func (b *buyer) tops(x []float64) ([][]float64, error) {
	starts := append([][]float64{clampTo(b.p, x)}, b.p.scatter(defaultStarts/2, 0)...)
	r := &runner{p: b.p, coils: b.e.coils, ctx: b.ctx, workers: runtime.GOMAXPROCS(0)}
	found, err := r.all(starts)
	if b.ctx.Err() != nil {
		return nil, nil // interrupted before any was found
	}
	if err != nil {
		return nil, err
	}
	var tops [][]float64
	for _, at := range distinct(found) {
		if len(tops) < mostTops && !at.lost {
			tops = append(tops, at.x)
		}
	}
	return tops, nil
}

// clampTo returns x within the bounds.
func clampTo(p *Problem, x []float64) []float64 {
	y := make([]float64, len(x))
	for v := range x {
		y[v] = min(max(x[v], math.Log(p.vars[v].Low)), math.Log(p.vars[v].High))
	}
	return y
}
