package chart

import (
	"math"

	"sixdown/sim"
)

// Impedance draws what the amplifier sees: the magnitude of the impedance with the resistor that would heat an output
// stage as much (EPDR), which a tone network has none of; and below, in a panel of its own, the phase.
func Impedance(subjects []*Subject, note string) []Panel {
	lo, hi := ends(subjects)
	size := &plotPanel{high: 190, plot: plot{title: "Input impedance", note: note, x: frequencyAxis(lo, hi)}}
	angle := &plotPanel{high: 122, plot: plot{title: "Phase of the input impedance", x: frequencyAxis(lo, hi), y: phaseAxis(90)}}
	var all [][]float64
	for k, s := range subjects {
		f, z := s.Response.Freqs, sim.Magnitudes(s.Response.Zin)
		all = append(all, z)
		if !s.tone() {
			epdr := sim.EPDRs(s.Response.Zin)
			all = append(all, epdr)
			size.series = append(size.series, series{name: s.named("EPDR"), x: f, y: epdr, pen: styles(k, len(subjects), way2, 1, wayWidth)})
			if m := s.Summary; k == 0 && m != nil {
				size.callouts = append(size.callouts, lowest(s.named("lowest"), m.MinEPDRAt, m.MinEPDR, way2))
			}
		}
		size.series = append(size.series, series{name: s.named("|Z|"), x: f, y: z, pen: styles(k, len(subjects), total, -1, totalWidth), bold: true})
		angle.series = append(angle.series, series{name: s.Name, x: f, y: sim.PhasesDeg(s.Response.Zin), pen: styles(k, len(subjects), total, -1, totalWidth)})
		if m := s.Summary; k == 0 && m != nil {
			size.callouts = append(size.callouts, lowest(s.named("lowest"), m.MinImpedanceAt, m.MinImpedance, total))
		}
	}
	// An axis in equal ratios needs ends above 0; a short, and a load that no current flows into, are outside it.
	from := max(least(all...), 1e-3)
	to := min(max(most(all...), from), 1e4*from)
	if math.IsInf(from, 1) {
		from, to = 1, 10
	}
	size.y = logAxis(roundDown(0.98*from), roundUp(to), false, ohms)
	if n := len(size.y.ticks); n > 0 {
		size.y.ticks[n-1].text += " Ω"
	}
	return []Panel{size, angle}
}

// ohms writes a resistance at an axis: 20, 50k.
func ohms(v float64) string {
	switch {
	case v >= 1e6:
		return number(v/1e6, 3) + "M"
	case v >= 1e4:
		return number(v/1e3, 3) + "k"
	}
	return number(v, 3)
}

// lowest is a remark at the lowest point of a curve, of so many ohms at f in Hz.
func lowest(name string, f, ohms float64, i ink) callout {
	return callout{f, ohms, name + " " + threeFigures(ohms) + " Ω at " + hertz(f), i}
}

// threeFigures writes a resistance with three figures, zeros at the end too.
func threeFigures(v float64) string {
	switch {
	case v < 10:
		return decimals(v, 2)
	case v < 100:
		return decimals(v, 1)
	}
	return number(v, 3)
}
