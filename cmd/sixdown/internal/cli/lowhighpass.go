package cli

import (
	"fmt"
	"math"
	"slices"

	"sixdown/sim/driver"
	"sixdown/xover"
)

// lowHighPass is the caution that goes with a way's high-pass below twice the frequency at which its driver
// resonates, both in Hz; "" if there is no need (common practice, no source).
func lowHighPass(driver string, highPass, resonance float64) string {
	if highPass >= 2*resonance { // so too if no resonance is given
		return ""
	}
	return fmt.Sprintf("its high-pass at %s lies below twice the %s at which %s resonates, where it moves far and distorts; cross higher, or choose a driver that resonates lower", hertz(highPass), hertz(resonance), driver)
}

// lowHighPasses returns such cautions for a design. What only rounds off the low end of a driver in a box is no
// crossover.
func lowHighPasses(d *xover.Design) []string {
	var cautions []string
	for _, w := range d.Ways {
		for _, name := range w.DriverNames() {
			x := d.Driver(name)
			for _, t := range w.Targets {
				if !t.HighPass || x.Box.Kind != xover.OpenBox && !takenOver(d, t.Frequency) {
					continue
				}
				if c := lowHighPass(name, t.Frequency, resonance(x)); c != "" {
					cautions = append(cautions, fmt.Sprintf("way %q: %s", w.Name, c))
				}
			}
		}
	}
	return cautions
}

// takenOver reports whether a way has a low-pass within an octave of f in Hz.
func takenOver(d *xover.Design, f float64) bool {
	return slices.ContainsFunc(d.Ways, func(w xover.Way) bool {
		return slices.ContainsFunc(w.Targets, func(t xover.Target) bool {
			return !t.HighPass && math.Abs(math.Log2(t.Frequency/f)) <= 1
		})
	})
}

// resonance is where a driver resonates, in Hz, in its box if that is closed; 0: not given.
func resonance(x *xover.Driver) float64 {
	if x.Box.Kind == xover.ClosedBox && x.Vas > 0 && x.Box.Volume > 0 {
		return driver.DataSheet{Fs: x.Fs}.InClosedBox(x.Vas, x.Box.Volume).Fs
	}
	return x.Fs
}
