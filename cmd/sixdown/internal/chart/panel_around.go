package chart

import (
	"math"

	"sixdown/sim"
)

// aroundRange is how many dB below the top are shown at most.
const aroundRange = 30

// Around draws the curves of ANSI/CTA-2034-A: what is heard on the axis and near it, what a room sends back, all that is radiated, and
// what comes of it in a room; and below, in a panel of its own, the directivity indexes. note says what the levels are for.
func Around(c *sim.Curves, note string) []Panel {
	f := c.Freqs
	levels := &plotPanel{high: 270, plot: plot{title: "Around", note: note + "; directivity: " + c.Basis, x: frequencyAxis(f[0], f[len(f)-1])}}
	top, bottom := math.Inf(-1), math.Inf(1)
	for i, s := range []struct {
		name   string
		levels []float64
	}{{"listening window", c.ListeningWindow}, {"early reflections", c.EarlyReflections}, {"sound power", c.SoundPower}, {"in room", c.InRoom}} {
		levels.series = append(levels.series, series{name: s.name, x: f, y: s.levels, pen: pen{wayInk(i), wayWidth, dashes(i)}})
		top, bottom = max(top, most(s.levels)), min(bottom, least(s.levels))
	}
	levels.series = append(levels.series, series{name: "on axis", x: f, y: c.OnAxis, pen: pen{total, totalWidth, nil}, bold: true})
	top, bottom = max(top, most(c.OnAxis)), min(bottom, least(c.OnAxis))
	// By fives, so that no half of the panel stays empty.
	top = topOf([]float64{top})
	levels.y = linearAxis(min(max(5*math.Floor((bottom-1)/5), top-aroundRange), top-10), top, 7, " dB", false)

	index := &plotPanel{high: 150, plot: plot{title: "Directivity index", note: "listening window less the rest", x: frequencyAxis(f[0], f[len(f)-1])}}
	index.series = []series{
		{name: "early reflections", x: f, y: c.EarlyReflectionsDI, pen: pen{wayInk(1), wayWidth, dashes(1)}},
		{name: "sound power", x: f, y: c.SoundPowerDI, pen: pen{wayInk(2), wayWidth, dashes(2)}},
	}
	high := max(most(c.EarlyReflectionsDI), most(c.SoundPowerDI), 5)
	index.y = linearAxis(min(least(c.EarlyReflectionsDI), least(c.SoundPowerDI), 0)-0.5, high+1, 4, " dB", true)
	return []Panel{levels, index}
}
