package cli

import (
	"fmt"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"sixdown/audioio/signal"
	"sixdown/xover/quantity"
)

// lowestRate in Hz is that of a telephone; below it little of what is heard is left.
const lowestRate = 8000

// fromFile reports whether the signal is a file of the user's own.
func (o *signalOptions) fromFile() bool {
	return !slices.Contains([]string{"tones", "sweep", "noise"}, o.signal)
}

// check refuses a rate too low for sound, and tones that were asked for and cannot be had.
func (o *signalOptions) check() error {
	if o.fromFile() {
		return nil
	}
	if o.rate < lowestRate {
		return usageFault("--rate", fmt.Sprintf("%d Hz is too low for sound", o.rate), fmt.Sprintf("give %d or more, such as 48000", lowestRate))
	}
	if o.signal != "tones" {
		return nil
	}
	var beyond []string
	for _, f := range o.at {
		if err := checkFrequency("--at", f); err != nil {
			return err
		}
		if f >= signal.MaxToneHz(o.rate) {
			beyond = append(beyond, quantity.Format(f, quantity.Hertz))
		}
	}
	if len(beyond) > 0 {
		return usageFault("--at", fmt.Sprintf("a rate of %d Hz carries tones below %s, and not %s", o.rate, hertz(signal.MaxToneHz(o.rate)), strings.Join(beyond, ", ")), "leave them out, or give a higher --rate")
	}
	return nil
}

// warnIdle warns of flags that are given and have no effect on this signal.
func (o *signalOptions) warnIdle(s *streams, cmd *cobra.Command) {
	what := o.signal
	switch {
	case o.signal == "sweep":
		what = "a sweep"
	case o.fromFile():
		what = "a WAV file"
	}
	for _, flag := range []struct {
		name string
		used bool
	}{
		{"at", o.signal == "tones"},
		{"seconds", o.signal == "sweep" || o.signal == "noise"},
		{"rate", !o.fromFile()},
		{"colour", o.signal == "noise"},
		{"seed", o.signal == "noise" || o.bits == "16"}, // 16 bits have dither
		{"channel", o.fromFile()},
	} {
		if !flag.used && cmd.Flags().Changed(flag.name) {
			s.warn(fmt.Sprintf("--%s: it has no effect on %s; leave it out", flag.name, what))
		}
	}
}
