package cli

import (
	"fmt"
	"math"
	"strings"

	"sixdown/sim"
	"sixdown/xover"
)

// The JSON of the phase alignment, one for each crossing of the summary; null where there is no sum.
type (
	alignmentDocument struct {
		Low              string             `json:"low"`
		High             string             `json:"high"`
		OneTimeBase      bool               `json:"one_time_base"` // false: the phases that follow mean nothing
		Lower            []string           `json:"lower"`         // the ways on one side of the crossing
		Upper            []string           `json:"upper"`         // and on the other
		CrossingHz       number             `json:"crossing_hz"`
		BandHz           []number           `json:"band_hz"` // where both ways are within 12 dB of the sum
		Difference       differenceOfPhase  `json:"phase_difference"`
		Null             holeDocument       `json:"reversed_null"` // of the sum with one side reversed, relative to the sum
		AsWired          holeDocument       `json:"wired_null"`    // of the sum, relative to the sum with one side reversed
		ReversedIsBetter bool               `json:"reversed_is_better"`
		Best             bestLineUpDocument `json:"best"`
		Lobe             lobeDocument       `json:"lobe"`
	}
	differenceOfPhase struct {
		MeanDeg     number   `json:"mean_deg"` // off whole turns, as least and worst
		LeastDeg    number   `json:"least_deg"`
		WorstDeg    number   `json:"worst_deg"`
		WorstHz     number   `json:"worst_hz"`
		FrequencyHz []number `json:"frequency_hz"`
		PhaseDeg    []number `json:"phase_deg"` // high relative to low, without jumps
	}
	holeDocument struct {
		DepthDB     number `json:"depth_db"` // null: silence
		FrequencyHz number `json:"frequency_hz"`
	}
	bestLineUpDocument struct {
		Reversed bool   `json:"reversed"` // one side
		DelayMS  number `json:"delay_ms"` // of upper; negative: of lower
		OffsetMM number `json:"offset_mm"`
		MeanDeg  number `json:"mean_deg"` // the phase difference then
		WorstDeg number `json:"worst_deg"`
	}
	lobeDocument struct {
		AngleDeg number             `json:"angle_deg"` // up from the ear
		LevelDB  number             `json:"level_db"`  // relative to the ear; null: silence there
		Nulls    []lobeNullDocument `json:"nulls"`     // next to it, as far as 45 degrees
		Warnings []string           `json:"warnings"`
	}
	lobeNullDocument struct {
		AngleDeg number `json:"angle_deg"`
		LevelDB  number `json:"level_db"` // relative to the lobe; null: silence
	}
)

// alignmentDocuments makes the JSON of as, nil where there is no sum.
func alignmentDocuments(as []sim.Alignment) []alignmentDocument {
	if as == nil {
		return nil
	}
	docs := make([]alignmentDocument, 0, len(as))
	for _, a := range as {
		doc := alignmentDocument{
			Low: a.Low, High: a.High, OneTimeBase: a.OneTimeBase, Lower: a.Lower, Upper: a.Upper,
			CrossingHz: number(a.Frequency), BandHz: numbers(a.Band[:]),
			Difference: differenceOfPhase{
				MeanDeg: number(a.MeanDeg), LeastDeg: number(a.LeastDeg), WorstDeg: number(a.WorstDeg), WorstHz: number(a.WorstAt),
				FrequencyHz: numbers(a.Freqs), PhaseDeg: numbers(a.DifferenceDeg),
			},
			Null:             holeDocument{number(a.Null.DepthDB), number(a.Null.Frequency)},
			AsWired:          holeDocument{number(a.AsWired.DepthDB), number(a.AsWired.Frequency)},
			ReversedIsBetter: a.ReversedIsBetter,
			Best:             bestLineUpDocument{a.Best.Reversed, number(1000 * a.Best.Delay), number(1000 * a.Best.Offset), number(a.Best.MeanDeg), number(a.Best.WorstDeg)},
			Lobe:             lobeDocument{AngleDeg: number(a.Lobe.AngleDeg), LevelDB: number(a.Lobe.LevelDB), Nulls: []lobeNullDocument{}, Warnings: append([]string{}, a.Lobe.Warnings...)},
		}
		for _, n := range a.Lobe.Nulls {
			doc.Lobe.Nulls = append(doc.Lobe.Nulls, lobeNullDocument{number(n.AngleDeg), number(n.LevelDB)})
		}
		docs = append(docs, doc)
	}
	return docs
}

