package audioio

import (
	"context"
	"fmt"
	"io"
	"math/cmplx"

	"github.com/go-audio/audio"

	"sixdown/audioio/discrete"
	"sixdown/audioio/signal"
	"sixdown/audioio/wavfile"
	"sixdown/sim"
)

// block is how many frames are rendered or read at a time.
const block = 4096

// RenderTones writes one steady tone after another, at or near freqs in Hz, through the network's own
// differential equations. Tones are left out that the sample rate cannot carry; it is an error if none is left.
// The amplifier's open-circuit voltage is the design's drive level, in rms.
func RenderTones(ctx context.Context, sys *sim.System, freqs []float64, w io.WriteSeeker, set Settings) (*Recording, error) {
	ss, err := equations(sys)
	if err != nil {
		return nil, err
	}
	rate := set.rate()
	var below []float64
	for _, f := range freqs {
		if f < signal.MaxToneHz(rate) {
			below = append(below, f)
		}
	}
	if len(below) == 0 {
		return nil, fmt.Errorf("render: no tone lies below %.5g Hz, what a rate of %d Hz carries; give lower tones or a higher rate", signal.MaxToneHz(rate), rate)
	}
	settle := settleSeconds(ss)
	plan := signal.ToneSettings{
		Peak:           ceiling,
		Settle:         func(float64) float64 { return settle },
		TailSeconds:    0.1,
		MeasureSeconds: 0.25,
	}
	// A tone's gain does not depend on its amplitude, so the plan is made once for the frequencies and the
	// steppers, and again with the amplitude that just fits.
	sched, err := signal.NewSchedule(below, rate, plan)
	if err != nil {
		return nil, err
	}
	steppers := make([]*discrete.Trapezoid, len(sched.Tones))
	loudest := 1.0
	gains := make([]complex128, ss.Outputs())
	for i, t := range sched.Tones {
		if steppers[i], err = discrete.NewTrapezoid(ss, float64(rate), t.FrequencyHz); err != nil {
			return nil, err
		}
		steppers[i].Gain(gains, t.FrequencyHz)
		for _, g := range gains {
			loudest = max(loudest, cmplx.Abs(g))
		}
	}
	plan.Peak = ceiling / loudest
	plan.VoltsPerFullScale = peakVolts(sys) / plan.Peak
	if sched, err = signal.NewSchedule(below, rate, plan); err != nil {
		return nil, err
	}
	rec := &Recording{Title: sys.Title(), Signal: Tones, Ways: sys.Names(), Bits: set.bits(), Schedule: *sched}
	return rec, playTones(ctx, rec, steppers, w, set)
}

// playTones steps the network through the schedule. At a tone's end the input is silent, and the state passes
// to the next tone's stepper as it stands.
func playTones(ctx context.Context, rec *Recording, steppers []*discrete.Trapezoid, w io.WriteSeeker, set Settings) error {
	src, err := signal.NewTones(&rec.Schedule)
	if err != nil {
		return err
	}
	channels := 1 + len(rec.Ways)
	out, err := wavfile.NewWriter(w, audio.Format{NumChannels: channels, SampleRate: rec.Rate}, set.Wav)
	if err != nil {
		return err
	}
	in := make([]float64, block)
	whole := grid(channels, block)
	part := make([][]float64, channels)
	done := 0
	for i, s := range steppers {
		if i > 0 {
			s.Continue(steppers[i-1])
		}
		end := rec.LengthSamples
		if i+1 < len(steppers) {
			end = rec.Tones[i+1].StartSample
		}
		for done < end {
			if err := ctx.Err(); err != nil {
				return err
			}
			n, err := src.ReadSamples(in[:min(block, end-done)])
			if err != nil {
				return fmt.Errorf("render: %w", err)
			}
			for c := range whole {
				part[c] = whole[c][:n]
			}
			s.Process(part, in[:n])
			if err := out.WriteChannels(part); err != nil {
				return err
			}
			done += n
			if set.Progress != nil {
				set.Progress(done, rec.LengthSamples)
			}
		}
	}
	return finish(out)
}

func finish(out *wavfile.Writer) error {
	if err := out.Close(); err != nil {
		return err
	}
	if n := out.Clipped(); n > 0 {
		return fmt.Errorf("render: %d samples were clipped; this should not happen: the level was chosen to fit", n)
	}
	return nil
}

func grid(rows, n int) [][]float64 {
	g := make([][]float64, rows)
	for i := range g {
		g[i] = make([]float64, n)
	}
	return g
}
