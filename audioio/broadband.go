package audioio

import (
	"context"
	"errors"
	"fmt"
	"io"
	"sync"

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
	Turn   []*sim.System // networks at settings of a control in a row, passed through evenly as the signal goes on; nil: none is turned
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
	var through filter = model
	if in.Turn != nil {
		if through, err = newTurning(in.Turn, float64(in.Rate), in.Source.Len()); err != nil {
			return nil, err
		}
	}
	top := 1.0
	for _, g := range through.PeakGain() {
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
	rec.Turned = in.Turn != nil
	format := audio.Format{NumChannels: 1 + len(rec.Ways), SampleRate: in.Rate}
	out, err := wavfile.NewWriter(w, format, set.Wav)
	if err != nil {
		return nil, err
	}
	if err := out.Admit(int64(rec.LengthSamples)); err != nil {
		return nil, err
	}
	p := pipe{model: through, src: in.Source, scale: in.Volts / rec.VoltsPerFullScale, total: rec.LengthSamples, set: &set}
	if err := p.run(ctx, out, format.NumChannels); err != nil {
		return nil, err
	}
	return rec, finish(out)
}

// A pipe reads the source, renders and writes, each on its own goroutine: on two cores the three come to the
// time of the slower half.
type pipe struct {
	model filter
	src   signal.Source
	scale float64 // of the source's samples in the file
	total int     // frames to write
	set   *Settings
}

// depth is how many blocks may wait between two stages.
const depth = 4

// A sheet is a block on its way: the input in one slice, or the finished frames in one slice a channel.
type sheet struct {
	ch [][]float64
	n  int
}

// A belt carries sheets from one stage to the next and back when they are done with.
type belt struct{ free, full chan *sheet }

func newBelt(channels int) belt {
	b := belt{make(chan *sheet, depth), make(chan *sheet, depth)}
	for range depth {
		b.free <- &sheet{ch: grid(channels, block)}
	}
	return b
}

// run returns when all stages have: their first fault, or the context's.
func (p *pipe) run(ctx context.Context, out *wavfile.Writer, channels int) error {
	ctx, cancel := context.WithCancelCause(ctx)
	defer cancel(nil)
	in, frames := newBelt(1), newBelt(channels)
	var stages sync.WaitGroup
	stages.Go(func() { cancelOn(cancel, p.read(ctx, in)) })
	stages.Go(func() { cancelOn(cancel, p.render(ctx, in, frames)) })
	err := p.write(ctx, out, frames, channels)
	cancelOn(cancel, err)
	stages.Wait()
	if err == nil {
		return nil
	}
	return context.Cause(ctx)
}

func cancelOn(cancel context.CancelCauseFunc, err error) {
	if err != nil {
		cancel(err)
	}
}

// take receives a sheet, or the reason why there will be none.
func take(ctx context.Context, from <-chan *sheet) (*sheet, error) {
	select {
	case s := <-from:
		return s, nil
	case <-ctx.Done():
		return nil, context.Cause(ctx)
	}
}

// read fills input blocks, scaled; after the source's end they are silent. As many frames are read as are
// written, the latency more.
func (p *pipe) read(ctx context.Context, b belt) error {
	ended := false
	for left := p.total + p.model.Latency(); left > 0; left -= block {
		s, err := take(ctx, b.free)
		if err != nil {
			return err
		}
		in := s.ch[0]
		n := 0
		for n < block && !ended {
			k, err := p.src.ReadSamples(in[n:])
			n += k
			if k == 0 && err == nil {
				err = io.ErrNoProgress
			}
			if errors.Is(err, io.EOF) {
				ended = true
			} else if err != nil {
				return fmt.Errorf("render: reading the signal: %w", err)
			}
		}
		for i := range in[:n] {
			in[i] *= p.scale
		}
		clear(in[n:])
		b.full <- s
	}
	return nil
}

// render runs the model. The first frames that come out of it are before the signal's beginning, and are
// dropped.
func (p *pipe) render(ctx context.Context, in, out belt) error {
	skip := p.model.Latency()
	for left := p.total; left > 0; {
		x, err := take(ctx, in.full)
		if err != nil {
			return err
		}
		s, err := take(ctx, out.free)
		if err != nil {
			return err
		}
		p.model.Process(s.ch, x.ch[0])
		in.free <- x
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
		out.full <- s
	}
	return nil
}

func (p *pipe) write(ctx context.Context, out *wavfile.Writer, b belt, channels int) error {
	view := make([][]float64, channels)
	for done := 0; done < p.total; {
		s, err := take(ctx, b.full)
		if err != nil {
			return err
		}
		for c := range view {
			view[c] = s.ch[c][:s.n]
		}
		if err := out.WriteChannels(view); err != nil {
			return err
		}
		done += s.n
		b.free <- s
		if p.set.Progress != nil {
			p.set.Progress(done, p.total)
		}
	}
	return nil
}
