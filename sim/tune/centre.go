package tune

import (
	"context"
	"errors"
	"fmt"
	"math"
	"runtime"
	"slices"
	"sync"

	"sixdown/sim/spread"
)

// CentreSettings are how Centre looks. The zero value is a good one.
type CentreSettings struct {
	Builds   int     // that steer it; 0: 400
	Seed     uint64  // of these and, by another, of those that judge the result
	Give     float64 // share that the objective may rise by; 0: 0.5
	Workers  int     // goroutines; 0: as many as there are cores. It changes no digit of the result
	Progress func(done float64)
}

// Centred are values moved to where more builds pass.
type Centred struct {
	Values        []float64 // Ω, H or F, by variable
	Before, After float64   // yield, judged by builds that did not steer the search
	Sigma         float64   // standard error of either
	Score         Score
	Status        Status
}

const (
	judgingBuilds = 8000  // judge a result
	allPass       = 0.999 // a yield that leaves nothing to be gained
)

// Centre moves values from an optimum to where the yield, as the design's [spread] defines it, is greatest. The share of builds
// that pass is made smooth, each counting by how far inside the limit it stays, and climbed with exact derivatives, over the
// same builds throughout; smoothness is taken back in steps. It is the design centring of the method of statistical gradients (M. A.
// Styblinski and A. Ruszczyński, "Stochastic Approximation Approach to Statistical Circuit Design", Electronics Letters 19(8),
// 1983, 300–302, from memory), with fixed builds in place of fresh ones. The limit on the impedance holds, and the objective
// may rise by the share given.
func (p *Problem) Centre(ctx context.Context, from []float64, s CentreSettings) (*Centred, error) {
	if s.Builds <= 0 {
		s.Builds = 400
	}
	if s.Give <= 0 {
		s.Give = 0.5
	}
	if s.Workers <= 0 {
		s.Workers = runtime.GOMAXPROCS(0)
	}
	x, err := p.logs(from)
	if err != nil {
		return nil, err
	}
	many, err := spread.New(p.design, p.sys, p.open)
	if err != nil {
		return nil, err
	}
	c := &centring{p: p, s: s, limit: many.LimitDB()}
	for range s.Workers {
		j, err := many.NewJudge(12)
		if err != nil {
			return nil, err
		}
		c.judges = append(c.judges, j)
	}
	c.sampler = spread.NewSampler(c.judges[0].Dimensions(), s.Seed)
	if c.e, err = p.newEvaluator(); err != nil {
		return nil, err
	}
	if err := c.e.measureAt(x); err != nil {
		return nil, err
	}
	f, err := c.e.objective(x)
	if err != nil {
		return nil, err
	}
	c.most = f * (1 + s.Give)
	res := &Centred{}
	fresh := spread.NewSampler(c.judges[0].Dimensions(), s.Seed+1)
	if res.Before, err = c.yield(x, fresh); err != nil {
		return nil, err
	}
	y := x
	if res.Before < allPass {
		if y, err = c.climb(ctx, x); err != nil {
			return nil, err
		}
	}
	if res.After, err = c.yield(y, fresh); err != nil {
		return nil, err
	}
	if res.After < res.Before { // what steered was luck
		y, res.After = x, res.Before
	}
	if ctx.Err() != nil {
		res.Status = Interrupted
	}
	res.Values = p.values(y)
	res.Sigma = math.Sqrt(res.After * (1 - res.After) / judgingBuilds)
	res.Score, err = c.e.score(y)
	return res, err
}

// A centring is one Centre.
type centring struct {
	p       *Problem
	s       CentreSettings
	limit   float64 // dB
	most    float64 // dB², that the objective may be
	judges  []*spread.Judge
	sampler *spread.Sampler
	e       *evaluator
}

// settle moves the judges to x, for gradients by the parts of these names if there are any.
func (c *centring) settle(x []float64, names []string) error {
	for _, j := range c.judges {
		for v, lnValue := range x {
			for _, name := range append([]string{c.p.vars[v].Part}, c.p.vars[v].Followers...) {
				if err := j.Nominal(name, math.Exp(lnValue)); err != nil {
					return err
				}
			}
		}
		settle := j.Settle
		if names != nil {
			settle = func() error { return j.SettleGradient(names) }
		}
		if err := settle(); err != nil {
			return err
		}
	}
	return nil
}

