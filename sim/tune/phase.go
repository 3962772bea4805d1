package tune

import (
	"cmp"
	"math"
	"math/cmplx"
	"slices"
)

// A phasePair is two neighbouring ways and the grid points at which the phase between them counts.
type phasePair struct {
	low, high int
	at        []int
}

// meetings returns the neighbours among ways of such targets, in dB over the grid, and the grid points at which both targets are
// above -12 dB. It is nil where a way has no target or targets do not meet.
func meetings(targets [][]float64) []phasePair {
	centre := make([]float64, len(targets))
	for w, target := range targets {
		if target == nil {
			return nil
		}
		centre[w] = middle(len(target), func(k int) float64 { return math.Pow(10, target[k]/20) })
	}
	pairs := neighbours(centre)
	for i := range pairs {
		q := &pairs[i]
		for k := range targets[q.low] {
			if targets[q.low][k] > -within && targets[q.high][k] > -within {
				q.at = append(q.at, k)
			}
		}
		if len(q.at) == 0 {
			return nil
		}
	}
	return pairs
}

// middle returns the mean of 0 … n-1, weighted by power.
func middle(n int, amplitude func(k int) float64) float64 {
	power, sum := 0.0, 0.0
	for k := range n {
		a := amplitude(k)
		power += a * a
		sum += a * a * float64(k)
	}
	if power == 0 {
		return 0
	}
	return sum / power
}

// neighbours returns ways in the order of what they are loudest about, each with the next.
func neighbours(centre []float64) []phasePair {
	order := make([]int, len(centre))
	for w := range order {
		order[w] = w
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(centre[a], centre[b]) })
	pairs := make([]phasePair, len(order)-1)
	for i := range pairs {
		pairs[i] = phasePair{low: order[i], high: order[i+1]}
	}
	return pairs
}

// setPairs chooses where the phase between ways counts: where the targets meet, or, if they do not say, where both ways are within
// 12 dB of the sum at the present place. It stays so until the next call, so that a descent has one smooth objective.
func (e *evaluator) setPairs() {
	if e.pinned {
		return
	}
	e.pairs = e.pairs[:0]
	if e.p.phase == 0 {
		return
	}
	if e.pairs = e.p.meets; e.pairs == nil {
		e.pairs = e.meetingsHere()
	}
	row := 0
	for _, t := range e.p.terms {
		row += len(t.at)
	}
	for _, q := range e.pairs {
		for range q.at {
			e.root[row] = math.Sqrt(e.p.phase/float64(len(q.at))) / phaseUnit
			row++
		}
	}
	clear(e.resid[row:])
	for v := range e.jac {
		clear(e.jac[v][row:])
	}
}

// measureAt chooses where phases count at x, for all that follows: values are then compared by one measure.
func (e *evaluator) measureAt(x []float64) error {
	e.pinned = false
	if _, err := e.objective(x); err != nil {
		return err
	}
	e.setPairs()
	e.pinned = true
	return nil
}

// meetingsHere returns the neighbours at the present place and the grid points at which both are within 12 dB of the sum.
func (e *evaluator) meetingsHere() []phasePair {
	press := e.p.ears[0].press
	if press == nil {
		return nil
	}
	size := func(w, k int) float64 { return cmplx.Abs(press[w][k] * e.gain[w][k]) }
	centre := make([]float64, len(press))
	for w := range centre {
		centre[w] = middle(len(e.p.freqs), func(k int) float64 { return size(w, k) })
	}
	share := math.Pow(10, -within/20.)
	pairs := neighbours(centre)
	for i := range pairs {
		q := &pairs[i]
		for k := range e.p.freqs {
			if least := share * cmplx.Abs(e.sum[0][k]); size(q.low, k) > least && size(q.high, k) > least {
				q.at = append(q.at, k)
			}
		}
	}
	return pairs
}

// between returns the phase of the pair's high way relative to its low one at grid point k, in degrees.
func (e *evaluator) between(q *phasePair, k int) float64 {
	press := e.p.ears[0].press
	return cmplx.Phase(press[q.high][k]*e.gain[q.high][k]*cmplx.Conj(press[q.low][k]*e.gain[q.low][k])) * 180 / math.Pi
}

// phaseResiduals fills resid from row on and returns what they add to the objective.
func (e *evaluator) phaseResiduals(row int) float64 {
	f := 0.0
	for i := range e.pairs {
		for _, k := range e.pairs[i].at {
			e.resid[row] = e.root[row] * e.between(&e.pairs[i], k)
			f += e.resid[row] * e.resid[row]
			row++
		}
	}
	return f
}

// phaseColumn fills a column of the Jacobian from row on.
func (e *evaluator) phaseColumn(row int, col []float64) {
	for i := range e.pairs {
		q := &e.pairs[i]
		for _, k := range q.at {
			d := imag(e.slope[q.high][k]*e.inv[q.high][k] - e.slope[q.low][k]*e.inv[q.low][k])
			col[row] = e.root[row] * d * 180 / math.Pi
			row++
		}
	}
}
