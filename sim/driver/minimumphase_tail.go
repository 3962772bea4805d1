package driver

import (
	"fmt"
	"math"

	"gonum.org/v1/gonum/mat"
)

// A tail carries ln|H| on beyond an end of its table.
//
// Far below its lowest corner the ln|H| of any network of lumped parts, as any mass-spring system is, is a
// constant plus n·ln f plus a power series in f², n a whole number; far above the highest one the same in 1/f². So the
// fit to the octave nearest the end is a straight line in ln f with up to two terms of that series. A term is
// taken in only if an F-test says that the data ask for it; a noisy table gets the line alone. The slope is not
// rounded to a whole number: what a microphone and a window did to it is in the data too.
type tail struct {
	edge, level float64    // ln f of the table's end, and ln|H| there
	slope       float64    // of ln|H| against the distance |x - edge|, far out
	bend        [2]float64 // of e^{-2|x - edge|} and of its square
}

const (
	steepestTail = 16  // 96 dB an octave; a converter's filter at the end of a table is steeper, and ends soon
	mostBending  = 1.5 // the most that the slope may change beyond the table, 9 dB an octave
	tailSamples  = 192
)

// newTail fits the tail at the lower (side -1) or the upper (+1) end of a magnitude with rows at x, rising.
func newTail(l *line, x []float64, side float64) tail {
	t := tail{edge: l.hi, level: l.last}
	if side < 0 {
		t.edge, t.level = l.lo, l.first
	}
	span := math.Min(math.Ln2, l.hi-l.lo)
	if span == 0 {
		return t
	}
	rows := 0
	for _, v := range x {
		if math.Abs(v-t.edge) <= span {
			rows++
		}
	}
	if rows < 3 { // of a table with rows an octave apart or so
		rows = min(3, len(x))
		span = math.Abs(x[rows-1] - t.edge)
		if side > 0 {
			span = math.Abs(x[len(x)-rows] - t.edge)
		}
	}
	// Samples of the curve, not its rows: they count alike in ln f, however close the rows are.
	d, y := make([]float64, tailSamples+1), make([]float64, tailSamples+1)
	for i := range d {
		d[i] = span * float64(i) / tailSamples
		y[i] = l.at(t.edge-side*d[i]) - t.level
	}
	c, left := fitTail(d, y, 2)
	// The F that a term must reach: by chance in one table of a hundred for the first; the second can do more harm.
	for k, askedFor := range [2]float64{8, 40} {
		terms := 3 + k
		if rows < terms+3 || span < math.Ln2 {
			break
		}
		more, less := fitTail(d, y, terms)
		if !(left-less > askedFor*less/float64(min(rows, tailSamples)-terms)) {
			break
		}
		if math.Abs(2*more[2]+4*more[3]) <= mostBending && math.Abs(more[1]) <= steepestTail {
			c, left = more, less
		}
	}
	t.slope = math.Max(-steepestTail, math.Min(steepestTail, c[1]))
	t.bend = [2]float64{c[2], c[3]}
	return t
}

// fitTail fits y ≈ c0 - c1·d + c2·e^{2d} + c3·e^{4d} with the first few terms, by least squares, and returns the
// coefficients and the sum of the squares that is left.
func fitTail(d, y []float64, terms int) (c [4]float64, left float64) {
	term := func(d float64, k int) float64 {
		switch k {
		case 0:
			return 1
		case 1:
			return -d
		}
		return math.Exp(float64(2*k-2) * d)
	}
	a := mat.NewDense(len(d), terms, nil)
	for i, v := range d {
		for k := range terms {
			a.Set(i, k, term(v, k))
		}
	}
	var x mat.VecDense
	if err := x.SolveVec(a, mat.NewVecDense(len(y), y)); err != nil {
		return c, math.Inf(1)
	}
	for k := range terms {
		c[k] = x.AtVec(k)
	}
	for i, v := range d {
		r := y[i]
		for k := range terms {
			r -= c[k] * term(v, k)
		}
		left += r * r
	}
	return c, left
}

// at returns ln|H| at x, beyond the edge.
func (t *tail) at(x float64) float64 {
	d := math.Abs(x - t.edge)
	q := math.Exp(-2 * d)
	return t.level + t.slope*d + t.bend[0]*(q-1) + t.bend[1]*(q*q-1)
}

// say tells where the level goes.
func (t *tail) say() string {
	perOctave := t.slope * 20 * math.Log10(2)
	switch {
	case perOctave > 0.05:
		return fmt.Sprintf("rises by %.1f dB an octave", perOctave)
	case perOctave < -0.05:
		return fmt.Sprintf("falls by %.1f dB an octave", -perOctave)
	}
	return "stays level"
}
