package driver

import (
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/mat"
)

// A point is a row of the table as the fit sees it.
type point struct {
	w      float64    // rad/s
	z      complex128 // Ω
	weight float64    // share of the log-frequency axis; the mean is 1
}

// A search fits models to points. What a model misses at a point is ln(Z/Z measured), whose real part is the
// relative error of |Z| and whose imaginary part is the error of the angle: per cents weigh alike wherever
// they are.
type search struct {
	points []point
	band   [2]float64 // rad/s, first and last
	ohm    float64    // the lowest |Z|
	small  float64    // a search ends when a step takes less than this share off the sum,
	enough float64    // or when the sum is down to this

	v      []float64
	d      []complex128
	jac    [][]float64 // a column an unknown, the real parts and then the imaginary parts
	miss   []float64
	normal *mat.SymDense
	down   []float64
	trial  []float64
}

// A fitted is a model where its search ended.
type fitted struct {
	*model
	sum float64 // Σ weight·|miss|²
}

// resolution is the error that no table is free of, and below which it is not worth a further element: the last
// digit of a table printed to four figures.
const resolution = 1e-4

// score is Schwarz's criterion: the lower, the more the data speak for the model.
//
// G. Schwarz, "Estimating the Dimension of a Model", Ann. Statist. 6(2), 461–464, 1978.
func (s *search) score(f fitted) float64 {
	n := float64(2 * len(s.points))
	return n*math.Log(f.sum/n+resolution*resolution) + float64(f.size())*math.Log(n)
}

// look stores what m misses, and if jac is asked for the derivatives; it returns Σ weight·|miss|².
func (s *search) look(m *model, jac bool) float64 {
	n := m.size()
	if cap(s.v) < n {
		s.v, s.d = make([]float64, n), make([]complex128, n)
	}
	v, d := s.v[:n], s.d[:n]
	m.values(v)
	sum, rows := 0.0, len(s.points)
	for i := range s.points {
		p := &s.points[i]
		z := m.impedance(v, p.w, d)
		miss := cmplx.Log(z / p.z)
		sum += p.weight * (real(miss)*real(miss) + imag(miss)*imag(miss))
		if !jac {
			continue
		}
		root := math.Sqrt(p.weight)
		s.miss[i], s.miss[rows+i] = root*real(miss), root*imag(miss)
		scale := complex(root, 0) / z
		for k, dk := range d {
			dk *= scale
			s.jac[k][i], s.jac[k][rows+i] = real(dk), imag(dk)
		}
	}
	return sum
}

// equations sets the normal equations of the present look: JᵀJ, and Jᵀ·miss in down.
func (s *search) equations(n int) {
	s.normal = mat.NewSymDense(n, nil)
	for i := range n {
		for j := i; j < n; j++ {
			s.normal.SetSym(i, j, dot(s.jac[i], s.jac[j]))
		}
		s.down[i] = dot(s.jac[i], s.miss)
	}
}

func dot(a, b []float64) float64 {
	b = b[:len(a)]
	var s0, s1, s2, s3 float64 // four sums, so that none waits for the one before
	for len(a) >= 4 && len(b) >= 4 {
		s0 += a[0] * b[0]
		s1 += a[1] * b[1]
		s2 += a[2] * b[2]
		s3 += a[3] * b[3]
		a, b = a[4:], b[4:]
	}
	for i := range a {
		s0 += a[i] * b[i]
	}
	return (s0 + s1) + (s2 + s3)
}

