package sim

import (
	"fmt"
	"math"
	"math/cmplx"
)

// A Summary is the few numbers that a builder looks for first.
type Summary struct {
	Band [2]float64 // Hz, what was looked at

	MinImpedance   float64 // Ω, the lowest |Zin| in Band; infinite if no current flows at all
	MinImpedanceAt float64 // Hz; 0 then
	MinEPDR        float64 // Ω, the lowest EPDR in Band
	MinEPDRAt      float64 // Hz

	Warnings  []string     // what these answers invent, a sentence each
	Crossings []Crossing   // where the lead passes from one way to another, rising
	Sum       *SumSummary  // nil unless every way has an acoustic output
	Tone      *ToneSummary // nil for a loudspeaker
}

// A Crossing is where two neighbouring ways are equally loud: at the ear if every way has an acoustic output,
// else at their drivers' terminals.
type Crossing struct {
	Low, High string  // the way that leads below, and the one that leads above
	Frequency float64 // Hz
	LevelDB   float64 // of each of them, dB re the sum; without a sum the gain, dB re open circuit
	PhaseDeg  float64 // of High relative to Low, in (-180, 180]
}

// A SumSummary is about the sum over Band, the design's tune band; means are over log frequency.
type SumSummary struct {
	Band     [2]float64 // Hz
	MeanSPL  float64    // dB, mean of the levels in dB
	RippleDB float64    // the highest level less the lowest
	RMSDB    float64    // rms deviation from MeanSPL
	Low3DB   float64    // Hz: coming up from the lower end of the Summary's Band, where the sum first is within 3.01 dB of MeanSPL; 0: at that end already
	High3DB  float64    // Hz: the same coming down from the upper end
	DipDB    float64    // how far below MeanSPL the sum is at its lowest between the two, if that is more than 3.01 dB; else 0
	DipAt    float64    // Hz, on a grid of 48 points an octave
}

// A ToneSummary is the tone network's gain in third-octave steps.
type ToneSummary struct {
	Freqs           []float64 // Hz, exact mid-band frequencies of IEC 61260-1, 1000·10^(k/10), within the Summary's Band
	GainDB          []float64 // output over the open-circuit source
	InsertionLossDB []float64 // how much lower the output is than with the source straight on the load
}

// gridPerOctave is how finely a band is looked over before what was found is refined.
const gridPerOctave = 48

// halfPower is 10·lg 2.
const halfPower = 3.0102999566398120

// Summary looks over band, from and to in Hz; a zero band is 20 Hz to 20 kHz. Frequencies that it gives are
// refined from a grid of 48 points an octave, crossings to the last few digits, minima to some 1e-8, so that they
// do not depend on it.
func (s *System) Summary(band [2]float64) (*Summary, error) {
	band, err := summaryBand(band)
	if err != nil {
		return nil, err
	}
	r, err := s.Predict(logGrid(band))
	if err != nil {
		return nil, err
	}
	sum := &Summary{Band: band, Warnings: r.Warnings}
	sum.MinImpedance, sum.MinImpedanceAt, err = s.lowest(r, func(z complex128) float64 { return cmplx.Abs(z) })
	if err != nil {
		return nil, err
	}
	sum.MinEPDR, sum.MinEPDRAt, err = s.lowest(r, EPDR)
	if err != nil {
		return nil, err
	}
	if s.tone != nil {
		sum.Tone, err = s.summarizeTone(band)
		return sum, err
	}
	if sum.Crossings, err = s.crossings(r); err != nil {
		return nil, err
	}
	if s.Sums() {
		if sum.Sum, err = s.summarizeSum(r); err != nil {
			return nil, err
		}
	}
	return sum, nil
}

// summaryBand returns the band that a zero one stands for, and checks any other.
func summaryBand(band [2]float64) ([2]float64, error) {
	if band == [2]float64{} {
		band = [2]float64{20, 20e3}
	}
	if !(band[0] > 0 && band[1] > band[0]) || math.IsInf(band[1], 1) {
		return band, fmt.Errorf("summary: the band is %g Hz to %g Hz; give two rising positive frequencies", band[0], band[1])
	}
	return band, nil
}

// logGrid returns frequencies from band[0] to band[1], equally spaced in log frequency, gridPerOctave or a
// little more to the octave.
func logGrid(band [2]float64) []float64 {
	n := int(math.Ceil(gridPerOctave*math.Log2(band[1]/band[0]))) + 1
	n = max(n, 2)
	freqs := make([]float64, n)
	for i := range freqs {
		freqs[i] = band[0] * math.Pow(band[1]/band[0], float64(i)/float64(n-1))
	}
	freqs[n-1] = band[1]
	return freqs
}

// nearLowest is how far in ratio above the lowest point of a grid another dip is looked into: what lies between two points of it may
// be that much lower.
const nearLowest = 1.5

// lowest returns the lowest value of what size makes of the input impedance, and where it is: every dip of the grid that may hold it
// is looked into.
func (s *System) lowest(r *Response, size func(complex128) float64) (value, at float64, err error) {
	value = math.Inf(1)
	for i, z := range r.Zin {
		if v := size(z); v < value {
			value, at = v, r.Freqs[i]
		}
	}
	if math.IsInf(value, 1) {
		return value, 0, nil
	}
	most := nearLowest * value
	for i, z := range r.Zin {
		v := size(z)
		if !(v <= most) || i > 0 && size(r.Zin[i-1]) < v || i < len(r.Zin)-1 && size(r.Zin[i+1]) < v {
			continue
		}
		f, err := minimum(r.Freqs[max(i-1, 0)], r.Freqs[min(i+1, len(r.Freqs)-1)], func(f float64) (float64, error) {
			in, err := s.at(f)
			if err != nil {
				return 0, err
			}
			return size(in.zin), nil
		})
		if err != nil {
			return 0, 0, err
		}
		in, err := s.at(f)
		if err != nil {
			return 0, 0, err
		}
		// A minimum at the edge of the band is where the grid put it.
		if v := size(in.zin); v < value {
			value, at = v, f
		}
	}
	return value, at, nil
}

