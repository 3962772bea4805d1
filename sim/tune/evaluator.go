package tune

import (
	"math"

	"sixdown/sim/circuit"
)

// An evaluator computes the objective and its derivatives at one place after another. One goroutine at a time may use
// it. Once made, it allocates nothing unless an impedance is limited.
type evaluator struct {
	p     *Problem
	sweep *circuit.Sweep
	load  *circuit.Sweep // over the grid on which |Zin| is limited; nil: it is not
	loads []float64      // Hz, that grid

	coils       windings       // resistance that moves with a coil's value; nil: it stays as the design states it
	x           []float64      // ln of the values
	gain        [][]complex128 // by way
	slope       [][]complex128 // by way: ∂gain/∂ln value of one variable
	sum         [][]complex128 // by ear, Pa
	resid       []float64      // weighted, the level taken out
	root        []float64      // square root of the weight, by residual
	jac         [][]float64    // by variable: ∂resid/∂x
	dsum        [][]complex128 // by ear
	inv, invSum [][]complex128 // 1/gain by way, 1/sum by ear; 0 where there is nothing
	mean        []float64      // by level
	total       []float64      // weight by level
	pairs       []phasePair    // what counts of the phase, set by setPairs
	pinned      bool           // they stay
	zin         []complex128   // over loads
	calls       int            // how often the objective has been computed
}

const (
	dbPerNeper = 8.685889638065037 // 20/ln 10
	pascalRef  = 20e-6             // Pa
)

func (p *Problem) newEvaluator() (*evaluator, error) { return p.newEvaluatorWith(nil) }

func (p *Problem) newEvaluatorWith(coils windings) (*evaluator, error) {
	e := &evaluator{p: p, coils: coils}
	var err error
	if e.sweep, err = p.newSweep(p.freqs, coils); err != nil {
		return nil, err
	}
	n, ways := len(p.freqs), p.outputs()
	lines := func(k int) [][]complex128 {
		all := make([][]complex128, k)
		for i := range all {
			all[i] = make([]complex128, n)
		}
		return all
	}
	e.gain, e.slope, e.inv = lines(ways), lines(ways), lines(ways)
	e.sum, e.dsum, e.invSum = lines(len(p.ears)), lines(len(p.ears)), lines(len(p.ears))
	rows, levels := 0, 1
	for _, t := range p.terms {
		rows += len(t.at)
		levels = max(levels, t.level+1)
	}
	if p.phase > 0 {
		rows += n * (ways - 1)
	}
	e.x = make([]float64, len(p.vars))
	e.resid, e.root = make([]float64, rows), make([]float64, rows)
	e.jac = make([][]float64, len(p.vars))
	for i := range e.jac {
		e.jac[i] = make([]float64, rows)
	}
	e.mean, e.total = make([]float64, levels), make([]float64, levels)
	row := 0
	for _, t := range p.terms {
		for range t.at {
			e.root[row] = math.Sqrt(t.weight)
			row++
		}
	}
	if p.meets != nil {
		e.setPairs() // the same everywhere
		e.pinned = true
	}
	if p.limit > 0 {
		err = e.setLoads(logGrid(loadFrom, loadTo, p.grid))
	}
	return e, err
}

// set moves to the values of which x are the logarithms.
func (e *evaluator) set(x []float64) error {
	for v, lnValue := range x {
		if e.x[v] == lnValue && e.calls > 0 {
			continue
		}
		for _, s := range []*circuit.Sweep{e.sweep, e.load} {
			if s == nil {
				continue
			}
			if err := e.p.move(s, e.coils, v, lnValue); err != nil {
				return err
			}
		}
		e.x[v] = lnValue
	}
	return nil
}

// objective moves to x and returns the objective there in dB²; resid is then as there.
func (e *evaluator) objective(x []float64) (float64, error) {
	if err := e.set(x); err != nil {
		return 0, err
	}
	return e.objectiveHere()
}

// objectiveHere is objective at the present place.
func (e *evaluator) objectiveHere() (float64, error) {
	if err := e.sweep.Solve(); err != nil {
		return 0, err
	}
	e.calls++
	return e.residuals(), nil
}

// setOhm gives the coils of variable v another resistance than the windings say, until they are next moved.
func (e *evaluator) setOhm(v int, ohm float64) error {
	for _, s := range []*circuit.Sweep{e.sweep, e.load} {
		if s == nil {
			continue
		}
		for _, b := range e.p.branches[v] {
			if err := s.SetLoss(b, ohm); err != nil {
				return err
			}
		}
	}
	e.x[v] = math.NaN() // so that set moves it
	return nil
}

