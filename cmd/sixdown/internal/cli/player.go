package cli

import (
	"context"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"os"

	"sixdown/audioio"
	"sixdown/audioio/signal"
	"sixdown/audioio/wavfile"
	"sixdown/sim"
	"sixdown/xover"
)

// A player sends one kind of signal through the network.
type player struct {
	path     string // of the file that is read; "": none
	close    func()
	warnings func() []string // about the file, complete when it has been read; nil: none
	render   func(ctx context.Context, w io.WriteSeeker, set audioio.Settings) (*audioio.Recording, error)
}

// The band in which a sweep or noise can be measured, in Hz.
var audible = [2]float64{20, 20000}

// noiseCrest is the peak of noise over its rms value.
const noiseCrest = 4

// player makes what the options ask for.
func (o *signalOptions) player(d *xover.Design, sys *sim.System) (*player, error) {
	in := audioio.Input{Rate: o.rate, Volts: audioio.PeakVolts(sys), BandHz: audible}
	var err error
	if in.Turn, err = o.turn(d); err != nil {
		return nil, err
	}
	switch o.signal {
	case "tones":
		return o.tonePlayer(d, sys), nil
	case "sweep":
		// It begins half an octave below the band and ends just below half the rate, so that the rise and the fall
		// lie outside the band.
		in.Kind = audioio.Sweep
		in.Source, err = signal.NewSweep(o.rate, audible[0]/math.Sqrt2, 0.48*float64(o.rate), o.seconds, signal.SweepSettings{Peak: 1})
	case "noise":
		in.Kind, in.Volts = audioio.Noise, sys.Level()*noiseCrest
		in.Source, err = o.noise()
	default:
		return o.filePlayer(sys, in)
	}
	if err != nil {
		return nil, err
	}
	return broadband(sys, in), nil
}

func broadband(sys *sim.System, in audioio.Input) *player {
	return &player{close: func() {}, render: func(ctx context.Context, w io.WriteSeeker, set audioio.Settings) (*audioio.Recording, error) {
		return audioio.RenderBroadband(ctx, sys, in, w, set)
	}}
}

func (o *signalOptions) tonePlayer(d *xover.Design, sys *sim.System) *player {
	hz := o.tones(d)
	return &player{close: func() {}, render: func(ctx context.Context, w io.WriteSeeker, set audioio.Settings) (*audioio.Recording, error) {
		return audioio.RenderTones(ctx, sys, hz, w, set)
	}}
}

func (o *signalOptions) noise() (signal.Source, error) {
	set := signal.NoiseSettings{Peak: 1, Crest: noiseCrest}
	switch o.colour {
	case "pink":
		return signal.NewPink(o.rate, o.seconds, rand.NewPCG(o.seed, 2), set)
	case "white":
		return signal.NewWhite(o.rate, o.seconds, rand.NewPCG(o.seed, 2), set)
	}
	return nil, usageFault("--colour", fmt.Sprintf("%q is no colour of noise here", o.colour), "give pink or white")
}

// filePlayer plays a WAV file, at its own rate; a sample of 1 is the peak of a sine at the drive level.
func (o *signalOptions) filePlayer(sys *sim.System, in audioio.Input) (p *player, err error) {
	f, err := os.Open(o.signal)
	if err != nil {
		return nil, usageFault("--signal", fmt.Sprintf("%q is no kind of signal, and no file that can be read", o.signal), "give tones, sweep, noise or the name of a WAV file")
	}
	defer func() {
		if err != nil {
			f.Close()
		}
	}()
	if info, e := f.Stat(); e == nil && info.IsDir() {
		return nil, usageFault("--signal", fmt.Sprintf("%q is a folder", o.signal), "name a WAV file")
	}
	r, err := wavfile.NewReader(f)
	if err != nil {
		return nil, fmt.Errorf("%s: %w", o.signal, err)
	}
	mix, err := audioio.NewMix(r, o.channel)
	if err != nil {
		return nil, err
	}
	in.Kind, in.Source, in.Rate, in.BandHz = audioio.Music, mix, r.Format().SampleRate, [2]float64{}
	return &player{path: o.signal, close: func() { f.Close() }, render: func(ctx context.Context, w io.WriteSeeker, set audioio.Settings) (*audioio.Recording, error) {
		// A file of floating point may go above full scale; what comes out must not be clipped for it.
		peak, err := mix.Peak(ctx)
		if err != nil {
			return nil, fmt.Errorf("%s: %w", o.signal, err)
		}
		in.Peak = peak
		return audioio.RenderBroadband(ctx, sys, in, w, set)
	}, warnings: r.Warnings}, nil
}
