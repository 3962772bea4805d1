package cli

import (
	"fmt"
	"path/filepath"
	"strings"

	"sixdown/audioio"
	"sixdown/cmd/sixdown/internal/caution"
	"sixdown/xover"
	"sixdown/xover/quantity"
)

// soundCautions are what goes with a rendering of d.
func soundCautions(d *xover.Design) []string {
	if d.Tone != nil {
		return caution.Tone()
	}
	return caution.Sound()
}

// renderText says what was written.
func renderText(d *xover.Design, rec *audioio.Recording, o *signalOptions, dir string) string {
	var b strings.Builder
	sound := filepath.Join(dir, soundFile)
	fmt.Fprintf(&b, "%s: %s, %.1f s, %d Hz, %d bits\n", sound, rec.Signal, float64(rec.LengthSamples)/float64(rec.Rate), rec.Rate, rec.Bits)
	input := "the amplifier's terminals"
	if d.Tone != nil {
		input = "the network's input, behind the source's resistance"
	}
	fmt.Fprintf(&b, "  channel 1  %s\n", input)
	for i, w := range rec.Ways {
		fmt.Fprintf(&b, "  channel %d  %s\n", i+2, w)
	}
	fmt.Fprintf(&b, "  full scale is %s peak\n", quantity.Round(rec.VoltsPerFullScale, quantity.Volt, 4))
	if rec.Signal == audioio.Tones {
		b.WriteString(tonesText(rec))
	} else {
		fmt.Fprintf(&b, "  the model is within %.4f dB and %.4f° of the network where a gain is above -50 dB, up to %s\n", rec.FitDB, rec.FitDeg, hertz(min(audible[1], 0.45*float64(rec.Rate))))
	}
	if rec.Signal == audioio.Music {
		fmt.Fprintf(&b, "  a full-scale sine in %s stands for %s V rms\n", o.signal, figures(d.Drive.Level, 4))
		fmt.Fprintf(&b, "  to hear %[1]s alone, take its channel out with a tool for sound files, such as: sox %[2]s %[1]s.wav remix 2\n", rec.Ways[0], sound)
	}
	fmt.Fprintf(&b, "%s: the schedule\n", filepath.Join(dir, scheduleFile))
	return b.String()
}

// tonesText says which tones there are.
func tonesText(rec *audioio.Recording) string {
	first, last := rec.Tones[0].FrequencyHz, rec.Tones[len(rec.Tones)-1].FrequencyHz
	if len(rec.Tones) == 1 {
		return fmt.Sprintf("  1 tone at %s, settled before it is measured\n", quantity.Round(first, quantity.Hertz, 3))
	}
	return fmt.Sprintf("  %d tones from %s to %s, each settled before it is measured\n", len(rec.Tones),
		quantity.Round(first, quantity.Hertz, 3), quantity.Round(last, quantity.Hertz, 3))
}