// derivatives is objective, with jac as there.
func (e *evaluator) derivatives(x []float64) (float64, error) {
	if err := e.set(x); err != nil {
		return 0, err
	}
	if err := e.sweep.Gradient(); err != nil {
		return 0, err
	}
	e.calls++
	f := e.residuals()
	for w := range e.gain {
		reciprocals(e.inv[w], e.gain[w])
	}
	for i := range e.sum {
		reciprocals(e.invSum[i], e.sum[i])
	}
	for v := range e.jac {
		e.column(v)
	}
	return f, nil
}

// residuals fills resid from the sweep's solution.
func (e *evaluator) residuals() float64 {
	p := e.p
	for w := range e.gain {
		e.sweep.Gain(e.gain[w], w)
	}
	for i := range p.ears {
		e.addUp(e.sum[i], i, e.gain)
	}
	row := 0
	clear(e.mean)
	clear(e.total)
	for i := range p.terms {
		t := &p.terms[i]
		for j, k := range t.at {
			e.resid[row] = e.level(t, k) - t.aim[j]
			e.mean[t.level] += t.weight * e.resid[row]
			e.total[t.level] += t.weight
			row++
		}
	}
	e.settle()
	row, f := 0, 0.0
	for i := range p.terms {
		t := &p.terms[i]
		for range t.at {
			e.resid[row] = e.root[row] * (e.resid[row] - e.mean[t.level])
			f += e.resid[row] * e.resid[row]
			row++
		}
	}
	f += e.phaseResiduals(row)
	return f
}

// settle turns the sums in mean into the levels that make the objective least, or that are given.
func (e *evaluator) settle() {
	for l := range e.mean {
		if e.total[l] > 0 {
			e.mean[l] /= e.total[l]
		}
	}
	if e.p.fixed {
		e.mean[0] = e.p.level
	}
}

// addUp stores in dst what the ways give together at an ear, for gains by way; without sound nothing.
func (e *evaluator) addUp(dst []complex128, ear int, gains [][]complex128) {
	clear(dst)
	for w, press := range e.p.ears[ear].press {
		for k, g := range gains[w] {
			dst[k] += press[k] * g
		}
	}
}

// level returns the level in dB of what a term is about, at grid point k.
func (e *evaluator) level(t *term, k int) float64 {
	z := e.heard(t, k)
	return max(dbPerNeper/2*math.Log(real(z)*real(z)+imag(z)*imag(z)), silent)
}

// heard returns what a term is about at grid point k: re 20 µPa, or as a gain where there is no sound.
func (e *evaluator) heard(t *term, k int) complex128 {
	press := e.p.ears[t.ear].press
	switch {
	case t.way < 0:
		return e.sum[t.ear][k] / pascalRef
	case press == nil:
		return e.gain[t.way][k]
	}
	return press[t.way][k] * e.gain[t.way][k] / pascalRef
}

// reciprocals stores 1/z, and 0 for 0, at which no level has a derivative.
func reciprocals(dst, z []complex128) {
	for k, v := range z {
		dst[k] = 0
		if square := real(v)*real(v) + imag(v)*imag(v); square > 0 {
			dst[k] = complex(real(v)/square, -imag(v)/square)
		}
	}
}

// column fills jac[v]: with z = |z|e^{jφ}, d ln|z| is the real part of dz/z and dφ the imaginary part.
func (e *evaluator) column(v int) {
	p, col := e.p, e.jac[v]
	value := math.Exp(e.x[v])
	ohm := e.coils.slope(v, e.x[v])
	control := p.vars[v].Control != ""
	for w, slope := range e.slope {
		clear(slope)
		if control {
			for i, rate := range p.rates(v, value) {
				e.sweep.AddGainGradient(slope, w, p.branches[v][i], rate)
			}
			continue
		}
		for _, b := range p.branches[v] {
			e.sweep.AddGainGradient(slope, w, b, value)
			if ohm > 0 {
				e.sweep.AddLossGradient(slope, w, b, ohm)
			}
		}
	}
	for i := range p.ears {
		e.addUp(e.dsum[i], i, e.slope)
	}
	row := 0
	clear(e.mean)
	for i := range p.terms {
		t := &p.terms[i]
		dz, inv := e.dsum[t.ear], e.invSum[t.ear]
		if t.way >= 0 {
			dz, inv = e.slope[t.way], e.inv[t.way]
		}
		for _, k := range t.at {
			d, u := dz[k], inv[k]
			c := dbPerNeper * (real(d)*real(u) - imag(d)*imag(u))
			col[row] = c
			e.mean[t.level] += t.weight * c
			row++
		}
	}
	for l := range e.mean {
		if e.total[l] > 0 {
			e.mean[l] /= e.total[l]
		}
	}
	if p.fixed {
		e.mean[0] = 0
	}
	row = 0
	for i := range p.terms {
		t := &p.terms[i]
		for range t.at {
			col[row] = e.root[row] * (col[row] - e.mean[t.level])
			row++
		}
	}
	e.phaseColumn(row, col)
}
