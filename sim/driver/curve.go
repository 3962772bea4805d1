package driver

import (
	"math"
	"math/cmplx"
	"sort"

	"gonum.org/v1/gonum/interp"
)

// A curve is a table made continuous: ln|H| and the unwrapped phase, each against ln f.
//
// Between rows it is Akima's piecewise cubic: H. Akima, "A New Method of Interpolation and Smooth Curve
// Fitting Based on Local Procedures", J. ACM 17(4), 589–602, 1970. It was chosen over straight lines because
// its slope is continuous, so a group delay has no steps; over a cubic spline because one bad row bends its
// neighbours and no others, and a step is not answered by ringing; and over a monotone cubic because that one
// cuts the top off a resonance whose peak falls between rows. A power law, such as a coil's rise, is a straight
// line in these coordinates and is met exactly.
//
// Outside the rows the mean slope of the nearest third of an octave carries on, which is an invention; the
// caller must say so.
type curve struct {
	lnMag, phase line // against ln f in Hz: ln of the magnitude, and rad
}

// newCurve makes a curve of rows: freqs in Hz, rising; lnMag the natural logarithms of the magnitudes; phase
// in rad, already unwrapped. steepest bounds the slope of ln|H| against ln f outside the rows; +Inf: no bound.
func newCurve(freqs, lnMag, phase []float64, steepest float64) curve {
	x := make([]float64, len(freqs))
	for i, f := range freqs {
		x[i] = math.Log(f)
	}
	c := curve{lnMag: newLine(x, lnMag), phase: newLine(x, phase)}
	c.lnMag.slopeLo = math.Max(-steepest, math.Min(steepest, c.lnMag.slopeLo))
	c.lnMag.slopeHi = math.Max(-steepest, math.Min(steepest, c.lnMag.slopeHi))
	return c
}

// polar returns ln|H| and the phase in rad at f in Hz.
func (c *curve) polar(f float64) (lnMag, phase float64) {
	x := math.Log(f)
	return c.lnMag.at(x), c.phase.at(x)
}

// A line is one quantity against x.
type line struct {
	cubic            interp.AkimaSpline
	lo, hi           float64 // first and last x
	first, last      float64 // the values there
	slopeLo, slopeHi float64 // outside
	least, most      float64 // bounds of the cubic, so that a wild table cannot overshoot without limit
}

// newLine fits x, strictly rising, and y.
func newLine(x, y []float64) line {
	n := len(x)
	l := line{lo: x[0], hi: x[n-1], first: y[0], last: y[n-1]}
	if n == 1 {
		return l
	}
	l.least, l.most = y[0], y[0]
	for _, v := range y {
		l.least, l.most = math.Min(l.least, v), math.Max(l.most, v)
	}
	// A smooth peak between rows lies a little above both, hence the margin; 0.35 is 3 dB in nepers.
	margin := math.Min(0.35, l.most-l.least)
	l.least -= margin
	l.most += margin
	_ = l.cubic.Fit(x, y) // documented never to fail on rising x
	third := math.Min(math.Ln2/3, l.hi-l.lo)
	l.slopeLo = (l.at(l.lo+third) - l.first) / third
	l.slopeHi = (l.last - l.at(l.hi-third)) / third
	return l
}

// at returns the quantity at x. It allocates nothing.
func (l *line) at(x float64) float64 {
	switch {
	case x <= l.lo:
		return l.first + l.slopeLo*(x-l.lo)
	case x >= l.hi:
		return l.last + l.slopeHi*(x-l.hi)
	}
	return math.Max(l.least, math.Min(l.most, l.cubic.Predict(x)))
}

// unwrap returns phases in rad of the given angles in degrees, each within half a turn of the one before it,
// and the indices of rows where the turn from the row before is more than three eighths: there the way round is
// a guess.
func unwrap(deg []float64) (rad []float64, doubtful []int) {
	const tooFar = 0.75 * math.Pi
	rad = make([]float64, len(deg))
	for i, d := range deg {
		r := math.Mod(d, 360) * math.Pi / 180
		if i > 0 {
			r += 2 * math.Pi * math.Round((rad[i-1]-r)/(2*math.Pi))
			if math.Abs(r-rad[i-1]) > tooFar {
				doubtful = append(doubtful, i)
			}
		}
		rad[i] = r
	}
	return rad, doubtful
}

// polarRect returns the complex number of a given ln of its magnitude and phase, the magnitude kept between
// e^±700, so that it is finite and not 0 however far a slope has been carried on.
func polarRect(lnMag, phase float64) complex128 {
	return cmplx.Rect(math.Exp(math.Max(-700, math.Min(700, lnMag))), phase)
}

// rising sorts rows by frequency, those of equal frequency staying in order.
func rising(rows []Row) {
	sort.SliceStable(rows, func(i, j int) bool { return rows[i].Frequency < rows[j].Frequency })
}