// each calls do for so many builds, shared out in a way that does not depend on how fast they are.
func (c *centring) each(builds int, do func(worker, build int, j *spread.Judge) error) error {
	errs := make([]error, len(c.judges))
	var wg sync.WaitGroup
	for w, j := range c.judges {
		wg.Go(func() {
			for i := w; i < builds && errs[w] == nil; i += len(c.judges) {
				errs[w] = do(w, i, j)
			}
		})
	}
	wg.Wait()
	return errors.Join(errs...)
}

// yield returns the share of builds about x that pass.
func (c *centring) yield(x []float64, sampler *spread.Sampler) (float64, error) {
	if err := c.settle(x, nil); err != nil {
		return 0, fmt.Errorf("tune: %w", err)
	}
	pass := make([]bool, judgingBuilds)
	err := c.each(judgingBuilds, func(_, i int, j *spread.Judge) error {
		factors := make([]float64, j.Dimensions())
		j.Factors(factors, sampler, i)
		off, _, err := j.Off(factors)
		pass[i] = math.Abs(off) <= c.limit
		return err
	})
	n := 0
	for _, ok := range pass {
		if ok {
			n++
		}
	}
	return float64(n) / judgingBuilds, err
}

// smooth returns the mean of 1/(1 + e^(-(limit - off)/width)) over the builds about x, and its gradient by x.
func (c *centring) smooth(x []float64, width float64) (float64, []float64, error) {
	var names []string
	var of []int
	for v := range c.p.vars {
		for _, name := range append([]string{c.p.vars[v].Part}, c.p.vars[v].Followers...) {
			names, of = append(names, name), append(of, v)
		}
	}
	if err := c.settle(x, names); err != nil {
		return 0, nil, err
	}
	values := make([]float64, c.s.Builds)
	slopes := make([][]float64, c.s.Builds)
	err := c.each(c.s.Builds, func(_, i int, j *spread.Judge) error {
		factors, d := make([]float64, j.Dimensions()), make([]float64, len(names))
		j.Factors(factors, c.sampler, i)
		off, _, err := j.OffGradient(d, factors)
		if err != nil {
			return err
		}
		s := 1 / (1 + math.Exp(-(c.limit-math.Abs(off))/width))
		values[i] = s
		for k := range d {
			d[k] *= -math.Copysign(1, off) * s * (1 - s) / width
		}
		slopes[i] = d
		return nil
	})
	if err != nil {
		return 0, nil, err
	}
	mean, slope := 0.0, make([]float64, len(x))
	for i, s := range values {
		mean += s / float64(len(values))
		for k, d := range slopes[i] {
			slope[of[k]] += d / float64(len(values))
		}
	}
	return mean, slope, nil
}

// climb goes up the smoothed yield from x.
func (c *centring) climb(ctx context.Context, x []float64) ([]float64, error) {
	widths := []float64{0.4, 0.2, 0.1, 0.05} // of the limit
	const steps = 14
	x = slices.Clone(x)
	for round, width := range widths {
		f, slope, err := c.smooth(x, width*c.limit)
		if err != nil {
			return nil, err
		}
		reach := 0.05 // of the logarithm of a value
		for step := 0; step < steps && reach > 5e-4 && ctx.Err() == nil; step++ {
			if c.s.Progress != nil {
				c.s.Progress((float64(round) + float64(step)/steps) / float64(len(widths)))
			}
			most := 0.0
			for _, d := range slope {
				most = max(most, math.Abs(d))
			}
			if most == 0 {
				break
			}
			y := slices.Clone(x)
			for v := range y {
				y[v] = min(max(y[v]+reach*slope[v]/most, math.Log(c.p.vars[v].Low)), math.Log(c.p.vars[v].High))
			}
			ok, err := c.allowed(y)
			if err != nil {
				return nil, err
			}
			if !ok {
				reach /= 2
				continue
			}
			g, up, err := c.smooth(y, width*c.limit)
			if err != nil {
				return nil, err
			}
			if g <= f {
				reach /= 2
				continue
			}
			x, f, slope = y, g, up
			reach = min(1.5*reach, 0.2)
		}
	}
	return x, nil
}

// allowed reports whether the objective and the impedance at x are within what is given.
func (c *centring) allowed(x []float64) (bool, error) {
	f, err := c.e.objective(x)
	if err != nil || f > c.most {
		return false, nil
	}
	if c.p.limit == 0 {
		return true, nil
	}
	ohm, _, err := c.p.leastImpedance(x, nil)
	return ohm >= c.p.limit*(1-1e-9), err
}