// fit searches from m, which it keeps.
//
// D. W. Marquardt, "An Algorithm for Least-Squares Estimation of Nonlinear Parameters", J. SIAM 11(2), 431–441,
// 1963; the damping follows H. B. Nielsen, "Damping Parameter in Marquardt's Method", IMM-REP-1999-05, Technical
// University of Denmark, 1999. Steps are bounded to a factor of e, and values to what a driver can have.
func (s *search) fit(m *model, most int) fitted {
	n := m.size()
	for len(s.jac) < n {
		s.jac = append(s.jac, make([]float64, 2*len(s.points)))
	}
	if s.miss == nil {
		s.miss = make([]float64, 2*len(s.points))
	}
	if len(s.down) < n {
		s.down, s.trial = make([]float64, n), make([]float64, n)
	}
	lo, hi := s.bounds(m)
	for i := range m.p {
		m.p[i] = math.Max(lo[i], math.Min(hi[i], m.p[i]))
	}
	next := m.clone()
	damp, grow := 1e-3, 2.0
	sum := s.look(m, true)
	s.equations(n)
	for range most {
		step := s.step(n, damp)
		if step == nil {
			damp *= grow
			grow *= 2
			continue
		}
		longest, promised := 0.0, 0.0
		for i, d := range step {
			d = math.Max(-1, math.Min(1, d))
			next.p[i] = math.Max(lo[i], math.Min(hi[i], m.p[i]+d))
			longest = math.Max(longest, math.Abs(next.p[i]-m.p[i]))
			promised += step[i] * (damp*s.normal.At(i, i)*step[i] - s.down[i])
		}
		if longest < 1e-9 {
			break
		}
		now := s.look(next, false)
		if !(now < sum) {
			if damp *= grow; damp > 1e12 {
				break
			}
			grow *= 2
			continue
		}
		gained := sum - now
		copy(m.p, next.p)
		sum = s.look(m, true)
		s.equations(n)
		if gained < s.small*sum || sum < s.enough {
			break
		}
		damp *= math.Max(1.0/3, 1-math.Pow(2*gained/promised-1, 3))
		grow = 2
	}
	return fitted{m, sum}
}

// step solves the damped equations; nil if they have no solution. The slice is the search's own.
func (s *search) step(n int, damp float64) []float64 {
	a := mat.NewSymDense(n, nil)
	a.CopySym(s.normal)
	for i := range n {
		// An unknown without effect keeps a pivot.
		a.SetSym(i, i, s.normal.At(i, i)*(1+damp)+1e-14)
	}
	var c mat.Cholesky
	if !c.Factorize(a) {
		return nil
	}
	step := mat.NewVecDense(n, s.trial[:n])
	if err := c.SolveVecTo(step, mat.NewVecDense(n, s.down[:n])); err != nil && math.IsNaN(step.AtVec(0)) {
		return nil
	}
	step.ScaleVec(-1, step)
	return s.trial[:n]
}

// bounds returns the limits of m's unknowns.
func (s *search) bounds(m *model) (lo, hi []float64) {
	set := func(min, max float64) {
		lo, hi = append(lo, math.Log(min)), append(hi, math.Log(max))
	}
	ohm, w0, w1 := s.ohm, s.band[0], s.band[1]
	coil := func() { set(1e-4*ohm/w1, 100*ohm/w0) } // H
	set(0.01*ohm, 10*ohm)
	switch m.coil {
	case PlainCoil, OneLoss, TwoLosses:
		coil()
		for k := 2; k < m.bodyAt(); k += 2 {
			set(1e-4*ohm, 1e4*ohm)
			coil()
		}
	case SemiInductance:
		set(1e-5*ohm, 1e4*ohm)
		lo, hi = append(lo, -3), append(hi, 7) // n from 0.047 to 0.999
	}
	resonance := func(leastQ, mostQ float64) {
		set(w0/4, w1*2)
		set(1e-4*ohm, 1e4*ohm)
		set(leastQ, mostQ)
	}
	switch m.body {
	case single, vented:
		resonance(0.05, 1000)
	}
	if m.body == vented {
		set(w0/4, w1*2)
		set(0.01, 1000)
		set(0.3, 1000)
	}
	sharpest := math.Max(2*float64(len(s.points)-1)/math.Log(w1/w0), 1)
	for range m.extras {
		resonance(0.5, sharpest) // below, it resonates no more; above, it would be less than half a row wide
	}
	return lo, hi
}
