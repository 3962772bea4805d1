package audioio

import (
	"context"
	"errors"
	"fmt"
	"io"
	"math"

	"sixdown/audioio/wavfile"
)

// minRate is the lowest rate in Hz that music is rendered at.
const minRate = 8000

// A Mix is a WAV file as one channel: the mean of its channels, or one of them.
type Mix struct {
	r       *wavfile.Reader
	channel int // from 0; -1: the mean
	frames  []float64
}

// NewMix reads channel, counted from 1, of r; 0 is the mean of all. The reader must know its length.
func NewMix(r *wavfile.Reader, channel int) (*Mix, error) {
	n := r.Format().NumChannels
	if channel < 0 || channel > n {
		return nil, fmt.Errorf("render: there is no channel %d in a file of %d; give 1 to %d, or 0 for all of them", channel, n, n)
	}
	if rate := r.Format().SampleRate; rate < minRate {
		return nil, fmt.Errorf("render: the file's rate is %d Hz; give one of %d Hz or more", rate, minRate)
	}
	if r.Frames() == 0 {
		return nil, errors.New("render: the file holds no sound; give another")
	}
	if r.Frames() < 0 {
		return nil, errors.New("render: the file does not say how long it is and cannot be searched; give a file on disk")
	}
	return &Mix{r: r, channel: channel - 1}, nil
}

// Peak reads the whole file for its largest magnitude, 1 if that is more, and stands at its first sample again.
func (m *Mix) Peak(ctx context.Context) (float64, error) {
	peak := 1.0
	buf := make([]float64, block)
	for {
		if err := ctx.Err(); err != nil {
			return 0, err
		}
		n, err := m.ReadSamples(buf)
		for _, v := range buf[:n] {
			peak = max(peak, math.Abs(v))
		}
		if errors.Is(err, io.EOF) {
			return peak, m.r.SeekFrame(0)
		}
		if err != nil {
			return 0, err
		}
	}
}

// Len implements signal.Source.
func (m *Mix) Len() int { return int(m.r.Frames()) }

// ReadSamples implements signal.Source.
func (m *Mix) ReadSamples(dst []float64) (int, error) {
	ch := m.r.Format().NumChannels
	if need := len(dst) * ch; cap(m.frames) < need {
		m.frames = make([]float64, need)
	}
	n, err := m.r.ReadFrames(m.frames[:len(dst)*ch])
	for i := range n {
		f := m.frames[i*ch : (i+1)*ch]
		if m.channel >= 0 {
			dst[i] = f[m.channel]
			continue
		}
		sum := 0.0
		for _, x := range f {
			sum += x
		}
		dst[i] = sum / float64(ch)
	}
	return n, err
}
