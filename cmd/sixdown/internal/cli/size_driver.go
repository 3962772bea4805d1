package cli

import (
	"fmt"

	"github.com/spf13/cobra"

	"sixdown/xover/ladder"
	"sixdown/xover/preferred"
	"sixdown/xover/quantity"
)

// driverOptions are the numbers of a driver's data sheet that its impedance depends on.
type driverOptions struct {
	re       float64 // Ω
	le       float64 // H
	r2       float64 // Ω
	l2       float64 // H
	fs       float64 // Hz
	qms, qes float64
}

func (o *driverOptions) addCoil(cmd *cobra.Command) {
	addQuantity(cmd, &o.re, quantity.Ohm, "re", "`resistance` of the voice coil at DC")
	addQuantity(cmd, &o.le, quantity.Henry, "le", "`inductance` of the voice coil")
}

func (o *driverOptions) addResonance(cmd *cobra.Command) {
	addQuantity(cmd, &o.fs, quantity.Hertz, "fs", "resonance `frequency`")
	cmd.Flags().Float64Var(&o.qms, "qms", 0, "mechanical `Q` at resonance")
	cmd.Flags().Float64Var(&o.qes, "qes", 0, "electrical `Q` at resonance")
}

func newVoiceCoilCmd(s *streams) *cobra.Command {
	var o driverOptions
	cmd := newConditionerCmd(s, &cobra.Command{
		Use:   "voice-coil",
		Short: "A network across a driver that takes out its voice coil's inductance",
		Long: `Voice-coil gives the network, across the driver, that makes re + le the resistance
re. A coil with losses is re + le + (r2 beside l2); give --r2 and --l2 for it.`,
		Example: "  sixdown size voice-coil --re 6.2ohm --le 0.5mH\n  sixdown size voice-coil --re 6.2ohm --le 0.3mH --r2 8ohm --l2 0.6mH",
	}, []string{"re", "le"}, o.voiceCoil)
	o.addCoil(cmd)
	addQuantity(cmd, &o.r2, quantity.Ohm, "r2", "`resistance` of the losses of the coil")
	addQuantity(cmd, &o.l2, quantity.Henry, "l2", "`inductance` beside that resistance")
	return cmd
}

// voiceCoil makes the network for a coil, lossy or not.
func (o *driverOptions) voiceCoil(preferred.Series) (*conditioner, error) {
	c := &conditioner{
		title:  fmt.Sprintf("Across a driver of %s and %s", quantity.Round(o.re, quantity.Ohm, 3), quantity.Round(o.le, quantity.Henry, 3)),
		source: "A. N. Thiele, Proc. IREE Australia 36, 1975: R = re, C = le/re²",
	}
	if (o.r2 == 0) != (o.l2 == 0) {
		return nil, usageFault("size voice-coil", "only one of --r2 and --l2 is given", "give both, or neither for a coil without losses")
	}
	var err error
	if o.r2 == 0 {
		c.network, err = ladder.VoiceCoil(o.re, o.le)
	} else {
		c.title += fmt.Sprintf(" with %s beside %s", quantity.Round(o.r2, quantity.Ohm, 3), quantity.Round(o.l2, quantity.Henry, 3))
		c.source = "O. J. Zobel, Bell System Technical Journal 7, 1928: re in series with the dual of the coil about re"
		c.network, err = ladder.Conjugate(o.re, ladder.Chain(ladder.L(o.le), ladder.Beside(ladder.R(o.r2), ladder.L(o.l2))))
	}
	if err != nil {
		return nil, fmt.Errorf("size voice-coil: %w", err)
	}
	c.facts = []fact{{"shows_ohm", number(o.re), fmt.Sprintf("The driver then shows %s, as far as its resonance is far below.", quantity.Round(o.re, quantity.Ohm, 3))}}
	return c, nil
}

func newResonanceCmd(s *streams) *cobra.Command {
	var o driverOptions
	cmd := newConditionerCmd(s, &cobra.Command{
		Use:   "resonance",
		Short: "A network across a driver that takes out its impedance peak",
		Long: `Resonance gives the network, across the driver, that levels the peak of its impedance
at resonance. It is exact for a voice coil without inductance; dual is exact with it.`,
		Example: "  sixdown size resonance --re 5.4ohm --fs 850Hz --qms 3.1 --qes 1.2",
	}, []string{"re", "fs", "qms", "qes"}, o.resonance)
	addQuantity(cmd, &o.re, quantity.Ohm, "re", "`resistance` of the voice coil at DC")
	o.addResonance(cmd)
	return cmd
}

// resonance makes the network for the impedance peak.
func (o *driverOptions) resonance(preferred.Series) (*conditioner, error) {
	n, err := ladder.Resonance(o.re, o.fs, o.qms, o.qes)
	if err != nil {
		return nil, fmt.Errorf("size resonance: %w", err)
	}
	return &conditioner{
		title:   fmt.Sprintf("Across a driver of %s with its resonance at %s", quantity.Round(o.re, quantity.Ohm, 3), hertz(o.fs)),
		network: n,
		facts:   []fact{{"shows_ohm", number(o.re), fmt.Sprintf("The driver then shows %s, as far as its coil's inductance does not count.", quantity.Round(o.re, quantity.Ohm, 3))}},
		source:  "A. N. Thiele, Proc. IREE Australia 36, 1975: R = re·(1 + qes/qms), L = re·qes/(2π·fs), C = 1/(2π·fs·qes·re)",
	}, nil
}

func newDualCmd(s *streams) *cobra.Command {
	var o driverOptions
	cmd := newConditionerCmd(s, &cobra.Command{
		Use:   "dual",
		Short: "A network across a driver that takes out both, coil and peak",
		Long: `Dual gives the network, across the driver, that makes it the resistance re at every
frequency: its voice coil's inductance and its resonance are taken out together.`,
		Example: "  sixdown size dual --re 5.4ohm --le 0.04mH --fs 850Hz --qms 3.1 --qes 1.2",
	}, []string{"re", "le", "fs", "qms", "qes"}, o.dual)
	o.addCoil(cmd)
	o.addResonance(cmd)
	return cmd
}

// dual makes the network for the coil and the peak together.
func (o *driverOptions) dual(preferred.Series) (*conditioner, error) {
	n, err := ladder.Dual(o.re, o.le, o.fs, o.qms, o.qes)
	if err != nil {
		return nil, fmt.Errorf("size dual: %w", err)
	}
	return &conditioner{
		title:   fmt.Sprintf("Across a driver of %s and %s with its resonance at %s", quantity.Round(o.re, quantity.Ohm, 3), quantity.Round(o.le, quantity.Henry, 3), hertz(o.fs)),
		network: n,
		facts:   []fact{{"shows_ohm", number(o.re), fmt.Sprintf("The driver then shows %s at every frequency.", quantity.Round(o.re, quantity.Ohm, 3))}},
		source:  "O. J. Zobel, Bell System Technical Journal 7, 1928: re in series with the dual of the driver about re",
	}, nil
}