// A stepping is how well two ways are in step.
type stepping string

// What two equal ways lose in the sum at these mean phases is 0.1 dB at 20°, 0.7 dB at 45°, 3 dB at 90° and 6 dB, so that they are no
// louder than one, at 120°.
const (
	inStep     stepping = "in step"
	nearly     stepping = "nearly in step"
	quadrature stepping = "in quadrature, as odd orders are"
	undecided  stepping = "in quadrature, which is right for odd orders and wrong for even ones"
	outOfStep  stepping = "out of step"
	opposed    stepping = "opposed"
)

// steppingOf judges a crossing by what the ways there aim at, a quarter turn being as it should be for odd orders alone.
func steppingOf(a *sim.Alignment, aim parity) stepping {
	switch {
	case a.MeanDeg <= 20:
		return inStep
	case a.MeanDeg <= 45:
		return nearly
	case math.Abs(a.MeanDeg-90) < 15 && a.WorstDeg-a.LeastDeg < 30 && aim == odd:
		return quadrature
	case math.Abs(a.MeanDeg-90) < 15 && a.WorstDeg-a.LeastDeg < 30 && aim == unstated:
		return undecided
	case a.MeanDeg > 120:
		return opposed
	}
	return outOfStep
}

// A parity is what orders the ways at a crossing aim at.
type parity uint8

const (
	unstated parity = iota
	odd
	even
)

// aimAt returns the parity of the targets nearest to a crossing: the low-pass of the way below it and the high-pass of the one
// above. Where the two differ it is even, since nothing is then as odd orders are.
func aimAt(d *xover.Design, c sim.Crossing) parity {
	aim := unstated
	for _, w := range d.Ways {
		if w.Name != c.Low && w.Name != c.High {
			continue
		}
		var nearest *xover.Target
		off := func(t *xover.Target) float64 { return math.Abs(math.Log(t.Frequency / c.Frequency)) }
		for i := range w.Targets {
			if t := &w.Targets[i]; t.HighPass == (w.Name == c.High) && (nearest == nil || off(t) < off(nearest)) {
				nearest = t
			}
		}
		switch {
		case nearest == nil:
		case nearest.Order%2 == 0:
			aim = even
		case aim == unstated:
			aim = odd
		}
	}
	return aim
}

// worthMoving is by how many degrees a move must lessen what two ways nearly in step are apart, to be told.
const worthMoving = 10

// alignmentText says how well two ways are in step and, where they are not, what to do. With turned the ear is not straight ahead.
func alignmentText(a *sim.Alignment, aim parity, turned bool) string {
	const indent = "          "
	if !a.OneTimeBase {
		return folded(indent, fmt.Sprintf("%s and %s are not on one time base: nothing can be said of the phase between them, nor of what they add up to", a.Low, a.High))
	}
	found := steppingOf(a, aim)
	apart := apartText(a.LeastDeg, a.WorstDeg) + " from " + hertzToHertz(a.Band)
	if fixed(a.LeastDeg, 0) != fixed(a.WorstDeg, 0) {
		apart += ", mean " + wholeDegrees(a.MeanDeg)
	}
	quarterTurn := found == quadrature || found == undecided
	text := folded(indent, fmt.Sprintf("%s: %s; %s; %s", found, apart, nullText(a, quarterTurn), lobeText(&a.Lobe, turned)))
	switch {
	case found == inStep, quarterTurn, found == nearly && a.MeanDeg-a.Best.MeanDeg < worthMoving:
		return text
	}
	return text + folded(indent, remedy(a))
}

// nullText says what becomes of the sum with one side reversed: the better in step, the deeper the null.
func nullText(a *sim.Alignment, quarterTurn bool) string {
	switch {
	case noNull(a.Null) && noNull(a.AsWired):
		return "no null, either way about"
	case a.ReversedIsBetter && !quarterTurn:
		return "as wired, " + holeText(a.AsWired) + ", relative to " + strings.Join(fewer(a), " and ") + " reversed"
	}
	return "reversed, " + holeText(a.Null)
}

// fewer returns the ways on that side of a crossing which has fewer.
func fewer(a *sim.Alignment) []string {
	if len(a.Lower) < len(a.Upper) {
		return a.Lower
	}
	return a.Upper
}

