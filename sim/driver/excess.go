package driver

import (
	"math"
	"math/cmplx"
)

const (
	fewestForDelay = 16     // rows
	mostDelay      = 50e-3  // s; 17 m
	leastDelay     = -10e-3 // s; more flight time was taken out than there was
	quietest       = 20.0   // dB below the loudest row: rows more quiet than that are noise and reflections
	octavesForTime = 5.0    // below the highest row that is loud enough: farther down a microsecond does not show
	searchRows     = 192    // as many rows as the search looks at
	flightSpeed    = 343.0  // m/s, at 20 °C
	worthTaking    = 0.1    // m; acoustic centres of drivers on one baffle differ by less
	blocks         = 8      // of the jackknife
	coherentEnough = 0.5    // of a perfectly straight phase
	asCoherent     = 0.98   // of the best: rows at equal steps repeat the best delay, and the nearest counts
	turn           = 2 * math.Pi
)

// ExcessDelay returns the delay in s that the phase of a response, in dB SPL, holds beyond minimum phase: flight time
// to the microphone that was not taken out, and how far the acoustic centre lies from where it is thought to be.
// It is negative if too much was taken out. spread is its standard deviation; it is +Inf, and the delay 0, if there is
// none to be found: without a phase column, with fewer than 16 rows that count, or where the phase follows no one delay.
//
// Rows that are no more than 20 dB below the loudest count, over the highest five octaves of them. The delay between
// -10 and 50 ms that lines up their phasors best is found first, since with rows far apart the phase cannot be
// unwrapped before it is known. Then the slope of what is left is fitted by least squares, each row weighted by its
// power, which is right if the same noise lies on all of them; the offset is free, so that polarity does not matter.
// The spread is the jackknife's over eight blocks of neighbouring rows, because their errors are alike: H. R. Künsch,
// "The Jackknife and the Bootstrap for General Stationary Observations", Ann. Statist. 17(3), 1217–1241, 1989.
func ExcessDelay(t *Table) (seconds, spread float64) {
	none := math.Inf(1)
	if !t.HasPhase || len(t.Rows) < fewestForDelay {
		return 0, none
	}
	lnMag, err := t.lnPressures()
	if err != nil {
		return 0, none
	}
	freqs, _, deg := t.columns()
	loud := math.Inf(-1)
	for _, l := range lnMag {
		loud = math.Max(loud, l)
	}
	floor := loud - quietest*math.Ln10/20
	highest := 0.0
	for i, f := range freqs {
		if lnMag[i] >= floor {
			highest = f
		}
	}
	m := minimumPhaseOf(freqs, lnMag)
	var rows []phasor
	for i, f := range freqs {
		if lnMag[i] >= floor && f <= highest && f >= highest*math.Exp2(-octavesForTime) {
			rows = append(rows, phasor{f, math.Mod(deg[i], 360)*math.Pi/180 - m.angle(math.Log(f)), math.Exp(2 * (lnMag[i] - loud))})
		}
	}
	if len(rows) < fewestForDelay {
		return 0, none
	}
	delay, offset, ok := alignPhasors(rows)
	if !ok {
		return 0, none
	}
	for range 2 { // once more with the jumps set by the better delay
		delay, offset, spread = fitDelay(rows, delay, offset)
	}
	return delay, spread
}

// A phasor is what the phase of a row holds beyond minimum phase.
type phasor struct {
	f      float64 // Hz
	angle  float64 // rad, of any number of turns
	weight float64
}

// alignPhasors returns the delay in s that, taken out, makes the phasors point the same way as well as can be, and
// that way in rad; ok is false if they do not point one way.
func alignPhasors(rows []phasor) (delay, offset float64, ok bool) {
	some := thin(rows)
	total := 0.0
	for _, r := range some {
		total += r.weight
	}
	// A quarter of the highest row's period from one delay to the next: between two of them that row turns by 45° at
	// most, so no peak is missed.
	step := 0.25 / some[len(some)-1].f
	n := int((mostDelay-leastDelay)/step) + 1
	sums := make([]complex128, n)
	for _, r := range some {
		z := cmplx.Rect(r.weight, r.angle+turn*r.f*leastDelay)
		by := cmplx.Rect(1, turn*r.f*step)
		for i := range sums {
			sums[i] += z
			z *= by
		}
	}
	best := 0.0
	for _, s := range sums {
		best = math.Max(best, cmplx.Abs(s))
	}
	if best < coherentEnough*total {
		return 0, 0, false
	}
	at := -1
	for i, s := range sums {
		tau := leastDelay + step*float64(i)
		if cmplx.Abs(s) >= asCoherent*best && (at < 0 || math.Abs(tau) < math.Abs(delay)) {
			at, delay = i, tau
		}
	}
	return delay, cmplx.Phase(sums[at]), true
}

// thin returns rows about equally spaced in log frequency, and no more than the search can afford. Equal steps in
// frequency would make a delay and others look alike.
func thin(rows []phasor) []phasor {
	if len(rows) <= searchRows {
		return rows
	}
	ratio := math.Pow(rows[len(rows)-1].f/rows[0].f, 1/float64(searchRows-1))
	some := make([]phasor, 0, searchRows+1)
	next := rows[0].f
	for _, r := range rows {
		if r.f >= next {
			some = append(some, r)
			next = math.Max(next*ratio, r.f)
		}
	}
	return some
}

// fitDelay improves a delay and an offset, and returns the delay's standard deviation.
func fitDelay(rows []phasor, delay, offset float64) (seconds, rad, spread float64) {
	var part [blocks]lineFit
	var whole lineFit
	for i, r := range rows {
		rest := math.Remainder(r.angle+turn*r.f*delay-offset, turn)
		part[i*blocks/len(rows)].add(r.weight, -turn*r.f, rest)
	}
	for _, p := range part {
		whole.plus(p, 1)
	}
	slope, constant := whole.solve()
	var without [blocks]float64
	mean := 0.0
	for i, p := range part {
		rest := whole
		rest.plus(p, -1)
		without[i], _ = rest.solve()
		mean += without[i] / blocks
	}
	for _, s := range without {
		spread += (s - mean) * (s - mean)
	}
	return delay + slope, offset + constant, math.Sqrt(spread * (blocks - 1) / blocks)
}

// A lineFit gathers the sums of a weighted straight line through points.
type lineFit struct{ w, x, y, xx, xy float64 }

func (l *lineFit) add(w, x, y float64) {
	l.plus(lineFit{1, x, y, x * x, x * y}, w)
}

func (l *lineFit) plus(o lineFit, k float64) {
	l.w += k * o.w
	l.x += k * o.x
	l.y += k * o.y
	l.xx += k * o.xx
	l.xy += k * o.xy
}

// solve returns the line's slope and its constant.
func (l *lineFit) solve() (slope, constant float64) {
	slope = (l.w*l.xy - l.x*l.y) / (l.w*l.xx - l.x*l.x)
	return slope, (l.y - slope*l.x) / l.w
}

// flight returns the delay in s that a response's phase holds, 0 if it is too little or too uncertain to count as flight time,
// for its phase to be followed from row to row without it.
func flight(delay, spread float64) float64 {
	if math.Abs(delay)*flightSpeed < worthTaking || spread > math.Abs(delay)/5 {
		return 0
	}
	return delay
}
