package discrete

import (
	"math"
	"math/cmplx"

	"sixdown/sim/circuit"
)

const (
	latency = 16 // samples between the input and the answer to it; what the taps before it are for is the band's edge
	taps    = 20 // on the input, at most

	// floor is the gain, -60 dB, below which errors count in absolute terms.
	floor = 1e-3
	// counted is the gain, -50 dB, from which on errors are reported.
	counted = 0.0031622776601683794
	// beyond is the weight from the band's edge to corner, a part of the rate, and atCorner that from there to half the
	// rate, where no filter of this kind can follow the network: enough that the gain stays in bounds.
	beyond   = 1e-2
	corner   = 0.42
	atCorner = 3e-4
	// ridge bounds the factors where terms can stand in for each other.
	ridge = 1e-9
)

// A fit finds the factors of the terms for one network at one rate.
type fit struct {
	sections []section
	terms    []term
	omega    []float64      // rad/sample, rising; fitted at every third, checked at all
	band     int            // omega[:band] is the band that counts
	gain     [][]complex128 // per frequency and output, the network's with the latency
	basis    [][]complex128 // per frequency and term
}

// newFit computes the network's gain and that of all terms over a grid.
func newFit(ss *circuit.StateSpace, poles []complex128, rate, top float64) *fit {
	f := &fit{sections: newSections(poles, rate)}
	f.terms = newTerms(f.sections, taps)
	f.omega, f.band = grid(poles, rate, top)
	s := make([]complex128, len(f.omega))
	f.gain = make([][]complex128, len(s))
	f.basis = make([][]complex128, len(s))
	w := make([]complex128, len(f.sections))
	for i, o := range f.omega {
		s[i] = complex(0, o*rate)
		f.gain[i] = make([]complex128, ss.Outputs())
		f.basis[i] = make([]complex128, len(f.terms))
		termGains(f.basis[i], w, f.sections, f.terms, latency, o)
	}
	ss.Responses(f.gain, s)
	for i, o := range f.omega {
		late := cmplx.Rect(1, -o*latency)
		for k := range f.gain[i] {
			f.gain[i][k] *= late
		}
	}
	return f
}

// grid is where the fit looks, in rad/sample: log-spaced from below the lowest pole up, and then crowded toward the
// top of the band, as the nodes of a polynomial must be if it is not to swing at the end; some points follow up to half the rate.
func grid(poles []complex128, rate, top float64) (omega []float64, band int) {
	low := 10.0
	for _, p := range poles {
		low = min(low, 0.2*cmplx.Abs(p)/(2*math.Pi))
	}
	low = max(low, 1e-3)
	const (
		ratio = 1.015
		upper = 360
		above = 72
	)
	split := top / 10
	for f := low; f < split; f *= ratio {
		omega = append(omega, f)
	}
	for i := range upper {
		omega = append(omega, split+(top-split)*math.Sin(math.Pi/2*float64(i)/(upper-1)))
	}
	band = len(omega)
	for i := range above {
		omega = append(omega, top+(rate/2-top)*float64(i+1)/above)
	}
	for i := range omega {
		omega[i] *= 2 * math.Pi / rate
	}
	return omega, band
}

// weights are the weights of output k over the grid.
func (f *fit) weights(k int) []float64 {
	peak := 0.0
	for _, g := range f.gain[:f.band] {
		peak = max(peak, cmplx.Abs(g[k]))
	}
	w := make([]float64, len(f.omega))
	if peak == 0 {
		return w
	}
	for i, g := range f.gain {
		w[i] = 1 / max(cmplx.Abs(g[k]), floor*min(1, peak))
		switch {
		case i < f.band:
		case f.omega[i] < 2*math.Pi*corner:
			w[i] *= beyond
		default:
			w[i] *= atCorner
		}
	}
	return w
}

// A choice is the factors of the terms of one output, and how far its gain is off.
type choice struct {
	terms   []int // into fit.terms
	factors []float64
	db, deg float64 // largest error in the band where the gain is above counted
}

// choose finds, for output k, the fewest terms that keep the error below limits: starting from all, it leaves out, again and again,
// the one that is missed least, and takes the last set that is good enough; the set with the smallest error if none is.
func (f *fit) choose(k int, limitDB, limitDeg float64, rate float64) choice {
	weights := f.weights(k)
	n := len(f.terms)
	points := (len(f.omega) + 2) / 3
	s := newSystem(2*points+n, n)
	for p := range points {
		i := 3 * p
		w := complex(weights[i], 0)
		for j, b := range f.basis[i] {
			s.columns[j][2*p], s.columns[j][2*p+1] = real(w*b), imag(w*b)
		}
		s.rhs[2*p], s.rhs[2*p+1] = real(w*f.gain[i][k]), imag(w*f.gain[i][k])
	}
	scale := make([]float64, n)
	for j, c := range s.columns {
		scale[j] = norm(c)
		if scale[j] == 0 {
			scale[j] = 1 // an output that is silent
		}
		for i := range c {
			c[i] /= scale[j]
		}
		c[2*points+j] = ridge
	}
	t := s.reduce()
	left := upTo(n)
	var sets []choice
	// A mean square error of the limit everywhere is far beyond it somewhere.
	enough := math.Sqrt(float64(points)) * (math.Pow(10, limitDB/20) - 1)
	for {
		x, growth := t.solve()
		set := choice{terms: append([]int(nil), left...), factors: x}
		for i, j := range left {
			set.factors[i] /= scale[j]
		}
		sets = append(sets, set)
		if len(left) == 0 || t.rest > enough {
			break
		}
		least := 0
		for i, g := range growth {
			if g < growth[least] {
				least = i
			}
		}
		t.drop(least)
		left = append(left[:least], left[least+1:]...)
	}
	best := -1
	for i := len(sets) - 1; i >= 0; i-- {
		set := &sets[i]
		set.db, set.deg = f.error(k, *set, rate)
		if set.db <= limitDB && set.deg <= limitDeg {
			return *set
		}
		if best < 0 || set.db/limitDB+set.deg/limitDeg < sets[best].db/limitDB+sets[best].deg/limitDeg {
			best = i
		}
	}
	return sets[best]
}

// error is the largest error of output k in dB and in degrees, over the band from 20 Hz up where its gain is above counted.
func (f *fit) error(k int, c choice, rate float64) (db, deg float64) {
	from := 2 * math.Pi * 20 / rate
	for i, g := range f.gain[:f.band] {
		if f.omega[i] < from || cmplx.Abs(g[k]) < counted {
			continue
		}
		sum := complex(0, 0)
		for m, j := range c.terms {
			sum += complex(c.factors[m], 0) * f.basis[i][j]
		}
		ratio := sum / g[k]
		db = max(db, math.Abs(20*math.Log10(cmplx.Abs(ratio))))
		deg = max(deg, math.Abs(cmplx.Phase(ratio))*180/math.Pi)
	}
	return db, deg
}

// upTo is 0 … n-1.
func upTo(n int) []int {
	s := make([]int, n)
	for i := range s {
		s[i] = i
	}
	return s
}