// lead is how much louder, in dB, another way must be for the lead to have passed to it: two drivers side by
// side are not a crossing, however rounding orders them.
const lead = 0.5

// crossings finds where the lead passes from way to way.
func (s *System) crossings(r *Response) ([]Crossing, error) {
	levels := make([][]float64, len(r.Ways))
	for i, w := range r.Ways {
		levels[i] = DBs(w.H)
		if s.Sums() {
			levels[i] = SPLs(w.P)
		}
	}
	loudest := func(k int) int {
		best := 0
		for i := range levels {
			if levels[i][k] > levels[best][k] {
				best = i
			}
		}
		return best
	}
	var found []Crossing
	leader := loudest(0)
	for k := range r.Freqs {
		next := loudest(k)
		if !(levels[next][k] > levels[leader][k]+lead) {
			continue
		}
		// The leader was the loudest when it became the leader, so going back from k there is a place where it
		// still leads.
		j := k - 1
		for levels[next][j] > levels[leader][j] {
			j--
		}
		c, err := s.crossing(leader, next, r.Freqs[j], r.Freqs[j+1])
		if err != nil {
			return nil, err
		}
		found = append(found, c)
		leader = next
	}
	return found, nil
}

// crossing refines the crossing of ways low and high between two frequencies in Hz.
func (s *System) crossing(low, high int, from, to float64) (Crossing, error) {
	at, err := root(from, to, func(f float64) (float64, error) {
		a, b, _, err := s.pair(low, high, f)
		return DB(b) - DB(a), err
	})
	if err != nil {
		return Crossing{}, err
	}
	a, b, whole, err := s.pair(low, high, at)
	if err != nil {
		return Crossing{}, err
	}
	return Crossing{
		Low: s.names[low], High: s.names[high],
		Frequency: at,
		LevelDB:   DB(b) - DB(whole),
		PhaseDeg:  PhaseDeg(b * cmplx.Conj(a)),
	}, nil
}

// pair returns what two ways give at f in Hz, and what that counts against: pressures and their sum if there is
// one, else gains and 1.
func (s *System) pair(i, j int, f float64) (a, b, whole complex128, err error) {
	in, err := s.at(f)
	switch {
	case err != nil:
		return 0, 0, 0, err
	case in.p != nil:
		return in.p[i], in.p[j], in.sum, nil
	}
	return in.h[i], in.h[j], 1, nil
}

// summarizeSum looks at the sum over the design's tune band, and over r for its ends.
func (s *System) summarizeSum(r *Response) (*SumSummary, error) {
	t, err := s.Predict(logGrid(s.tuneBand))
	if err != nil {
		return nil, err
	}
	sum := &SumSummary{Band: s.tuneBand}
	spl := SPLs(t.Sum)
	least, most := math.Inf(1), math.Inf(-1)
	for _, l := range spl {
		sum.MeanSPL += l / float64(len(spl))
		least, most = min(least, l), max(most, l)
	}
	sum.RippleDB = most - least
	for _, l := range spl {
		sum.RMSDB += (l - sum.MeanSPL) * (l - sum.MeanSPL) / float64(len(spl))
	}
	sum.RMSDB = math.Sqrt(sum.RMSDB)

	below := func(f float64) (float64, error) {
		in, err := s.at(f)
		if err != nil {
			return 0, err
		}
		return SPL(in.sum) - (sum.MeanSPL - halfPower), nil
	}
	spl = SPLs(r.Sum)
	low := func(k int) bool { return spl[k] < sum.MeanSPL-halfPower }
	first, last := 0, len(spl)-1
	for first < last && low(first) {
		first++
	}
	for last > first && low(last) {
		last--
	}
	if first > 0 {
		if sum.Low3DB, err = root(r.Freqs[first-1], r.Freqs[first], below); err != nil {
			return nil, err
		}
	}
	if last < len(spl)-1 {
		if sum.High3DB, err = root(r.Freqs[last], r.Freqs[last+1], below); err != nil {
			return nil, err
		}
	}
	for k := first; k <= last; k++ {
		if d := sum.MeanSPL - spl[k]; d > halfPower && d > sum.DipDB {
			sum.DipDB, sum.DipAt = d, r.Freqs[k]
		}
	}
	return sum, nil
}

// summarizeTone looks at a tone network in third-octave steps.
func (s *System) summarizeTone(band [2]float64) (*ToneSummary, error) {
	t := &ToneSummary{}
	// 1 % at either end lets a band that is given by nominal frequencies hold its first and last third-octave.
	first := int(math.Ceil(10 * math.Log10(band[0]/1.01/1000)))
	last := int(math.Floor(10 * math.Log10(band[1]*1.01/1000)))
	for k := first; k <= last; k++ {
		t.Freqs = append(t.Freqs, 1000*math.Pow(10, float64(k)/10))
	}
	r, err := s.Predict(t.Freqs)
	if err != nil {
		return nil, err
	}
	straight := 0.0 // dB, of the source on the load with nothing between them
	if s.tone.Load > 0 {
		straight = 20 * math.Log10(s.tone.Load/(s.tone.Load+s.tone.Source))
	}
	t.GainDB = DBs(r.Ways[0].H)
	for _, g := range t.GainDB {
		t.InsertionLossDB = append(t.InsertionLossDB, straight-g)
	}
	return t, nil
}
