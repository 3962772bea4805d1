package chart

import "sixdown/sim"

// Impedance draws what the amplifier sees: the magnitude of the impedance with the resistor that would heat it as
// much (EPDR), and below, in a panel of its own, the phase.
func Impedance(subjects []*Subject, note string) []Panel {
	lo, hi := ends(subjects)
	size := &plotPanel{high: 190, plot: plot{title: "Input impedance", note: note, x: frequencyAxis(lo, hi)}}
	angle := &plotPanel{high: 122, plot: plot{title: "Phase of the input impedance", x: frequencyAxis(lo, hi), y: phaseAxis(90)}}
	var all [][]float64
	for k, s := range subjects {
		f, z, epdr := s.Response.Freqs, sim.Magnitudes(s.Response.Zin), sim.EPDRs(s.Response.Zin)
		all = append(all, z, epdr)
		size.series = append(size.series,
			series{name: s.named("EPDR"), x: f, y: epdr, pen: styles(k, len(subjects), way2, 1, wayWidth)},
			series{name: s.named("|Z|"), x: f, y: z, pen: styles(k, len(subjects), total, -1, totalWidth), bold: true})
		angle.series = append(angle.series, series{name: s.Name, x: f, y: sim.PhasesDeg(s.Response.Zin), pen: styles(k, len(subjects), total, -1, totalWidth)})
		if k == 0 {
			size.callouts = append(size.callouts, lowest(s.named("EPDR"), f, epdr, way2), lowest(s.named("|Z|"), f, z, total))
		}
	}
	size.y = logAxis(roundDown(least(all...)*0.98), roundUp(min(most(all...), 1000*least(all...))), false, func(v float64) string { return number(v, 3) })
	if n := len(size.y.ticks); n > 0 {
		size.y.ticks[n-1].text += " Ω"
	}
	return []Panel{size, angle}
}

// lowest is a remark at the lowest point of a curve in Ω.
func lowest(name string, f, ohm []float64, i ink) callout {
	low := 0
	for k := range ohm {
		if ohm[k] < ohm[low] {
			low = k
		}
	}
	return callout{f[low], ohm[low], name + " " + decimals(ohm[low], 2) + " Ω at " + hertz(f[low]), i}
}
