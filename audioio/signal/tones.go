package signal

import (
	"math"
	"math/bits"
)

// Tones plays a [Schedule].
type Tones struct {
	s    Schedule
	pos  int
	tone int // the first that does not end before pos
}

// NewTones returns the signal of a schedule, which it copies and checks.
func NewTones(s *Schedule) (*Tones, error) {
	if err := s.Validate(); err != nil {
		return nil, err
	}
	t := &Tones{s: *s}
	t.s.Tones = append([]Tone(nil), s.Tones...)
	return t, nil
}

// Len returns the length of the recording in samples.
func (t *Tones) Len() int { return t.s.LengthSamples }

// ReadSamples implements [Source].
func (t *Tones) ReadSamples(dst []float64) (int, error) {
	n, err := samplesLeft(dst, t.pos, t.s.LengthSamples)
	for done := 0; done < n; {
		block := dst[done:n]
		for t.tone < len(t.s.Tones) && t.s.Tones[t.tone].End() <= t.pos {
			t.tone++
		}
		switch {
		case t.tone == len(t.s.Tones):
			clear(block)
		case t.pos < t.s.Tones[t.tone].StartSample:
			block = block[:min(len(block), t.s.Tones[t.tone].StartSample-t.pos)]
			clear(block)
		default:
			tone := t.s.Tones[t.tone]
			block = block[:min(len(block), tone.End()-t.pos)]
			tone.play(block, t.pos-tone.StartSample, t.s.Peak)
		}
		t.pos += len(block)
		done += len(block)
	}
	return n, err
}

// play stores the tone from its sample i on. The phase is a whole number of
// MeasureSamples-ths of a turn, counted in integers: it never drifts, and does
// not depend on where a block begins.
func (t Tone) play(dst []float64, i int, peak float64) {
	n := t.MeasureSamples
	turn := 2 * math.Pi / float64(n)
	k := (i - t.SettleSamples) % n
	if k < 0 {
		k += n
	}
	hi, lo := bits.Mul64(uint64(k), uint64(t.Cycles))
	k = int(bits.Rem64(hi, lo, uint64(n)))
	length := t.End() - t.StartSample
	for j := range dst {
		dst[j] = peak * edge(i+j, length, t.EdgeSamples) * math.Sin(turn*float64(k))
		if k += t.Cycles; k >= n {
			k -= n
		}
	}
}
