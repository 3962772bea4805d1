package tune

import (
	"cmp"
	"math"
	"math/cmplx"
	"slices"
)

// setPairs chooses, at the present place, which ways are neighbours and where the phase between them counts. It stays so
// until the next call, so that a descent has one smooth objective.
func (e *evaluator) setPairs() {
	e.pairs = e.pairs[:0]
	if e.p.phase == 0 {
		return
	}
	e.pairs = e.neighbours()
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

// neighbours returns the ways in the order of the frequencies that they are loudest at, each with the next, and the grid
// points at which both are within 12 dB of the sum.
func (e *evaluator) neighbours() []phasePair {
	press := e.p.ears[0].press
	if press == nil {
		return nil
	}
	order := make([]int, len(press))
	centre := make([]float64, len(press)) // mean log frequency, weighted by power
	for w := range press {
		order[w] = w
		power := 0.0
		for k, g := range e.gain[w] {
			a := cmplx.Abs(press[w][k] * g)
			power += a * a
			centre[w] += a * a * float64(k)
		}
		if power > 0 {
			centre[w] /= power
		}
	}
	slices.SortStableFunc(order, func(a, b int) int { return cmp.Compare(centre[a], centre[b]) })
	share := math.Pow(10, -within/20.)
	var pairs []phasePair
	for i := range order[1:] {
		q := phasePair{low: order[i], high: order[i+1]}
		for k := range e.p.freqs {
			least := share * cmplx.Abs(e.sum[0][k])
			if cmplx.Abs(press[q.low][k]*e.gain[q.low][k]) > least && cmplx.Abs(press[q.high][k]*e.gain[q.high][k]) > least {
				q.at = append(q.at, k)
			}
		}
		pairs = append(pairs, q)
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