// farMove is how far in m a driver can hardly be moved in a cabinet; common practice, no source.
const farMove = 0.1

// remedy says what would bring two ways into step.
func remedy(a *sim.Alignment) string {
	best := &a.Best
	reverse := "reverse " + strings.Join(fewer(a), " and ")
	// Half a turn makes of what is apart the rest of it.
	reversed := reverse + thenApart(180-a.MeanDeg, 180-a.LeastDeg)
	if best.Reversed && math.Abs(360*a.Frequency*best.Delay) < 10 { // so little is not worth a move
		return reversed
	}
	millimetres, milliseconds := fixed(math.Abs(1000*best.Offset), 0)+" mm", fixed(math.Abs(1000*best.Delay), 3)+" ms"
	upper, lower := strings.Join(a.Upper, " and "), strings.Join(a.Lower, " and ")
	later, where := upper, "back"
	if best.Delay < 0 {
		later, where = lower, "forward"
	}
	text := fmt.Sprintf("move %s %s by %s or delay %s by %s", upper, where, millimetres, later, milliseconds)
	if best.Reversed {
		text = reverse + " and " + text
	}
	text += thenApart(best.MeanDeg, best.WorstDeg)
	if a.ReversedIsBetter {
		text += "; or just " + reversed
	}
	if math.Abs(best.Offset) > farMove {
		text += "; it is a long way, and other parts in the network may do as much"
	}
	return text
}

// thenApart says how far two ways would be apart.
func thenApart(mean, worst float64) string {
	if fixed(worst, 0) == "0" {
		return ", which brings them into step"
	}
	return fmt.Sprintf(", for a mean of %s and %s at most", wholeDegrees(mean), wholeDegrees(worst))
}

// noNull reports whether h is too shallow to be called a null.
func noNull(h sim.Hole) bool { return h.DepthDB > -3 }

// holeText says how deep a hole is: "a null of -17.1 dB at 2.2 kHz".
func holeText(h sim.Hole) string {
	switch {
	case h.DepthDB < -silentDB:
		return "a null below -60 dB at " + hertz(h.Frequency)
	case noNull(h):
		return "no null"
	}
	return fmt.Sprintf("a null of %s dB at %s", fixed(h.DepthDB, 1), hertz(h.Frequency))
}

// lobeText says where the main lobe points, straight ahead or, for an ear that is turned, from there.
func lobeText(l *sim.Lobe, turned bool) string {
	ahead, from := "straight ahead", ""
	if turned {
		ahead, from = "at the ear", " from the ear"
	}
	text := "main lobe " + ahead
	up := "up"
	if l.AngleDeg < 0 {
		up = "down"
	}
	there := "ahead"
	if turned {
		there = "there"
	}
	switch angle := math.Abs(l.AngleDeg); {
	case angle >= 45:
		text = "main lobe 45° or more " + up + from
	case fixed(angle, 0) != "0":
		text = fmt.Sprintf("main lobe %s %s%s", wholeDegrees(angle), up, from)
	}
	switch {
	case l.LevelDB > silentDB:
		text += "; " + ahead + " it is silent"
	case l.LevelDB >= 0.5:
		text += fmt.Sprintf(", %s dB above that %s", fixed(l.LevelDB, 1), there)
	}
	if len(l.Warnings) > 0 {
		text += ", if measured drivers sound alike at all angles"
	}
	return text
}

// silentDB is how far in dB below its parts a sum is silent: deeper than parts and rooms let any null be.
const silentDB = 60

// apartText says how far two ways are apart: "4 to 31° apart".
func apartText(least, worst float64) string {
	if text := wholeDegrees(worst); text == wholeDegrees(least) {
		return text + " apart"
	}
	return fixed(least, 0) + " to " + wholeDegrees(worst) + " apart"
}

// wholeDegrees writes an angle without a fraction.
func wholeDegrees(d float64) string { return fixed(d, 0) + "°" }

// hertzToHertz writes a band whose ends need not be exact: "1.3 to 3.6 kHz".
func hertzToHertz(band [2]float64) string {
	from, to := figures(band[0], 2), figures(band[1], 2)
	switch {
	case band[0] >= 1000:
		return figures(band[0]/1000, 2) + " to " + figures(band[1]/1000, 2) + " kHz"
	case band[1] >= 1000:
		return from + " Hz to " + figures(band[1]/1000, 2) + " kHz"
	}
	return from + " to " + to + " Hz"
}
