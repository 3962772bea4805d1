package cli

import (
	"fmt"

	"github.com/spf13/cobra"

	"sixdown/xover/ladder"
	"sixdown/xover/preferred"
	"sixdown/xover/quantity"
)

// baffleStepOptions are what size baffle-step is asked.
type baffleStepOptions struct {
	load   float64 // Ω
	width  float64 // m; 0: not given
	at     float64 // Hz; 0: not given
	stepDB float64
}

func newBaffleStepCmd(s *streams) *cobra.Command {
	o := baffleStepOptions{stepDB: 6}
	cmd := newConditionerCmd(s, &cobra.Command{
		Use:   "baffle-step",
		Short: "A network before a driver that levels the step of its cabinet's front",
		Long: `Baffle-step gives an inductor and a resistor in parallel, in series with the driver,
that take off above the step what the cabinet's front adds there. Say where the step
is, or how wide the front is. The whole step is 6 dB; near walls it is less.`,
		Example: "  sixdown size baffle-step --load 8ohm --width 220mm --step 4dB\n  sixdown size baffle-step --load 8ohm --at 500Hz",
	}, []string{"load"}, o.size)
	addQuantity(cmd, &o.load, quantity.Ohm, "load", "`resistance` of the driver, made one if it is none")
	addQuantity(cmd, &o.width, quantity.Metre, "width", "`width` of the front")
	addQuantity(cmd, &o.at, quantity.Hertz, "at", "`frequency` of the middle of the step")
	addQuantity(cmd, &o.stepDB, quantity.Decibel, "step", "what to take off, in `dB`")
	return cmd
}

// size makes the network.
func (o *baffleStepOptions) size(preferred.Series) (*conditioner, error) {
	if err := checkLoad("--load", o.load); err != nil {
		return nil, err
	}
	if (o.width == 0) == (o.at == 0) {
		return nil, usageFault("size baffle-step", "the place of the step must be given once", "give either --width of the front or --at the step")
	}
	at, source := o.at, "derived: R = load·(g - 1) and L = R/(2π·f·√g), g = 10^(step/20)"
	if o.width != 0 {
		if !(o.width > 0) {
			return nil, usageFault("--width", quantity.Format(o.width, quantity.Metre)+" is no width", "give a positive length")
		}
		at = ladder.BaffleStepFrequency(o.width)
		source += "; f = 115 m/s over the width is common practice"
	}
	if err := checkFrequency("--at", at); err != nil {
		return nil, err
	}
	n, err := ladder.BaffleStep(o.load, at, o.stepDB)
	if err != nil {
		return nil, fmt.Errorf("size baffle-step: %w", err)
	}
	return &conditioner{
		title:   fmt.Sprintf("Baffle step of %s about %s, before %s", quantity.Round(o.stepDB, quantity.Decibel, 3), hertz(at), quantity.Round(o.load, quantity.Ohm, 3)),
		network: n,
		facts:   []fact{{"step_hz", number(at), fmt.Sprintf("Half of it is taken off at %s.", hertz(at))}},
		source:  source,
	}, nil
}
