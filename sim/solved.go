package sim

import (
	"fmt"
	"math"
	"math/cmplx"

	"sixdown/sim/field"
)

// A solved is what does not depend on where the ear is. If there is a sum, the grid holds the n frequencies
// asked for, then those a little below each, then those a little above.
type solved struct {
	grid     []float64
	n        int
	amp, zin []complex128
	gain     [][]complex128 // by way, over the grid
	source   [][]complex128 // by unit, gain times what it gives to the air, in Pa; nil: nothing, or its way has no pressure
}

// solve answers for the circuit and the drivers.
func (s *System) solve(freqs []float64) (*solved, error) {
	n := len(freqs)
	q := &solved{grid: append(make([]float64, 0, 3*n), freqs...), n: n}
	if s.Sums() {
		q.grid = q.grid[:3*n]
		for i, f := range freqs {
			q.grid[i+n], q.grid[i+2*n] = s.beside(f)
		}
	}
	q.amp, q.zin = make([]complex128, len(q.grid)), make([]complex128, len(q.grid))
	q.gain, q.source = make([][]complex128, len(s.names)), make([][]complex128, len(s.units))
	for i := range q.gain {
		q.gain[i] = make([]complex128, len(q.grid))
	}
	for u := range q.source {
		if s.Sounds(s.units[u].way) {
			q.source[u] = make([]complex128, len(q.grid))
		}
	}
	if n == 0 {
		return q, nil
	}
	chunks := (len(q.grid) + chunk - 1) / chunk
	return q, share(chunks, func(task int) error {
		return s.solvePart(q, task*len(q.grid)/chunks, (task+1)*len(q.grid)/chunks)
	})
}

// beside returns frequencies a little below and above f, in Hz. The end of a table, where its curve is kinked, does not lie between
// them: there both are on the side of f, and of the table if f is its end.
func (s *System) beside(f float64) (below, above float64) {
	below, above = f*(1-nudge), f*(1+nudge)
	for _, u := range s.units {
		for _, t := range u.speaker.tables {
			lo, hi := t.Range()
			switch {
			case below < lo && lo < above && f >= lo, below < hi && hi < above && f > hi:
				below, above = f, f*(1+2*nudge)
			case below < lo && lo < above, below < hi && hi < above:
				below, above = f*(1-2*nudge), f
			}
		}
	}
	return below, above
}

// solvePart fills q from lo up to hi.
func (s *System) solvePart(q *solved, lo, hi int) error {
	grid := q.grid[lo:hi]
	sweep, err := s.circuit.NewSweep(grid)
	if err != nil {
		return err
	}
	if err := sweep.Solve(); err != nil {
		return err
	}
	sweep.AmpGain(q.amp[lo:hi])
	sweep.InputImpedance(q.zin[lo:hi])
	for i, gain := range q.gain {
		sweep.Gain(gain[lo:hi], i)
	}
	for u, source := range q.source {
		if source == nil {
			continue
		}
		gain := q.gain[s.units[u].way]
		for k := lo; k < hi; k++ {
			source[k] = gain[k] * s.pressure(u, q.grid[k])
		}
	}
	return nil
}

// newResponse returns a Response without the sound, which hear puts in.
func (s *System) newResponse(q *solved, angle field.Angle) *Response {
	n := q.n
	r := &Response{Title: s.title, Angle: s.also(angle), Freqs: q.grid[:n:n], Amp: q.amp[:n:n], Zin: q.zin[:n:n]}
	for i, name := range s.names {
		w := WayResponse{Name: name, H: q.gain[i][:n:n]}
		if s.tone == nil {
			w.Driver = s.ways[i].drivers
		}
		if s.Sounds(i) {
			w.P = make([]complex128, n)
		}
		r.Ways = append(r.Ways, w)
	}
	if s.Sums() {
		r.Sum, r.SumDelay = make([]complex128, n), make([]float64, n)
	}
	if n > 0 {
		r.Warnings = append(s.rangeWarnings(r.Freqs), s.angleWarnings(s.also(angle))...)
	}
	return r
}

// hear fills r's pressures, sum and delay from lo up to hi.
func (s *System) hear(r *Response, q *solved, airs []air, lo, hi int) {
	for u, source := range q.source {
		if source == nil {
			continue
		}
		p := r.Ways[s.units[u].way].P
		for k := lo; k < hi; k++ {
			p[k] += source[k] * airs[u].factor(q.grid[k])
		}
	}
	if r.Sum == nil {
		return
	}
	for k := lo; k < hi; k++ {
		var below, above complex128
		down, up := k+q.n, k+2*q.n
		for i := range r.Ways {
			r.Sum[k] += r.Ways[i].P[k]
		}
		for u, source := range q.source {
			below += source[down] * airs[u].factor(q.grid[down])
			above += source[up] * airs[u].factor(q.grid[up])
		}
		turn := cmplx.Phase(above * cmplx.Conj(below))
		if r.SumDelay[k] = -turn / (2 * math.Pi * (q.grid[up] - q.grid[down])); r.Sum[k] == 0 || math.Abs(turn) > math.Pi/2 {
			r.SumDelay[k] = math.NaN() // at a null the phase jumps, and has no slope
		}
	}
}

// airs returns the air from each unit to the ear, turned by angle.
func (s *System) airs(angle field.Angle) ([]air, error) {
	if angle == (field.Angle{}) {
		return s.straight, nil
	}
	angle = s.also(angle)
	l := s.listener
	l.Angle = angle
	if ear := l.Ear(); !(ear.Distance(field.Point{}) < math.Inf(1)) {
		return nil, fmt.Errorf("predict: an angle is %g, %g degrees; give finite ones", angle.HorizontalDeg, angle.VerticalDeg)
	}
	as := make([]air, len(s.units))
	for i, u := range s.units {
		if !s.Sounds(u.way) {
			continue
		}
		sp := u.speaker
		if sp.at.Distance(l.Ear()) == 0 {
			return nil, fmt.Errorf("driver %q: it stands where the ear is at %g, %g degrees; move one of them", sp.name, angle.HorizontalDeg, angle.VerticalDeg)
		}
		as[i] = sp.to(l)
	}
	return as, nil
}
