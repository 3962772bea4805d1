package cli

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"sixdown/xover/align"
	"sixdown/xover/preferred"
	"sixdown/xover/quantity"
)

// sizeOptions are what size is asked.
type sizeOptions struct {
	crossover crossoverOptions
	series    string
	form      answerForm
}

// crossoverOptions say which crossover is wanted. The command start has them too.
type crossoverOptions struct {
	shape       string
	order       int
	at          []float64 // Hz; one for two ways, two for three
	load        []float64 // Ω; one for all ways, or one for each
	rippleDB    float64
	reference   string
	arrangement string // plain or all-pass
	mid         string // normal or reversed; "": not given
}

// The arrangements.
const (
	plainArrangement   = "plain"
	allPassArrangement = "all-pass"
)

// addTo adds the flags that shape a crossover.
func (o *crossoverOptions) addTo(cmd *cobra.Command) {
	f := cmd.Flags()
	f.StringVar(&o.shape, "shape", "", "`alignment`: butterworth, linkwitz-riley, bessel or chebyshev")
	f.IntVar(&o.order, "order", 0, "`poles` of each way's alignment, 1 to 8")
	f.Var(&quantityList{unit: quantity.Hertz, values: &o.at}, "at", "crossover `frequency`; two of them, \"400Hz,3kHz\", for three ways")
	f.Var(&quantityList{unit: quantity.Ohm, values: &o.load}, "load", "`resistance` that every way drives, or one for each way, \"8ohm,6ohm\"")
	f.Var(&quantityFlag{unit: quantity.Decibel, value: &o.rippleDB}, "ripple", "pass-band ripple of a chebyshev, as in `\"0.5 dB\"`")
	f.StringVar(&o.reference, "reference", "", "`point` that a bessel's frequency means: magnitude (-3 dB, the default), phase or delay")
	f.StringVar(&o.arrangement, "arrangement", plainArrangement, "`how` three ways are made: plain, of sections with that alignment, or all-pass, together for a flat sum")
	f.StringVar(&o.mid, "mid", "", "`polarity` of the mid in an all-pass arrangement, normal or reversed")
}

func newSizeCmd(s *streams) *cobra.Command {
	var o sizeOptions
	cmd := &cobra.Command{
		Use:   "size",
		Short: "Size a crossover, or a network that tames a driver",
		Long: `Size gives the parts of a crossover: for each way a ladder that has the alignment
asked for into a resistance. It shows the nearest preferred values on either side
of each part, and what it does to that way to take them; how the ways add up, and
with which polarity.

A driver is no resistance. Make it one with the networks below (voice-coil,
resonance, dual), or let the values of size be where tuning begins.`,
		Example: `  sixdown size --shape linkwitz-riley --order 4 --at 2.2kHz --load 8ohm
  sixdown size --shape butterworth --order 3 --at 400Hz,3kHz --load 8ohm,8ohm,6ohm --series E24
  sixdown size --arrangement all-pass --order 4 --at 400Hz,3kHz --load 8ohm --json
  sixdown size pad --load 8ohm --loss 4dB`,
		Args: knownCommand,
		RunE: func(cmd *cobra.Command, _ []string) error {
			if cmd.Flags().NFlag() == 0 {
				return cmd.Help()
			}
			if err := requireFlags(cmd, o.crossover.needed("load")...); err != nil {
				return err
			}
			if err := o.crossover.check(); err != nil {
				return err
			}
			return runSize(s, &o)
		},
	}
	o.crossover.addTo(cmd)
	addSeries(cmd, &o.series)
	o.form.addTo(cmd)
	cmd.AddCommand(newPadCmd(s), newVoiceCoilCmd(s), newResonanceCmd(s), newDualCmd(s), newTrapCmd(s), newBaffleStepCmd(s))
	return cmd
}

// addSeries adds the flag that names a series of preferred values.
func addSeries(cmd *cobra.Command, series *string) {
	cmd.Flags().StringVar(series, "series", "E12", "IEC 60063 `series` of the preferred values")
}

