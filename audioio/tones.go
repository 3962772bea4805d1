package audioio

import (
	"context"
	"fmt"
	"io"
	"math"

	"github.com/go-audio/audio"

	"sixdown/audioio/discrete"
	"sixdown/audioio/signal"
	"sixdown/audioio/wavfile"
	"sixdown/sim"
	"sixdown/sim/circuit"
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
	rec := &Recording{Title: sys.Title(), Signal: Tones, Ways: sys.Names(), Bits: set.bits()}
	plan.VoltsPerFullScale = PeakVolts(sys) / plan.Peak
	sched, err := signal.NewSchedule(below, rate, plan)
	if err != nil {
		return nil, err
	}
	rec.Schedule = *sched
	out, err := wavfile.NewWriter(w, audio.Format{NumChannels: 1 + len(rec.Ways), SampleRate: rate}, set.Wav)
	if err != nil {
		return nil, err
	}
	if err := out.Admit(int64(rec.LengthSamples)); err != nil {
		return nil, err
	}
	p := tonePlayer{rec: rec, set: &set, total: 2 * rec.LengthSamples}
	if p.steppers, err = steppers(ss, rec); err != nil {
		return nil, err
	}
	// The first pass finds how loud it gets, where a resonance builds up too; the network is linear, so that the
	// second is as much quieter or louder as its tones are.
	loudest := 0.0
	if err := p.play(ctx, func(part [][]float64) error {
		for _, ch := range part {
			for _, v := range ch {
				loudest = max(loudest, math.Abs(v))
			}
		}
		return nil
	}); err != nil {
		return nil, err
	}
	plan.Peak *= ceiling / max(loudest, ceiling)
	plan.VoltsPerFullScale = PeakVolts(sys) / plan.Peak
	if sched, err = signal.NewSchedule(below, rate, plan); err != nil {
		return nil, err
	}
	rec.Schedule = *sched
	if err := p.play(ctx, out.WriteChannels); err != nil {
		return nil, err
	}
	return rec, finish(out)
}

// steppers makes a stepper for each tone of the schedule.
func steppers(ss *circuit.StateSpace, rec *Recording) ([]*discrete.Trapezoid, error) {
	all := make([]*discrete.Trapezoid, len(rec.Tones))
	for i, t := range rec.Tones {
		var err error
		if all[i], err = discrete.NewTrapezoid(ss, float64(rec.Rate), t.FrequencyHz); err != nil {
			return nil, err
		}
	}
	return all, nil
}

// A tonePlayer steps the network through a schedule.
type tonePlayer struct {
	rec      *Recording
	steppers []*discrete.Trapezoid
	set      *Settings
	done     int // samples, of all passes
	total    int
}

// play makes one pass from rest and hands out the channels block by block. At a tone's end the input is silent, and
// the state passes to the next tone's stepper as it stands.
func (p *tonePlayer) play(ctx context.Context, take func(part [][]float64) error) error {
	rec := p.rec
	src, err := signal.NewTones(&rec.Schedule)
	if err != nil {
		return err
	}
	in := make([]float64, block)
	whole := grid(1+len(rec.Ways), block)
	part := make([][]float64, len(whole))
	at := 0
	for i, s := range p.steppers {
		if s.Reset(); i > 0 {
			s.Continue(p.steppers[i-1])
		}
		end := rec.LengthSamples
		if i+1 < len(p.steppers) {
			end = rec.Tones[i+1].StartSample
		}
		for at < end {
			if err := ctx.Err(); err != nil {
				return err
			}
			n, err := src.ReadSamples(in[:min(block, end-at)])
			if err != nil {
				return fmt.Errorf("render: %w", err)
			}
			for c := range whole {
				part[c] = whole[c][:n]
			}
			s.Process(part, in[:n])
			if err := take(part); err != nil {
				return err
			}
			at += n
			p.done += n
			if p.set.Progress != nil {
				p.set.Progress(p.done, p.total)
			}
		}
	}
	return nil
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
