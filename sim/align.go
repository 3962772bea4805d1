package sim

import (
	"math"
	"math/cmplx"
	"slices"
)

// An Alignment says how well two ways are in step around a crossing, and what would bring them nearer.
//
// Which polarity is meant is as the design wires it. A phase difference is of High relative to Low; apart means how
// many degrees it is off whole turns, from 0 to 180. To reverse is to turn the wires of every way in Upper, or of
// every way in Lower, which does the same.
type Alignment struct {
	Crossing
	Lower, Upper []string   // every way is on one side of the crossing or the other
	OneTimeBase  bool       // of the two ways' drivers, as System.OneTimeBase; if not, nothing that follows of phases means anything
	Band         [2]float64 // Hz, around the crossing, in which both ways are within 12 dB of the sum or above it

	Freqs         []float64 // Hz, 48 points an octave over Band; one frequency if Band is no more
	DifferenceDeg []float64 // at each of Freqs, without jumps, in (-180, 180] at the crossing

	MeanDeg  float64 // apart, mean over the log frequency of Band
	LeastDeg float64 // apart, at the best place of Band
	WorstDeg float64 // apart, at the worst place of Band
	WorstAt  float64 // Hz, among Freqs

	Null    Hole // what becomes of the sum if one side is reversed: the better in step, the deeper
	AsWired Hole // the other way about: how deep the sum is as it is, relative to the sum with one side reversed

	ReversedIsBetter bool   // what the two give together over Band is more with one side reversed
	Best             LineUp // what would line them up best
	Lobe             Lobe
}

// A Hole is where one of two sums is lowest relative to the other within an Alignment's Band.
type Hole struct {
	DepthDB   float64 // the one relative to the other; -Inf for silence, above 0 where there is no hole
	Frequency float64 // Hz
}

// A LineUp is a polarity and a delay of one side of a crossing.
type LineUp struct {
	Reversed bool    // one side of the crossing turned
	Delay    float64 // s, of the ways in Upper; negative: of those in Lower
	Offset   float64 // m, that much farther from the ear than now
	MeanDeg  float64 // apart then, mean over the log frequency of Band
	WorstDeg float64 // apart then, at the worst place of Band
}

// withinDB is how far below the sum a way may be to have a say in it: 12 dB, which moves the sum by some 2 dB at most
// as its phase turns. Common practice, no source.
const withinDB = 12

// Alignment tells about every crossing that Summary finds in band, in the same order; nil if there is no sum. Frequencies
// and angles are refined from a grid, so that they do not depend on it.
func (s *System) Alignment(band [2]float64) ([]Alignment, error) {
	band, err := summaryBand(band)
	if err != nil || !s.Sums() {
		return nil, err
	}
	r, err := s.Predict(logGrid(band))
	if err != nil {
		return nil, err
	}
	crossings, err := s.crossings(r)
	if err != nil {
		return nil, err
	}
	as := make([]Alignment, len(crossings))
	if len(as) == 0 {
		return as, nil
	}
	fan, err := s.newFan()
	if err != nil {
		return nil, err
	}
	for k, c := range crossings {
		lower, err := s.lower(crossings, k)
		if err != nil {
			return nil, err
		}
		if as[k], err = s.align(c, lower, r); err != nil {
			return nil, err
		}
		rose, err := fan.at(c.Frequency)
		if err != nil {
			return nil, err
		}
		if as[k].Lobe, err = rose.lobe(); err != nil {
			return nil, err
		}
		as[k].Lobe.Warnings = fan.notes
	}
	return as, nil
}

// lower reports for each way whether it is on the lower side of crossing k: if it led up to there, or, for a way that
// never leads, if it is louder an octave below than an octave above.
func (s *System) lower(crossings []Crossing, k int) ([]bool, error) {
	f := crossings[k].Frequency
	below, err := s.at(f / 2)
	if err != nil {
		return nil, err
	}
	above, err := s.at(f * 2)
	if err != nil {
		return nil, err
	}
	lower := make([]bool, len(s.names))
	for i := range lower {
		lower[i] = cmplx.Abs(below.p[i]) > cmplx.Abs(above.p[i])
	}
	for j, c := range crossings {
		lower[slices.Index(s.names, c.High)] = j < k
	}
	// A way that leads twice counts by where it is nearest.
	for j := k; j >= 0; j-- {
		lower[slices.Index(s.names, crossings[j].Low)] = true
	}
	lower[slices.Index(s.names, crossings[k].High)] = false
	return lower, nil
}

