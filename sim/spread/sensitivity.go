package spread

import (
	"cmp"
	"context"
	"fmt"
	"math"
	"slices"
)

// A Sensitivity is what one part does to the sum, or to the way that it moves most where there is no sum.
type Sensitivity struct {
	Part         string
	Way          string  // "": the sum
	DBPerPercent float64 // the greatest change over the band for one per cent more, in dB; its sign says which way
	AtHz         float64 // where that is
}

// sensitivities returns what each part does, the strongest first, from the exact derivatives of the nominal design.
func (p *Problem) sensitivities(freqs []float64, judged []int) ([]Sensitivity, error) {
	b, err := p.newBench(freqs)
	if err != nil {
		return nil, err
	}
	if err := b.sweep.Gradient(); err != nil {
		return nil, fmt.Errorf("spread: %w", err)
	}
	ways, sums := p.sys.Names(), p.sys.Sums()
	gain := make([][]complex128, len(ways))
	sum := make([]complex128, len(freqs))
	for w := range ways {
		gain[w] = make([]complex128, len(freqs))
		b.sweep.Gain(gain[w], w)
		if sums {
			for k := range sum {
				sum[k] += b.press[w][k] * gain[w][k]
			}
		}
	}
	slope, total := make([]complex128, len(freqs)), make([]complex128, len(freqs))
	var all []Sensitivity
	for i := range p.parts {
		part := &p.parts[i]
		s := Sensitivity{Part: part.Name}
		strongest := func(way string, d, z []complex128) {
			for _, k := range judged {
				if z[k] == 0 {
					continue
				}
				if c := 20 / math.Ln10 / 100 * real(d[k]/z[k]); math.Abs(c) > math.Abs(s.DBPerPercent) {
					s.DBPerPercent, s.AtHz, s.Way = c, freqs[k], way
				}
			}
		}
		clear(total)
		for w := range ways {
			clear(slope)
			for j, branch := range part.branches {
				b.sweep.AddGainGradient(slope, w, branch, part.nominal[j])
			}
			if !sums {
				strongest(ways[w], slope, gain[w])
				continue
			}
			for k := range total {
				total[k] += b.press[w][k] * slope[k]
			}
		}
		if sums {
			strongest("", total, sum)
		}
		all = append(all, s)
	}
	slices.SortStableFunc(all, func(a, b Sensitivity) int { return cmp.Compare(math.Abs(b.DBPerPercent), math.Abs(a.DBPerPercent)) })
	return all, nil
}

// A Tightened is what buying one part at a closer tolerance does.
type Tightened struct {
	Part  string
	Tol   float64 // fraction, the closer one
	Yield float64 // share of builds that pass then
}

// Tighten returns for each part the yield if it alone were bought at share of its tolerance, the best first, and the yield as it
// is, all over the same sequence of builds.
func (p *Problem) Tighten(ctx context.Context, s Settings, share float64) (as float64, each []Tightened, err error) {
	if !(share > 0 && share < 1) {
		return 0, nil, fmt.Errorf("spread: a share of %g of the tolerance; give one between 0 and 1", share)
	}
	if err := s.complete(p); err != nil {
		return 0, nil, err
	}
	freqs, _, judged := p.grid(&s)
	nominal, err := p.nominal(freqs)
	if err != nil {
		return 0, nil, err
	}
	wanted, err := p.wanted(freqs, nominal, judged)
	if err != nil {
		return 0, nil, err
	}
	progress := s.Progress
	yield := func(q *Problem, i int) (float64, error) {
		if progress != nil {
			s.Progress = func(done float64) { progress((float64(i) + done) / float64(len(p.parts)+1)) }
		}
		l, err := q.makeLot(ctx, &s, freqs)
		if err != nil {
			return 0, err
		}
		if err := ctx.Err(); err != nil {
			return 0, err
		}
		y, _ := l.yield(wanted, judged, s.LimitDB)
		return y, nil
	}
	if as, err = yield(p, 0); err != nil {
		return 0, nil, err
	}
	for i := range p.parts {
		q := *p
		q.parts = slices.Clone(p.parts)
		q.parts[i].Tol *= share
		y, err := yield(&q, i+1)
		if err != nil {
			return 0, nil, err
		}
		each = append(each, Tightened{p.parts[i].Name, q.parts[i].Tol, y})
	}
	slices.SortStableFunc(each, func(a, b Tightened) int { return cmp.Compare(b.Yield, a.Yield) })
	return as, each, nil
}
