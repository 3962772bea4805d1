package cli

import (
	"fmt"

	"github.com/spf13/cobra"

	"sixdown/xover/ladder"
	"sixdown/xover/preferred"
	"sixdown/xover/quantity"
)

// trapOptions are what size trap is asked.
type trapOptions struct {
	load    float64 // Ω
	at      float64 // Hz
	q       float64
	depthDB float64
}

func newTrapCmd(s *streams) *cobra.Command {
	var o trapOptions
	cmd := newConditionerCmd(s, &cobra.Command{
		Use:   "trap",
		Short: "A network before a driver that takes a peak out of its response",
		Long: `Trap gives a resistor, an inductor and a capacitor in parallel, in series with the
driver, that take a depth out of its response at one frequency. Its q is that frequency
over the distance between the two at which half the depth, in dB, is taken out.`,
		Example: "  sixdown size trap --load 8ohm --at 4.5kHz --q 3 --depth 6dB",
	}, []string{"load", "at", "q", "depth"}, o.size)
	addQuantity(cmd, &o.load, quantity.Ohm, "load", "`resistance` of the driver, made one if it is none")
	addQuantity(cmd, &o.at, quantity.Hertz, "at", "`frequency` of the peak")
	cmd.Flags().Float64Var(&o.q, "q", 0, "how `narrow` it is: frequency over bandwidth at half the depth")
	addQuantity(cmd, &o.depthDB, quantity.Decibel, "depth", "what to take off, in `dB`")
	return cmd
}

// size makes the trap.
func (o *trapOptions) size(preferred.Series) (*conditioner, error) {
	if err := checkLoad("--load", o.load); err != nil {
		return nil, err
	}
	if err := checkFrequency("--at", o.at); err != nil {
		return nil, err
	}
	n, err := ladder.Trap(o.load, o.at, o.q, o.depthDB)
	if err != nil {
		return nil, fmt.Errorf("size trap: %w", err)
	}
	return &conditioner{
		title:   fmt.Sprintf("Trap of %s at %s, Q %s, before %s", quantity.Round(o.depthDB, quantity.Decibel, 3), hertz(o.at), figures(o.q, 3), quantity.Round(o.load, quantity.Ohm, 3)),
		network: n,
		source:  "derived: with g = 10^(depth/20), R = load·(g - 1) is left where L and C cancel, and half the depth at f/at - at/f = ±1/q",
	}, nil
}
