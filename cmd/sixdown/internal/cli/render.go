package cli

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"math/rand/v2"
	"os"
	"path/filepath"
	"slices"

	"github.com/spf13/cobra"

	"sixdown/audioio"
	"sixdown/audioio/wavfile"
	"sixdown/cmd/sixdown/internal/caution"
	"sixdown/sim"
	"sixdown/xover"
	"sixdown/xover/quantity"
)

// The files of a rendering.
const (
	soundFile    = "network.wav"
	scheduleFile = "network.json"
)

// A signalOptions says what goes into the network.
type signalOptions struct {
	signal  string
	seconds float64
	rate    int
	bits    string
	colour  string
	seed    uint64
	channel int
	at      []float64 // Hz
	turning string    // "treble=0..1"; "": no control is turned
}

func (o *signalOptions) addTo(cmd *cobra.Command) {
	f := cmd.Flags()
	f.StringVar(&o.signal, "signal", "tones", "tones, sweep, noise, or a WAV file of your own")
	f.Float64Var(&o.seconds, "seconds", 10, "length of a sweep or of noise")
	f.IntVar(&o.rate, "rate", 48000, "samples a second, in Hz; a WAV file keeps its own")
	f.StringVar(&o.bits, "bits", "24", "16, 24 or 32, or float for 32-bit floating point")
	f.StringVar(&o.colour, "colour", "pink", "of noise: pink or white")
	f.Uint64Var(&o.seed, "seed", 1, "of noise, and of dither in 16 bits: the same seed gives the same file")
	f.IntVar(&o.channel, "channel", 0, "of a WAV file: 1, 2, …; 0 mixes all of them")
	f.StringVar(&o.turning, "turning", "", "turn a control of a tone network slowly as the signal goes on, as in `treble=0..1`")
	f.Var(&quantityList{unit: quantity.Hertz, values: &o.at}, "at", "tones at these frequencies, as in `\"1 kHz,2 kHz\"`, instead of third-octaves and targets")
}

// wav is how the file is to be stored.
func (o *signalOptions) wav() (wavfile.Settings, error) {
	set := wavfile.Settings{Dither: rand.NewPCG(o.seed, 1)}
	switch o.bits {
	case "16":
		set.Encoding = wavfile.PCM16
	case "24":
		set.Encoding = wavfile.PCM24
	case "32":
		set.Encoding = wavfile.PCM32
	case "float":
		set.Encoding = wavfile.Float32
	default:
		return set, usageFault("--bits", fmt.Sprintf("%q is not offered", o.bits), "give 16, 24, 32 or float")
	}
	return set, nil
}

// tones are the frequencies of the tones, in Hz, rising.
func (o *signalOptions) tones(d *xover.Design) []float64 {
	if len(o.at) == 0 {
		return thirdOctaves(d, audible[0], audible[1])
	}
	hz := slices.Sorted(slices.Values(o.at))
	return slices.Compact(hz)
}

type renderOptions struct {
	designOptions
	signalOptions
	answerForm
	out string
}

func newRenderCmd(s *streams) *cobra.Command {
	var o renderOptions
	cmd := &cobra.Command{
		Use:   "render DESIGN --out DIR",
		Short: "Send a signal through the network into a WAV file",
		Long: `Render writes DIR/` + soundFile + `: channel 1 is the voltage at the amplifier's terminals, and
each way has a channel with the voltage across its driver, in the order of the
design. DIR/` + scheduleFile + ` says what is where and how many volts full scale stands for.

Tones pass through the network's own differential equations and are exact;
sweeps, noise and music pass through a model with the network's own poles, whose
error is told. Full scale is chosen so that no channel clips.

With --turning a control of a tone network goes evenly from one setting to another
while a sweep, noise or music plays, without a click.`,
		Example: `  sixdown render harbour.toml --out sound
  sixdown render harbour.toml --out music --signal record.wav
  sixdown render tone.toml --out turned --signal record.wav --turning treble=0..1`,
		Args:              oneDesign,
		ValidArgsFunction: designFiles,
		RunE: func(cmd *cobra.Command, args []string) error {
			o.path = args[0]
			o.warnIdle(s, cmd)
			return runRender(cmd.Context(), s, &o)
		},
	}
	cmd.Flags().StringVar(&o.out, "out", "", "folder for the files; it is made if it is not there")
	o.signalOptions.addTo(cmd)
	o.designOptions.addTo(cmd)
	o.answerForm.addJSON(cmd)
	return cmd
}

func runRender(ctx context.Context, s *streams, o *renderOptions) error {
	if o.out == "" {
		return usageFault("render", "no folder is given", "give one, as in: --out sound")
	}
	d, sys, err := o.loadSystem(s)
	if err != nil {
		return err
	}
	rec, err := renderTo(ctx, s, d, sys, &o.signalOptions, o.out)
	if err != nil {
		return err
	}
	if o.json {
		return s.answerJSON(struct {
			Sound    string   `json:"sound"`
			Schedule string   `json:"schedule"`
			Cautions []string `json:"cautions"`
			*audioio.Recording
			Notes []string `json:"notes"`
		}{filepath.Join(o.out, soundFile), filepath.Join(o.out, scheduleFile), soundCautions(d), rec, append([]string{}, sys.FitNotes()...)})
	}
	return s.answer(renderText(d, rec, &o.signalOptions, o.out) + noteLines(sys.FitNotes()) + "\n" + caution.Text(soundCautions(d)))
}

// renderTo renders into a folder. Both files are written beside and renamed, the sound first.
func renderTo(ctx context.Context, s *streams, d *xover.Design, sys *sim.System, o *signalOptions, dir string) (rec *audioio.Recording, err error) {
	if err := o.check(); err != nil {
		return nil, err
	}
	wav, err := o.wav()
	if err != nil {
		return nil, err
	}
	bar := newProgress(s, "rendering")
	defer bar.done()
	set := audioio.Settings{Rate: o.rate, Wav: wav, Progress: func(done, total int) {
		bar.at(float64(done) / float64(total))
	}}
	play, err := o.player(d, sys)
	if err != nil {
		return nil, err
	}
	defer play.close()
	_, absent := os.Stat(dir)
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return nil, machineFault(dir, err, "name a folder that can be made")
	}
	defer func() {
		if err != nil && absent != nil {
			os.Remove(dir) // which leaves it if there is anything in it
		}
	}()
	soundPath, planPath := filepath.Join(dir, soundFile), filepath.Join(dir, scheduleFile)
	sound, err := createOutput(soundPath, play.path)
	if err != nil {
		return nil, err
	}
	defer sound.Abort()
	rec, err = play.render(ctx, sound, set)
	if err != nil {
		return nil, outputFault(soundPath, err)
	}
	if play.warnings != nil {
		bar.done()
		for _, w := range play.warnings() {
			s.warn(play.path + ": " + w)
		}
	}
	plan, err := createOutput(planPath)
	if err != nil {
		return nil, err
	}
	defer plan.Abort()
	if err := rec.Write(plan); err != nil {
		return nil, outputFault(planPath, err)
	}
	// Should the second name fail to be given, an old schedule must not lie beside the new sound.
	if err := os.Remove(planPath); err != nil && !errors.Is(err, fs.ErrNotExist) {
		return nil, outputFault(planPath, err)
	}
	if err := sound.Commit(); err != nil {
		return nil, outputFault(soundPath, err)
	}
	if err := plan.Commit(); err != nil {
		return nil, outputFault(planPath, err)
	}
	return rec, nil
}
