package tune

import (
	"math"
	"slices"
)

// A descent goes down from one place to the nearest optimum by the method of Levenberg and Marquardt (K. Levenberg, Quart. Appl.
// Math. 2, 1944, 164–168; D. W. Marquardt, J. SIAM 11, 1963, 431–441) on the logarithms of the values. Each step minimises
// the damped model of the objective within the bounds and under the limit on the impedance, made linear; a step is taken if
// the objective and a penalty for what the limit is missed by come down together. The damping follows H. B. Nielsen,
// "Damping Parameter in Marquardt's Method", IMM, DTU, 1999.
type descent struct {
	e     *evaluator
	q     *quadratic
	limit float64 // Ω; 0: none

	x       []float64
	f       float64 // dB², at x
	missed  float64 // ln of what |Zin| is below the limit by, at x; 0: not
	damping float64
	growth  float64
	penalty float64
	over    bool   // no step leads further down
	frozen  []bool // by variable: it does not move

	hess, damped, slope []float64
	conds               []condition
	trial               []float64
}

// When a descent is over: a step that would move no value by more than leastStep, or better the objective by no more
// than leastGain of it.
const (
	leastStep = 1e-10
	leastGain = 1e-13
	exact     = 1e-22 // dB², an objective that is nought
)

func (p *Problem) newDescent(e *evaluator) *descent {
	n := len(p.vars)
	d := &descent{
		e: e, q: newQuadratic(n), limit: p.limit,
		x: make([]float64, n), trial: make([]float64, n), frozen: make([]bool, n),
		hess: make([]float64, n*n), damped: make([]float64, n*n), slope: make([]float64, n),
	}
	for v := range n {
		for _, sign := range []float64{1, -1} {
			a := make([]float64, n)
			a[v] = sign
			d.conds = append(d.conds, condition{a: a})
		}
	}
	return d
}

// begin goes to x, which must be within the bounds.
func (d *descent) begin(x []float64) error {
	copy(d.x, x)
	d.damping, d.growth, d.penalty, d.over = 1e-3, 2, 0, false
	if !d.e.pinned {
		d.e.pairs = d.e.pairs[:0]
	}
	if _, err := d.e.objective(d.x); err != nil {
		return err
	}
	d.e.setPairs()
	return d.arrive()
}

// place returns where the descent is.
func (d *descent) place() place {
	return place{x: slices.Clone(d.x), f: d.f, missed: d.missed, over: d.over}
}

// arrive computes what the next step needs to know of x.
func (d *descent) arrive() error {
	var err error
	if d.f, err = d.e.derivatives(d.x); err != nil {
		return err
	}
	if d.missed, err = d.miss(); err != nil {
		return err
	}
	n := len(d.x)
	for i := range n {
		for j := range i + 1 {
			h := dot(d.e.jac[i], d.e.jac[j])
			d.hess[i*n+j], d.hess[j*n+i] = h, h
		}
		d.slope[i] = dot(d.e.jac[i], d.e.resid)
	}
	for v, frozen := range d.frozen {
		if frozen {
			for j := range n {
				d.hess[v*n+j], d.hess[j*n+v] = 0, 0
			}
			d.hess[v*n+v], d.slope[v] = 1, 0
		}
	}
	d.conds = d.conds[:2*n]
	if d.limit == 0 {
		return nil
	}
	dips, err := d.e.dips(d.limit)
	for _, p := range dips {
		for v, frozen := range d.frozen {
			if frozen {
				p.slope[v] = 0
			}
		}
		d.conds = append(d.conds, condition{a: p.slope, b: math.Log(d.limit) - p.ln})
	}
	return err
}

// miss returns by how much the limit is missed at the evaluator's place.
func (d *descent) miss() (float64, error) {
	if d.limit == 0 {
		return 0, nil
	}
	lowest, err := d.e.lowest()
	return max(0, math.Log(d.limit)-lowest), err
}

// run takes steps until none leads further down or there have been so many.
func (d *descent) run(steps int) error {
	for range steps {
		if d.over || d.f < exact*d.e.p.scale && d.missed == 0 {
			d.over = true
			return nil
		}
		if err := d.step(); err != nil {
			return err
		}
	}
	return nil
}

func (d *descent) step() error {
	n := len(d.x)
	for v := range n {
		d.conds[2*v].b = min(math.Log(d.e.p.vars[v].Low)-d.x[v], 0)
		d.conds[2*v+1].b = min(d.x[v]-math.Log(d.e.p.vars[v].High), 0)
	}
	if !d.aim() {
		d.worse()
		return nil
	}
	move := d.q.d
	most := 0.0
	for v := range n {
		most = max(most, math.Abs(move[v]))
		// Rounding must not lead out of the bounds.
		d.trial[v] = min(max(d.x[v]+move[v], math.Log(d.e.p.vars[v].Low)), math.Log(d.e.p.vars[v].High))
		if d.frozen[v] {
			d.trial[v] = d.x[v]
		}
	}
	promised := 0.0
	for i := range n {
		promised -= 2 * d.slope[i] * move[i]
		for j := range n {
			promised -= d.hess[i*n+j] * move[i] * move[j]
		}
	}
	d.penalty = max(d.penalty, 4*d.q.pushed(2*n)) // the model is half the objective
	left := 0.0
	for _, c := range d.conds[2*n:] {
		left = max(left, c.b-dot(c.a, move))
	}
	promised += d.penalty * (d.missed - left)
	if most < leastStep || promised < leastGain*(d.f+d.penalty*d.missed) {
		d.over = true
		return nil
	}
	f, err := d.e.objective(d.trial)
	if err != nil {
		d.worse() // a resonance without loss: not there
		return nil
	}
	missed, err := d.miss()
	if err != nil {
		d.worse()
		return nil
	}
	ratio := (d.f - f + d.penalty*(d.missed-missed)) / promised
	if !(ratio > 1e-4) {
		d.worse()
		return nil
	}
	copy(d.x, d.trial)
	d.damping *= max(1./3, 1-math.Pow(2*ratio-1, 3))
	d.growth = 2
	return d.arrive()
}

// aim solves the damped model for the next move. Where the limit cannot be met in one move, it goes for less of it.
func (d *descent) aim() bool {
	n := len(d.x)
	most := 0.0
	for i := range n {
		most = max(most, d.hess[i*n+i])
	}
	if most == 0 {
		most = 1
	}
	for {
		copy(d.damped, d.hess)
		for i := range n {
			d.damped[i*n+i] += d.damping * (d.hess[i*n+i] + 1e-6*most)
		}
		first := 2 * n
		for range 4 {
			if d.q.solve(d.damped, d.slope, d.conds) {
				return true
			}
			for i := first; i < len(d.conds); i++ {
				if d.conds[i].b > 0 {
					d.conds[i].b *= 0.3
				}
			}
		}
		if len(d.conds) == first {
			return false
		}
		d.conds = d.conds[:first]
	}
}

// worse makes the next step shorter.
func (d *descent) worse() {
	d.damping *= d.growth
	d.growth *= 2
	if d.damping > 1e12 {
		d.over = true
	}
}
