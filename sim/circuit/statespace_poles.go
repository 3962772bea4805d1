package circuit

import (
	"errors"
	"math"
	"math/cmplx"

	"gonum.org/v1/gonum/mat"
)

// A mode is one natural frequency, and how much of it an output can show.
type mode struct {
	pole  complex128
	share float64 // of the largest of all outputs' scales
}

// audible is the share of an output below which a mode is rounding: -180 dB.
const audible = 1e-9

// findModes gives the eigenvalues of A, slowest decay last.
func (ss *StateSpace) findModes() ([]mode, error) {
	n := ss.States()
	if n == 0 {
		return nil, nil
	}
	var eigen mat.Eigen
	if !eigen.Factorize(mat.NewDense(n, n, append([]float64(nil), ss.A...)), mat.EigenRight) {
		return nil, errors.New("circuit: the natural frequencies did not converge; bring the values of the parts nearer together")
	}
	var right mat.CDense
	eigen.VectorsTo(&right)
	poles := eigen.Values(nil)

	// The part of B along each eigenvector.
	m := make([]complex128, n*n)
	along := make([]complex128, n)
	for i := range n {
		along[i] = complex(ss.B[i], 0)
		for j := range n {
			m[i*n+j] = right.At(i, j)
		}
	}
	solveComplex(m, along)

	modes := make([]mode, n)
	for j, p := range poles {
		modes[j].pole = p
	}
	step := make([]float64, n) // what is left of a mode in the step response
	for k := range ss.D {
		scale := math.Abs(ss.D[k])
		for j, p := range poles {
			sum := complex(0, 0)
			for i := range n {
				sum += complex(ss.C[k*n+i], 0) * right.At(i, j)
			}
			step[j] = cmplx.Abs(sum*along[j]) / cmplx.Abs(p)
			if !(step[j] >= 0) || math.IsInf(step[j], 1) {
				step[j] = math.MaxFloat64 // eigenvectors of a multiple pole may coincide to the last digit
			}
			scale = max(scale, min(step[j], 1)) // a passive divider's gain is about 1 at most
		}
		if scale == 0 {
			continue
		}
		for j := range modes {
			modes[j].share = max(modes[j].share, step[j]/scale)
		}
	}
	return modes, nil
}

// Poles returns the natural frequencies in rad/s, pairs next to each other, those too that no output shows.
func (ss *StateSpace) Poles() []complex128 {
	poles := make([]complex128, len(ss.modes))
	for i, m := range ss.modes {
		poles[i] = m.pole
	}
	return poles
}

// HeardPoles returns the natural frequencies in rad/s of which an output shows more than 1e-9 of its size: those that
// a way that hangs on another, or one of two equal branches in parallel, may have to itself are left out.
func (ss *StateSpace) HeardPoles() []complex128 {
	var poles []complex128
	for _, m := range ss.modes {
		if m.share > audible {
			poles = append(poles, m.pole)
		}
	}
	return poles
}

// SlowestTime returns the time in s in which the slowest mode that an output shows decays to 1/e: 0 if there is
// none, +Inf if a mode is undamped (lossless coils and capacitors that resonate).
func (ss *StateSpace) SlowestTime() float64 {
	slowest := 0.0
	for _, p := range ss.HeardPoles() {
		if -real(p) <= undamped*cmplx.Abs(p) {
			return math.Inf(1)
		}
		slowest = max(slowest, -1/real(p))
	}
	return slowest
}

// undamped is the damping ratio below which a mode counts as without loss: rounding
// leaves about 1e-15 of a lossless one, and a Q of 1e11 is beyond any part.
const undamped = 1e-11
