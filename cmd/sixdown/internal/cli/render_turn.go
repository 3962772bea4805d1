package cli

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"sixdown/sim"
	"sixdown/xover"
)

// What lies between two settings of a turn: so little that a mixture of both is what lies between.
const (
	turnStepDB = 0.5
	leastTurns = 9
	mostTurns  = 257
)

// turn returns networks at settings of the control that --turning names, from the first to the last; nil if it names none.
func (o *signalOptions) turn(d *xover.Design) ([]*sim.System, error) {
	if o.turning == "" {
		return nil, nil
	}
	if o.signal == "tones" {
		return nil, usageFault("--turning", "tones wait for the steady state, and a knob that turns has none", "give --signal sweep, noise or a WAV file too")
	}
	name, span, ok := strings.Cut(o.turning, "=")
	first, last, both := strings.Cut(span, "..")
	from, err1 := strconv.ParseFloat(strings.TrimSpace(first), 64)
	to, err2 := strconv.ParseFloat(strings.TrimSpace(last), 64)
	if !ok || !both || err1 != nil || err2 != nil || !(from >= 0 && from <= 1 && to >= 0 && to <= 1) || from == to {
		return nil, usageFault("--turning", fmt.Sprintf("%q is no turn", o.turning), "write a control and two settings from 0 to 1, as in --turning treble=0..1")
	}
	name = strings.TrimSpace(name)
	at := func(setting float64) (*sim.System, error) {
		c := *d
		c.Controls = append([]xover.Control(nil), d.Controls...)
		if err := c.SetControl(name, setting); err != nil {
			return nil, fmt.Errorf("--turning: %w", err)
		}
		return sim.New(&c, nil)
	}
	if d.Tone == nil {
		return nil, usageFault("--turning", "the design is no tone network, and has no knobs", "leave it out")
	}
	for steps := leastTurns; ; steps = 2*steps - 1 {
		var systems []*sim.System
		widest := 0.0
		var before *sim.Response
		for i := range steps {
			sys, err := at(from + (to-from)*float64(i)/float64(steps-1))
			if err != nil {
				return nil, err
			}
			r, err := sys.Predict((&gridOptions{from: 20, to: 20e3, perOctave: 6}).even())
			if err != nil {
				return nil, err
			}
			if before != nil {
				for k, h := range r.Ways[0].H {
					// Where one is silent, as a volume at nothing, ratios have no end: -80 dB is silence here.
					a, b := max(sim.DB(h), -80), max(sim.DB(before.Ways[0].H[k]), -80)
					widest = max(widest, math.Abs(a-b))
				}
			}
			before = r
			systems = append(systems, sys)
		}
		if widest <= turnStepDB || steps >= mostTurns {
			return systems, nil
		}
	}
}
