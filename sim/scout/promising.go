package scout

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"runtime"
	"slices"
	"sync"
	"sync/atomic"

	"sixdown/sim"
	"sixdown/sim/tune"
	"sixdown/xover"
)

// A three-way has more arrangements than can be tuned in a minute. Then polarities are compared as sized, the better ones tuned
// from one place, and of these the best tuned as if they were all there were.
const (
	mostTuned  = 150 // arrangements, up to which all are tuned
	polarities = 2   // that are kept of each arrangement
	kept       = 36  // arrangements that are tuned in full, with compensated voice coils and without
	keptOfEach = 3   // at least so many of them of each pair of orders, which have different numbers of parts
	choosing   = 0.3 // share of the work that this is
)

// A scouting is one call of Scout.
type scouting struct {
	base     *xover.Design
	sys      *sim.System
	loud     []float64
	open     func(name string) (io.ReadCloser, error)
	set      *Settings
	progress func(done float64)
}

// each does the work for 0 … n-1 on all cores, unless ctx is done, and tells what share is done.
func (s *scouting) each(ctx context.Context, n int, work func(i int), tell func(done float64)) {
	var next, done atomic.Int64
	var telling sync.Mutex
	var wg sync.WaitGroup
	for range min(cmp.Or(s.set.Workers, runtime.GOMAXPROCS(0)), n) {
		wg.Go(func() {
			for i := int(next.Add(1)) - 1; i < n && ctx.Err() == nil; i = int(next.Add(1)) - 1 {
				work(i)
				telling.Lock()
				tell(float64(done.Add(1)) / float64(n))
				telling.Unlock()
			}
		})
	}
	wg.Wait()
}

// promising returns those of all that are worth tuning in full. The result does not depend on how the work is shared out.
func (s *scouting) promising(ctx context.Context, all []plan) ([]plan, error) {
	// Those that differ in polarity alone follow one another.
	var groups [][]plan
	for _, p := range all {
		if p.zobel {
			continue // it comes back at the end
		}
		if n := len(groups); n > 0 && groups[n-1][0].but(p) {
			groups[n-1] = append(groups[n-1], p)
			continue
		}
		groups = append(groups, []plan{p})
	}
	type ranked struct {
		plan plan
		f    float64
	}
	found := make([][]ranked, len(groups))
	errs := make([]error, len(groups))
	s.each(ctx, len(groups), func(i int) {
		for _, p := range groups[i] {
			f, err := s.objective(ctx, &p, 0)
			if errs[i] = err; err != nil {
				return
			}
			found[i] = append(found[i], ranked{p, f})
		}
		slices.SortStableFunc(found[i], func(a, b ranked) int { return cmp.Compare(a.f, b.f) })
		found[i] = found[i][:min(polarities, len(found[i]))]
		for k := range found[i] {
			if found[i][k].f, errs[i] = s.objective(ctx, &found[i][k].plan, 1); errs[i] != nil {
				return
			}
		}
	}, func(done float64) { s.progress(choosing * done) })
	var tuned []ranked
	for i := range found {
		if errs[i] != nil && !errors.Is(errs[i], context.Canceled) {
			return nil, errs[i]
		}
		tuned = append(tuned, found[i]...)
	}
	slices.SortStableFunc(tuned, func(a, b ranked) int { return cmp.Compare(a.f, b.f) })
	var some []plan
	ofOrders := map[[2]int]int{}
	for _, first := range []bool{true, false} { // the best of each pair of orders, then the best of all
		for _, t := range tuned {
			o := [2]int{t.plan.low, t.plan.high}
			if slices.ContainsFunc(some, t.plan.same) || first && ofOrders[o] >= keptOfEach || len(some) >= kept {
				continue
			}
			ofOrders[o]++
			some = append(some, t.plan)
		}
	}
	for _, p := range slices.Clone(some) {
		p.zobel = true
		some = append(some, p)
	}
	return some, nil
}

// but reports whether p and q differ in nothing but polarity.
func (p *plan) but(q plan) bool {
	q.reversed = p.reversed
	return p.same(q)
}

func (p *plan) same(q plan) bool {
	return slices.Equal(p.points, q.points) && p.target == q.target && p.low == q.low && p.high == q.high && p.reversed == q.reversed && p.zobel == q.zobel
}

// objective returns that of the plan as sized, or tuned from so many places.
func (s *scouting) objective(ctx context.Context, p *plan, starts int) (float64, error) {
	d, err := p.build(s.base, s.sys, s.loud)
	if err != nil {
		return math.Inf(1), nil // it cannot be sized
	}
	if starts > 0 {
		score, err := settle(ctx, d, s.open, tune.Search{Starts: starts, Seed: s.set.Seed, Workers: 1})
		if err != nil {
			return 0, fmt.Errorf("scout: %s: %w", p, err)
		}
		return score.Objective, nil
	}
	sys, err := sim.New(d, s.open)
	if err != nil {
		return 0, err
	}
	problem, err := tune.New(d, sys, s.open)
	if err != nil {
		return 0, err
	}
	score, err := problem.Score(problem.Start())
	if err != nil {
		return 0, err
	}
	return score.Objective, nil
}
