package driver

import (
	"math"

	"gonum.org/v1/gonum/dsp/fourier"
)

// A minimumPhase is the phase that goes with a magnitude in a system of minimum phase.
//
// H. W. Bode, Network Analysis and Feedback Amplifier Design, 1945, chapter XIV: at x0 = ln f0 it is
//
//	φ(x0) = (1/π) ∫ (d ln|H|/dx) ln coth(|x - x0|/2) dx
//
// over all frequencies, so what the magnitude does beyond the table's ends matters. That is fitted (type tail).
//
// The magnitude is taken to be straight between nodes much closer than the rows, so that its slope is constant
// there and straight beyond the last node. Each such piece is integrated in closed form, singularity and tails
// included: nothing is cut off, and nothing has to be smoothed. Nodes a 1/192 octave apart leave an error of
// (step)²/8 of the curvature of ln|H|, under a thousandth of a degree for second-order corners.
type minimumPhase struct {
	lnMag    line
	low, top tail
	phase    line       // rad
	far      [2]float64 // rad, toward DC and toward infinity: the slope times π/2
}

const (
	nodeStep  = math.Ln2 / 192 // of ln f
	mostNodes = 6000           // for tables of more than twenty octaves the step grows
	margin    = 4 * math.Ln2   // of ln f, how far beyond the table's ends the nodes go
)

// newMinimumPhase returns the minimum phase of a magnitude; rows is the x of its rows, rising.
func newMinimumPhase(lnMag line, rows []float64) *minimumPhase {
	m := &minimumPhase{lnMag: lnMag}
	m.low, m.top = newTail(&m.lnMag, rows, -1), newTail(&m.lnMag, rows, +1)
	m.far = [2]float64{-m.low.slope * math.Pi / 2, m.top.slope * math.Pi / 2}

	from, to := lnMag.lo-margin, lnMag.hi+margin
	n := min(int(math.Ceil((to-from)/nodeStep)), mostNodes) + 1
	step := (to - from) / float64(n-1)
	x, y := make([]float64, n), make([]float64, n)
	for i := range x {
		x[i] = from + step*float64(i)
		y[i] = m.magnitude(x[i])
	}
	m.phase = newLine(x, bode(y, step, -m.low.slope, m.top.slope))
	return m
}

// bode returns the minimum phase in rad at equally spaced nodes of x = ln f, of the ln|H| y that is straight
// between them and has the slopes below and above outside.
//
// Let M(t) be the integral of ln coth(|v|/2)/π over v from -∞ to t, A(t) = M(t) - π/4 its odd part. With s_i the
// slope from node i on, the integral over all pieces is, summed by parts,
//
//	φ(x_j) = (π/4)(below + above) + Σ_i (s_{i-1} - s_i) A(x_i - x_j),
//
// a convolution, which the fast Fourier transform does without approximation.
func bode(y []float64, step, below, above float64) []float64 {
	n := len(y)
	size := 1
	for size < 2*n {
		size *= 2
	}
	turns, kernel := make([]float64, size), make([]float64, size)
	last := below
	for i := range y {
		s := above
		if i+1 < n {
			s = (y[i+1] - y[i]) / step
		}
		turns[i] = last - s
		last = s
	}
	for k := 1; k < n; k++ {
		a := math.Pi/4 - 2/math.Pi*legendreChi2(math.Exp(-step*float64(k)))
		kernel[k], kernel[size-k] = -a, a // A(x_i - x_j), by j - i
	}
	fft := fourier.NewFFT(size)
	t, k := fft.Coefficients(nil, turns), fft.Coefficients(nil, kernel)
	for i := range t {
		t[i] *= k[i]
	}
	phase := fft.Sequence(turns, t)[:n]
	for i := range phase {
		phase[i] = math.Pi/4*(below+above) + phase[i]/float64(size)
	}
	return phase
}

// legendreChi2 returns Legendre's χ₂(x) = Σ x^k/k² over odd k, for 0 ≤ x ≤ 1; ∫ ln coth(v/2) dv from t > 0 to
// infinity is 2χ₂(e^-t). Above √2 - 1, where the series is slow, χ₂(x) + χ₂((1-x)/(1+x)) = π²/8 +
// ½ ln x ln((1+x)/(1-x)): L. Lewin, Polylogarithms and Associated Functions, 1981, section 1.8.
func legendreChi2(x float64) float64 {
	if x > math.Sqrt2-1 {
		if x == 1 {
			return math.Pi * math.Pi / 8
		}
		z := (1 - x) / (1 + x)
		return math.Pi*math.Pi/8 - math.Log(x)*math.Log(z)/2 - legendreChi2(z)
	}
	sum, power := 0.0, x
	for k := 1.0; power > 1e-17*sum; k += 2 { // 1/k² ≥ 1e-3 while this holds, so nothing is lost
		sum += power / (k * k)
		power *= x * x
	}
	return sum
}

// magnitude returns ln|H| at x = ln f.
func (m *minimumPhase) magnitude(x float64) float64 {
	switch {
	case x < m.lnMag.lo:
		return m.low.at(x)
	case x > m.lnMag.hi:
		return m.top.at(x)
	}
	return m.lnMag.at(x)
}

// angle returns the phase in rad at x. Beyond the nodes the rest of the way to the limit shrinks with the distance
// in octaves as the kernel's tail does, 2e^-|t|.
func (m *minimumPhase) angle(x float64) float64 {
	p := &m.phase
	switch {
	case x < p.lo:
		return m.far[0] + (p.first-m.far[0])*math.Exp(x-p.lo)
	case x > p.hi:
		return m.far[1] + (p.last-m.far[1])*math.Exp(p.hi-x)
	}
	return p.at(x)
}

// polar returns ln|H| and the phase in rad at f in Hz. It allocates nothing.
func (m *minimumPhase) polar(f float64) (lnMag, phase float64) {
	x := math.Log(f)
	return m.magnitude(x), m.angle(x)
}