// readSeries returns the series of that name.
func readSeries(name string) (preferred.Series, error) {
	series, err := preferred.ParseSeries(name)
	if err != nil {
		return 0, fmt.Errorf("--%w", err)
	}
	return series, nil
}

// needed returns the flags without which there is no crossover, and those that the command needs besides.
func (o *crossoverOptions) needed(besides ...string) []string {
	needed := []string{"order", "at"}
	if o.arrangement != allPassArrangement {
		needed = []string{"shape", "order", "at"}
	}
	return append(needed, besides...)
}

// check refuses what no crossover can be made of, flag by flag. The alignment's own rules are the rooms' to check.
func (o *crossoverOptions) check() error {
	if len(o.at) > 2 {
		return usageFault("--at", fmt.Sprintf("%d frequencies are given", len(o.at)), "give one for two ways or two for three ways")
	}
	for _, f := range o.at {
		if err := checkFrequency("--at", f); err != nil {
			return err
		}
	}
	if n := len(o.load); n > 1 && n != len(o.at)+1 {
		return usageFault("--load", fmt.Sprintf("%s given for %d ways", counted(n, "load"), len(o.at)+1), "give one for all ways or one for each")
	}
	for _, r := range o.load {
		if err := checkLoad("--load", r); err != nil {
			return err
		}
	}
	if o.rippleDB == 0 && o.shape == align.Chebyshev.String() {
		return usageFault("--ripple", "a chebyshev needs one and it is missing", `give its ripple, as in: --ripple "0.5 dB"`)
	}
	return o.checkArrangement()
}

func (o *crossoverOptions) checkArrangement() error {
	switch o.arrangement {
	case plainArrangement:
		if o.mid != "" {
			return usageFault("--mid", "plain sections do not depend on the mid's polarity", "leave it out; the answer says which polarity sums best")
		}
	case allPassArrangement:
		switch {
		case len(o.at) != 2:
			return usageFault("--arrangement", "all-pass is for three ways", "give two frequencies, as in: --at 400Hz,3kHz")
		case o.shape != "" || o.rippleDB != 0 || o.reference != "":
			return usageFault("--arrangement", "an all-pass arrangement has its own alignment", "leave out --shape, --ripple and --reference")
		}
	default:
		return usageFault("--arrangement", fmt.Sprintf("%q is none", o.arrangement), "give plain or all-pass")
	}
	if o.mid != "" && o.mid != "normal" && o.mid != "reversed" {
		return usageFault("--mid", fmt.Sprintf("%q is no polarity", o.mid), "give normal or reversed")
	}
	return nil
}

// The loads that are taken. Nothing that is driven is near these limits.
const (
	minLoad = 1e-2 // Ω
	maxLoad = 1e7  // Ω
)

func checkLoad(where string, r float64) error {
	if r >= minLoad && r <= maxLoad {
		return nil
	}
	return usageFault(where, fmt.Sprintf("%s is no load", quantity.Format(r, quantity.Ohm)), "give a resistance from 0.01 ohm to 10 Mohm")
}

// requireFlags names the flags that are needed and not given.
func requireFlags(cmd *cobra.Command, names ...string) error {
	var missing []string
	for _, name := range names {
		if !cmd.Flags().Changed(name) {
			missing = append(missing, "--"+name)
		}
	}
	if len(missing) == 0 {
		return nil
	}
	verb := " is missing"
	if len(missing) > 1 {
		verb = " are missing"
	}
	example, _, _ := strings.Cut(strings.TrimSpace(cmd.Example), "\n")
	return usageFault(cmd.Name(), strings.Join(missing, ", ")+verb, "write it as in: "+example)
}

func runSize(s *streams, o *sizeOptions) error {
	if err := o.form.check(); err != nil {
		return err
	}
	series, err := readSeries(o.series)
	if err != nil {
		return err
	}
	c, err := o.crossover.size()
	if err != nil {
		return err
	}
	answer, err := newSizing(c, series)
	if err != nil {
		return err
	}
	switch {
	case o.form.json:
		return s.answerJSON(answer.document())
	case o.form.csv:
		return s.answerCSV(answer.records())
	}
	return s.answer(answer.text())
}
