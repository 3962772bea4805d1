package cli

import (
	"fmt"
	"slices"
	"strings"

	"github.com/spf13/cobra"
	"github.com/spf13/pflag"

	"sixdown/cmd/sixdown/internal/caution"
	"sixdown/xover/tone"
)

// toneKinds names the kinds of tone network.
func toneKinds() []string {
	var names []string
	for _, k := range tone.Kinds() {
		names = append(names, string(k))
	}
	return names
}

// toneKindsText lists them with what they do, for the help.
func toneKindsText() string {
	var b strings.Builder
	for _, k := range tone.Kinds() {
		b.WriteString(folded(fmt.Sprintf("  %-22s", string(k)), k.About()))
	}
	return strings.TrimRight(b.String(), "\n")
}

// runStartTone writes a tone network.
func runStartTone(cmd *cobra.Command, s *streams, o *startOptions) error {
	for _, name := range []string{"at", "driver", "ways", "load", "shape", "order"} {
		if f := cmd.Flags().Lookup(name); f != nil && f.Changed {
			return usageFault("--"+name, "it is for loudspeakers, and --tone asks for a tone network", "leave one of them out")
		}
	}
	var also []string
	cmd.Flags().Visit(func(f *pflag.Flag) {
		if !slices.Contains([]string{"tone", "out", "force"}, f.Name) {
			also = append(also, "--"+f.Name)
		}
	})
	if len(also) > 0 {
		return usageFault(also[0], "it does nothing with --tone", "leave it out, and change the file")
	}
	text := tone.Kind(o.tone).Text()
	if text == "" {
		return usageFault("--tone", fmt.Sprintf("there is no kind %q", o.tone), didYouMean(o.tone, toneKinds(), "the kinds are "+strings.Join(toneKinds(), ", ")))
	}
	if err := o.checkOut(); err != nil {
		return err
	}
	if err := o.deliver(s, text); err != nil || o.out == "" {
		return err
	}
	return s.answer(caution.Text(caution.Valves()))
}