// align looks at the crossing c but for the Lobe; r is a Response over the whole band.
func (s *System) align(c Crossing, lower []bool, r *Response) (Alignment, error) {
	a := Alignment{Crossing: c}
	for i, name := range s.names {
		if lower[i] {
			a.Lower = append(a.Lower, name)
		} else {
			a.Upper = append(a.Upper, name)
		}
	}
	low, high := slices.Index(s.names, c.Low), slices.Index(s.names, c.High)
	a.OneTimeBase = s.oneTimeBase(func(way int) bool { return way == low || way == high })
	var err error
	if a.Band, err = s.overlap(low, high, c.Frequency, r); err != nil {
		return Alignment{}, err
	}
	a.Freqs = []float64{c.Frequency}
	if a.Band[1] > a.Band[0] {
		a.Freqs = logGrid(a.Band)
	}
	q, err := s.Predict(a.Freqs)
	if err != nil {
		return Alignment{}, err
	}
	pair := newPair(q, low, high)
	a.setDifference(pair)
	a.ReversedIsBetter = pair.together(0) < 0
	a.Best = pair.lineUp(c.Frequency)
	a.Best.Offset = a.Best.Delay * s.listener.SoundSpeed

	if a.Null, err = s.hole(q, lower, false); err != nil {
		return Alignment{}, err
	}
	a.AsWired, err = s.hole(q, lower, true)
	return a, err
}

// overlap returns from where to where around f both ways are within withinDB of the sum, no farther than r goes.
func (s *System) overlap(low, high int, f float64, r *Response) (band [2]float64, err error) {
	spare := func(a, b, sum complex128) float64 {
		return min(cmplx.Abs(a), cmplx.Abs(b)) - cmplx.Abs(sum)*math.Pow(10, -withinDB/20.0)
	}
	spareAt := func(f float64) (float64, error) {
		a, b, sum, err := s.pair(low, high, f)
		return spare(a, b, sum), err
	}
	band = [2]float64{f, f}
	if here, err := spareAt(f); err != nil || here < 0 {
		return band, err // a third way is that much louder
	}
	above, _ := slices.BinarySearch(r.Freqs, f)
	for side, step := range [2]int{-1, 1} {
		k := above
		if step < 0 {
			k--
		}
		for ; k >= 0 && k < len(r.Freqs) && spare(r.Ways[low].P[k], r.Ways[high].P[k], r.Sum[k]) >= 0; k += step {
			band[side] = r.Freqs[k]
		}
		if k < 0 || k >= len(r.Freqs) {
			continue
		}
		if band[side], err = root(min(band[side], r.Freqs[k]), max(band[side], r.Freqs[k]), spareAt); err != nil {
			return band, err
		}
	}
	return band, nil
}

// hole finds where the sum with one side reversed is lowest relative to the sum as it is; for asWired the sum as it
// is relative to that with one side reversed. q is over the band to look in.
func (s *System) hole(q *Response, lower []bool, asWired bool) (Hole, error) {
	depth := func(p func(way int) complex128) float64 {
		var sides [2]complex128
		for i := range lower {
			if lower[i] {
				sides[0] += p(i)
			} else {
				sides[1] += p(i)
			}
		}
		reversed, sum := cmplx.Abs(sides[0]-sides[1]), cmplx.Abs(sides[0]+sides[1])
		if asWired {
			return sum / reversed
		}
		return reversed / sum
	}
	at := func(f float64) (float64, error) {
		in, err := s.at(f)
		if err != nil {
			return 0, err
		}
		return depth(func(i int) complex128 { return in.p[i] }), nil
	}
	depths := make([]float64, len(q.Freqs))
	best := 0
	for k := range q.Freqs {
		if depths[k] = depth(func(i int) complex128 { return q.Ways[i].P[k] }); depths[k] < depths[best] {
			best = k
		}
	}
	found, value := q.Freqs[best], depths[best]
	if lo, hi := q.Freqs[max(best-1, 0)], q.Freqs[min(best+1, len(q.Freqs)-1)]; lo < hi {
		f, err := minimum(lo, hi, at)
		if err != nil {
			return Hole{}, err
		}
		v, err := at(f)
		if err != nil {
			return Hole{}, err
		}
		if v < value {
			found, value = f, v
		}
	}
	return Hole{DepthDB: 20 * math.Log10(value), Frequency: found}, nil
}

// setDifference fills in the curve of the phase difference and its figures.
func (a *Alignment) setDifference(p *pair) {
	a.DifferenceDeg = UnwrappedDeg(p.product)
	here, _ := slices.BinarySearch(a.Freqs, a.Frequency)
	here = min(here, len(a.Freqs)-1)
	turns := 360 * math.Round((a.PhaseDeg-a.DifferenceDeg[here])/360)
	for k := range a.DifferenceDeg {
		a.DifferenceDeg[k] += turns
	}
	apart := p.apart(1, 0)
	a.MeanDeg = mean(apart)
	a.LeastDeg = slices.Min(apart)
	worst := 0
	for k := range apart {
		if apart[k] > apart[worst] {
			worst = k
		}
	}
	a.WorstDeg, a.WorstAt = apart[worst], a.Freqs[worst]
}

func mean(v []float64) float64 {
	sum := 0.0
	for _, x := range v {
		sum += x
	}
	return sum / float64(len(v))
}
