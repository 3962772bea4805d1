package tune

import (
	"math"
	"math/cmplx"
	"slices"
)

// A dip is a minimum of |Zin| over the grid.
type dip struct {
	at    int       // index of loads
	ln    float64   // ln |Zin|
	slope []float64 // its derivative by each variable
}

// near is how much above the limit a dip is still watched: a step of the search may bring it below.
const near = 2.0

// setLoads makes freqs, in Hz and rising, the grid on which |Zin| is limited.
func (e *evaluator) setLoads(freqs []float64) (err error) {
	if e.load, err = e.p.newSweep(freqs, e.coils); err != nil {
		return err
	}
	e.loads, e.zin = freqs, make([]complex128, len(freqs))
	return nil
}

// watched is how near in ratio a frequency of the grid must be to count as the same.
const watched = 1e-4

// watches reports whether f, in Hz, is on the grid on which |Zin| is limited.
func (e *evaluator) watches(f float64) bool {
	return slices.ContainsFunc(e.loads, func(g float64) bool { return math.Abs(f/g-1) < watched })
}

// watch puts f, in Hz, on that grid.
func (e *evaluator) watch(f float64) error {
	at, _ := slices.BinarySearch(e.loads, f)
	for v := range e.x {
		e.x[v] = math.NaN() // so that set moves all values
	}
	return e.setLoads(slices.Insert(slices.Clone(e.loads), at, f))
}

// lowest returns ln of the least |Zin| over the grid at the present place, and +Inf where it is not limited.
func (e *evaluator) lowest() (float64, error) {
	if e.load == nil {
		return math.Inf(1), nil
	}
	if err := e.load.Solve(); err != nil {
		return 0, err
	}
	e.load.InputImpedance(e.zin)
	least := math.Inf(1)
	for _, z := range e.zin {
		least = min(least, cmplx.Abs(z))
	}
	return math.Log(least), nil
}

// dips returns the minima of |Zin| that are near the limit or below it, at the present place, for which lowest has been
// called.
func (e *evaluator) dips(limit float64) ([]dip, error) {
	var ds []dip
	for k, z := range e.zin {
		a := cmplx.Abs(z)
		if a > near*limit || k > 0 && cmplx.Abs(e.zin[k-1]) < a || k+1 < len(e.zin) && cmplx.Abs(e.zin[k+1]) <= a {
			continue
		}
		ds = append(ds, dip{at: k, ln: math.Log(a), slope: make([]float64, len(e.x))})
	}
	if len(ds) == 0 {
		return nil, nil
	}
	for v, branches := range e.p.branches {
		rates, ohm := e.p.rates(v, math.Exp(e.x[v])), e.coils.slope(v, e.x[v])
		for j, b := range branches {
			for i := range ds {
				k := ds[i].at
				slope, err := e.load.ImpedanceGradientAt(b, k)
				if err != nil {
					return nil, err
				}
				d := slope / e.zin[k]
				ds[i].slope[v] += rates[j]*real(d) + ohm*imag(d)/(2*math.Pi*e.loads[k]) // as of AddLossGradient
			}
		}
	}
	return ds, nil
}

// leastImpedance returns the least |Zin| in Ω from 20 Hz to 20 kHz and the frequency in Hz at which it is, refined between the
// points of a grid, for values by variable.
func (p *Problem) leastImpedance(x []float64, coils windings) (ohm, at float64, err error) {
	grid := logGrid(loadFrom, loadTo, loadGrid)
	z, err := p.impedance(x, coils, grid)
	if err != nil {
		return 0, 0, err
	}
	ohm = math.Inf(1)
	for k := range grid {
		if z[k] < ohm {
			ohm, at = z[k], grid[k]
		}
	}
	for k := range grid {
		lower := k > 0 && z[k-1] < z[k] || k+1 < len(grid) && z[k+1] < z[k]
		if lower || z[k] > 1.5*ohm { // what lies between two points is not a third lower
			continue
		}
		lo, hi := grid[max(k-1, 0)], grid[min(k+1, len(grid)-1)]
		// Finer grids in turn: each is as cheap as one question, since the circuit must be prepared for it.
		for hi/lo-1 > 1e-9 {
			fine := logGrid(lo, hi, 16/math.Log2(hi/lo))
			zf, err := p.impedance(x, coils, fine)
			if err != nil {
				return 0, 0, err
			}
			best := 0
			for i := range zf {
				if zf[i] < zf[best] {
					best = i
				}
			}
			if zf[best] < ohm {
				ohm, at = zf[best], fine[best]
			}
			lo, hi = fine[max(best-1, 0)], fine[min(best+1, len(fine)-1)]
		}
	}
	return ohm, at, nil
}

// impedance returns |Zin| in Ω over freqs.
func (p *Problem) impedance(x []float64, coils windings, freqs []float64) ([]float64, error) {
	s, err := p.newSweep(freqs, coils)
	if err != nil {
		return nil, err
	}
	for v, lnValue := range x {
		if err := p.move(s, coils, v, lnValue); err != nil {
			return nil, err
		}
	}
	if err := s.Solve(); err != nil {
		return nil, err
	}
	z := make([]complex128, len(freqs))
	s.InputImpedance(z)
	out := make([]float64, len(z))
	for i := range z {
		out[i] = cmplx.Abs(z[i])
	}
	return out, nil
}
