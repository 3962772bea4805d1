package audioio_test

import (
	"bytes"
	"context"
	"io"
	"math"
	"math/cmplx"
	"testing"

	"sixdown/audioio"
	"sixdown/audioio/wavfile"
	"sixdown/sim"
	"sixdown/xover"
	"sixdown/xover/tone"
)

// sine is a tone of so many samples, as a signal.
type sine struct {
	hz, rate float64
	at, n    int
}

func (s *sine) Len() int { return s.n }

func (s *sine) ReadSamples(dst []float64) (int, error) {
	n := min(len(dst), s.n-s.at)
	for i := range n {
		dst[i] = math.Sin(2 * math.Pi * s.hz * float64(s.at+i) / s.rate)
	}
	s.at += n
	if n == 0 {
		return 0, io.EOF
	}
	return n, nil
}

// A knob goes from 0 to 1 in 5 s under a tone of 1 kHz. At each moment the output is as loud as the prediction for the setting of that
// moment, to 0.1 dB; and it has no step above -80 dB of the tone: what is left of it above the tone, by second differences in time of its
// amplitude and phase, is smooth.
func TestTurnWithoutAClick(t *testing.T) {
	const rate, hz, seconds = 48000, 1000.0, 5
	for _, tt := range []struct {
		kind    tone.Kind
		control string
	}{{tone.BassTreble, "treble"}, {tone.BassMiddleTreble, "middle"}, {tone.BassTrebleFeedback, "treble"}, {tone.Tilt, "tilt"}} {
		at := func(setting float64) *sim.System {
			d, _, err := xover.Parse(string(tt.kind), []byte(tt.kind.Text()))
			if err != nil {
				t.Fatal(err)
			}
			d.Control(tt.control).At = setting
			sys, err := sim.New(d, nil)
			if err != nil {
				t.Fatal(err)
			}
			return sys
		}
		var turn []*sim.System
		const settings = 129
		for i := range settings {
			turn = append(turn, at(float64(i)/(settings-1)))
		}
		var file tape
		in := audioio.Input{Kind: audioio.Music, Source: &sine{hz: hz, rate: rate, n: seconds * rate}, Rate: rate, Volts: 1, BandHz: [2]float64{}, Turn: turn}
		rec, err := audioio.RenderBroadband(context.Background(), turn[0], in, &file, audioio.Settings{Wav: wavfile.Settings{Encoding: wavfile.Float32}})
		if err != nil {
			t.Fatal(err)
		}
		out := channel(t, &file, 1)
		// The tone's complex amplitude over each whole period: 48 samples.
		const period = 48 // samples, rate over hz
		var amps []complex128
		for p := 0; (p+1)*period <= seconds*rate; p++ {
			sum := complex128(0)
			for i := range period {
				sum += complex(out[p*period+i], 0) * cmplx.Exp(complex(0, -2*math.Pi*hz*float64(p*period+i)/rate))
			}
			amps = append(amps, sum*complex(0, 2.0/period)*complex(rec.VoltsPerFullScale, 0))
		}
		amps = amps[:len(amps)-2] // the tone's own end is no click of the knob
		loudest := 0.0
		for _, a := range amps {
			loudest = max(loudest, cmplx.Abs(a))
		}
		for p := 300; p < len(amps); p += 379 { // past what the beginning stirs
			setting := (float64(p) + 0.5) * period / (seconds * rate)
			r, err := at(setting).Predict([]float64{hz})
			if err != nil {
				t.Fatal(err)
			}
			if off := sim.DB(amps[p]) - sim.DB(r.Ways[0].H[0]); math.Abs(off) > 0.1 {
				t.Errorf("%s: at %.3f the level is %.3f dB off", tt.kind, setting, off)
			}
		}
		for p := 301; p+1 < len(amps); p++ {
			if step := cmplx.Abs(amps[p+1] - 2*amps[p] + amps[p-1]); step > 1e-4*loudest {
				t.Errorf("%s: a step of %.1f dB in period %d", tt.kind, 20*math.Log10(step/loudest), p)
				break
			}
		}
		// Sample by sample: what is left beside a tone whose amplitude goes straight from the middle of one period to that of the next.
		worst := 0.0
		for p := 300; p+1 < len(amps); p++ {
			for i := range period {
				k := p*period + period/2 + i
				share := complex((float64(i)+0.5)/float64(period), 0)
				fit := real((amps[p]*(1-share) + amps[p+1]*share) * complex(0, -1) * cmplx.Exp(complex(0, 2*math.Pi*hz*float64(k)/rate)))
				worst = max(worst, math.Abs(out[k]*rec.VoltsPerFullScale-fit))
			}
		}
		t.Logf("%s: %.1f dB is left beside the tone", tt.kind, 20*math.Log10(worst/loudest))
		if worst > 1e-4*loudest {
			t.Errorf("%s: %.1f dB is left beside the tone", tt.kind, 20*math.Log10(worst/loudest))
		}
		if !rec.Turned {
			t.Errorf("%s: the recording does not tell of the turn", tt.kind)
		}
		if _, err := audioio.Verify(context.Background(), turn[0], rec, bytes.NewReader(file.b), audioio.Limits{}); err == nil {
			t.Errorf("%s: a turn is verified", tt.kind)
		}
	}
}

// channel reads one channel of a file.
func channel(t *testing.T, file *tape, c int) []float64 {
	t.Helper()
	r, err := wavfile.NewReader(bytes.NewReader(file.b))
	if err != nil {
		t.Fatal(err)
	}
	all := make([]float64, r.Frames())
	channels := make([][]float64, r.Format().NumChannels)
	for i := range channels {
		channels[i] = make([]float64, len(all))
	}
	for done := 0; done < len(all); {
		view := make([][]float64, len(channels))
		for i := range view {
			view[i] = channels[i][done:]
		}
		n, err := r.ReadChannels(view)
		if n == 0 {
			t.Fatal(err)
		}
		done += n
	}
	copy(all, channels[c])
	return all
}
