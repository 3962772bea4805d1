package audioio

import (
	"context"
	"errors"
	"fmt"
	"io"

	"github.com/go-audio/audio"

	"sixdown/audioio/discrete"
	"sixdown/audioio/signal"
	"sixdown/audioio/wavfile"
	"sixdown/sim"
)

// An Input is a broad-band signal to be rendered.
type Input struct {
	Kind   Kind
	Source signal.Source // full scale ±1
	Rate   int           // Hz
	Volts  float64       // V, open circuit, that a sample of 1 stands for
	Peak   float64       // the most that a sample can be; 0: 1
	BandHz [2]float64    // where it carries enough to be measured
}

// RenderBroadband writes a sweep, noise or music through the network's matched-pole model, the model's
// latency taken out, and lets the network ring out at the end. The full scale is chosen by the
// sum of the impulse response, so that nothing can clip. Memory does not grow with the length.
func RenderBroadband(ctx context.Context, sys *sim.System, in Input, w io.WriteSeeker, set Settings) (*Recording, error) {
	ss, err := equations(sys)
	if err != nil {
		return nil, err
	}
	model, err := discrete.NewMatched(ss, float64(in.Rate), discrete.Settings{})
	if err != nil {
		return nil, err
	}
	top := 1.0
	for _, g := range model.PeakGain() {
		top = max(top, g)
	}
	peak := in.Peak
	if peak == 0 {
		peak = 1
	}
	tail := int(settleSeconds(ss)*float64(in.Rate)) + 1
	rec := &Recording{
		Title: sys.Title(), Signal: in.Kind, Ways: sys.Names(), Bits: set.bits(), BandHz: in.BandHz,
		Schedule: signal.Schedule{
			Rate: in.Rate, VoltsPerFullScale: in.Volts * peak * top, Peak: 1 / top,
			LengthSamples: in.Source.Len() + tail, Tones: []signal.Tone{},
		},
	}
	rec.FitDB, rec.FitDeg = model.Error()
	format := audio.Format{NumChannels: 1 + len(rec.Ways), SampleRate: in.Rate}
	out, err := wavfile.NewWriter(w, format, set.Wav)
	if err != nil {
		return nil, err
	}
	p := pipe{model: model, src: in.Source, scale: in.Volts / rec.VoltsPerFullScale, total: rec.LengthSamples, set: &set}
	if err := p.run(ctx, out, format.NumChannels); err != nil {
		return nil, err
	}
	return rec, finish(out)
}

// A pipe renders on one goroutine and writes on another.
type pipe struct {
	model *discrete.Matched
	src   signal.Source
	scale float64 // of the source's samples in the file
	total int     // frames to write
	set   *Settings
}

// A sheet is a block of finished frames, one slice a channel.
type sheet struct {
	ch [][]float64
	n  int
}

func (p *pipe) run(ctx context.Context, out *wavfile.Writer, channels int) error {
	const depth = 4
	free, full := make(chan *sheet, depth), make(chan *sheet, depth)
	for range depth {
		free <- &sheet{ch: grid(channels, block)}
	}
	failed := make(chan error, 1)
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	go func() {
		defer close(full)
		failed <- p.render(ctx, free, full)
	}()
	var err error
	done := 0
	view := make([][]float64, channels)
	for s := range full {
		if err == nil {
			for c := range view {
				view[c] = s.ch[c][:s.n]
			}
			if err = out.WriteChannels(view); err != nil {
				cancel()
			}
			done += s.n
			if p.set.Progress != nil {
				p.set.Progress(done, p.total)
			}
		}
		free <- s
	}
	// A failed write is the reason why the rendering was cancelled.
	if fault := <-failed; err == nil {
		err = fault
	}
	return err
}

// render fills sheets until all frames are made. The first frames that come out of the model are before
// the signal's beginning, and are dropped.
func (p *pipe) render(ctx context.Context, free <-chan *sheet, full chan<- *sheet) error {
	in := make([]float64, block)
	skip := p.model.Latency()
	for left, ended := p.total, false; left > 0; {
		if err := ctx.Err(); err != nil {
			return err
		}
		var s *sheet
		select {
		case s = <-free:
		case <-ctx.Done():
			return ctx.Err()
		}
		n := 0
		for n < block && !ended {
			k, err := p.src.ReadSamples(in[n:])
			n += k
			if errors.Is(err, io.EOF) {
				ended = true
			} else if err != nil {
				return fmt.Errorf("render: %w", err)
			}
		}
		for i := range in[:n] {
			in[i] *= p.scale
		}
		clear(in[n:])
		p.model.Process(s.ch, in)
		s.n = block
		if skip > 0 {
			k := min(skip, block)
			for c := range s.ch {
				copy(s.ch[c], s.ch[c][k:])
			}
			s.n, skip = block-k, skip-k
		}
		s.n = min(s.n, left)
		left -= s.n
		full <- s
	}
	return nil
}
