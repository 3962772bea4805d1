package cli

import (
	"fmt"
	"math"

	"github.com/spf13/cobra"

	"sixdown/cmd/sixdown/internal/caution"
	"sixdown/xover/ladder"
	"sixdown/xover/preferred"
	"sixdown/xover/quantity"
)

// padOptions are what size pad is asked.
type padOptions struct {
	load   float64 // Ω
	lossDB float64
	power  float64 // W; 0: not given
}

func newPadCmd(s *streams) *cobra.Command {
	var o padOptions
	cmd := newConditionerCmd(s, &cobra.Command{
		Use:   "pad",
		Short: "Two resistors that bring a driver's level down",
		Long: `Pad gives a series and a shunt resistor that take a loss off the level of a driver,
and still show the load to the network before them.`,
		Example: "  sixdown size pad --load 8ohm --loss 4dB\n  sixdown size pad --load 8ohm --loss 4dB --power 20W",
	}, []string{"load", "loss"}, o.size)
	addQuantity(cmd, &o.load, quantity.Ohm, "load", "`resistance` of the driver, made one if it is none")
	addQuantity(cmd, &o.lossDB, quantity.Decibel, "loss", "what to take off, in `dB`")
	addQuantity(cmd, &o.power, quantity.Watt, "power", "`power` that goes into pad and driver together, for the share of each in watts")
	return cmd
}

// size makes the pad.
func (o *padOptions) size(series preferred.Series) (*conditioner, error) {
	if err := checkLoad("--load", o.load); err != nil {
		return nil, err
	}
	if o.power < 0 {
		return nil, usageFault("--power", quantity.Format(o.power, quantity.Watt)+" is no power", "give a positive number of watts")
	}
	pad, err := ladder.LPad(o.load, o.lossDB)
	if err != nil {
		return nil, fmt.Errorf("size pad: %w", err)
	}
	c := &conditioner{
		title:    fmt.Sprintf("Pad of %s for %s", quantity.Round(o.lossDB, quantity.Decibel, 3), quantity.Round(o.load, quantity.Ohm, 3)),
		network:  pad.Network(),
		source:   "k = 10^(-loss/20), series R = load·(1 - k), shunt R = load·k/(1 - k): the loss is right, and so is the load before the pad",
		cautions: caution.Resistors(),
	}
	for _, share := range []struct {
		key, say string
		value    float64
	}{
		{"series", "series resistor", pad.SeriesPower},
		{"shunt", "shunt resistor", pad.ShuntPower},
		{"load", "driver", pad.LoadPower},
	} {
		say := fmt.Sprintf("Of the power, the %s takes %s %%", share.say, fixed(100*share.value, 1))
		if o.power > 0 {
			say += ", " + quantity.Round(share.value*o.power, quantity.Watt, 3)
		}
		c.facts = append(c.facts, fact{share.key + "_power_share", number(share.value), say + "."})
		if o.power > 0 {
			c.facts = append(c.facts, fact{share.key + "_power_w", number(share.value * o.power), ""})
		}
	}
	loss, shown := padOf(series.Nearest(pad.SeriesR), series.Nearest(pad.ShuntR), o.load)
	c.facts = append(c.facts,
		fact{"rounded_loss_db", number(loss), fmt.Sprintf("With the nearest %s values it takes %s and shows %s.", series, decibels(loss), quantity.Round(shown, quantity.Ohm, 3))},
		fact{"rounded_input_ohm", number(shown), ""})
	return c, nil
}

// padOf returns the loss in dB of a pad of two resistors on a load, and the resistance that it shows, in Ω.
func padOf(series, shunt, load float64) (lossDB, shown float64) {
	below := shunt * load / (shunt + load)
	return 20 * math.Log10((series+below)/below), series + below
}
