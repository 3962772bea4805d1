package driver

import (
	"fmt"
	"math"
)

// What columns hold by their look: files say it nowhere, and a wrong guess of theirs is a wrong answer.
const (
	fewestForUnits = 16    // rows
	kilohertzTop   = 200.0 // Hz, below which hardly a table of a driver ends that was meant in Hz
	surelyTop      = 50.0  // Hz, below which none does, however few its rows
	radiansTop     = 100e3 // Hz, above which none ends: sampling at 192 kHz reaches 96 kHz
	countedTop     = 2000  // rows; a spectrum in steps of 1 Hz goes farther
)

// oddFrequencies returns a note if the first column hardly is in Hz.
func (t *Table) oddFrequencies() []string {
	n := len(t.Rows)
	last := t.Rows[n-1].Frequency
	if last > radiansTop {
		return []string{fmt.Sprintf("%s: the table ends at %s Hz: is its first column in radians a second? It is taken as Hz; give Hz", t.Name, hertz(last))}
	}
	if n < fewestForUnits && last >= surelyTop {
		return nil
	}
	counted, rising := true, t.Rows[n-1].Value > 20*t.Rows[0].Value // as the frequency does, in the second column
	for i := 1; i < n; i++ {
		counted = counted && math.Abs(t.Rows[i].Frequency-t.Rows[i-1].Frequency-1) < 1e-9
		rising = rising && t.Rows[i].Value > t.Rows[i-1].Value
	}
	counted = counted && (rising || n < countedTop)
	switch {
	case counted && t.Rows[0].Frequency <= 1:
		return []string{fmt.Sprintf("%s: its first column counts from %g in steps of 1: is it the number of the row? It is taken as Hz; let the first column be the frequency in Hz", t.Name, t.Rows[0].Frequency)}
	case last < kilohertzTop:
		return []string{fmt.Sprintf("%s: the table ends at %s Hz: is its first column in kHz? It is taken as Hz; give Hz", t.Name, hertz(last))}
	}
	return nil
}

// spans returns the least and the greatest value, and the greatest size of a phase.
func (t *Table) spans() (least, greatest, phase float64) {
	least, greatest = math.Inf(1), math.Inf(-1)
	for _, r := range t.Rows {
		least, greatest, phase = min(least, r.Value), max(greatest, r.Value), max(phase, math.Abs(r.PhaseDeg))
	}
	return least, greatest, phase
}

// What no driver is, by a wide margin: rated impedances run from 1 to 64 Ω, and one with a level of 60 dB at 1 m for 2.83 V is
// 20 dB below the dullest woofer. Common practice, no source.
const (
	leastOhm    = 0.3 // Ω, the highest value
	mostOhm     = 500 // Ω, the lowest value
	leastLevel  = 60  // dB, the highest value
	mostLevelDB = 150 // dB, the highest value
)

// oddImpedance returns notes if columns hardly are in Hz and degrees. An impedance that goes up and down by half has a phase of many
// degrees (Bode's relation: 90° for each factor of e in e), so one that stays within π/2 is in radians.
func (t *Table) oddImpedance() []string {
	notes := t.oddFrequencies()
	if least, greatest, phase := t.spans(); len(t.Rows) >= fewestForUnits && greatest > 1.5*least && phase <= 1.02*math.Pi/2 {
		notes = append(notes, smallPhase(t.Name, phase))
	}
	if len(notes) == 0 {
		notes = t.strangers()
	}
	if least, greatest, _ := t.spans(); greatest < leastOhm || least > mostOhm {
		notes = append(notes, fmt.Sprintf("%s: the impedance is from %s to %s: is it in ohm? It is taken as ohm; give ohm", t.Name, hertz(least), hertz(greatest)))
	}
	return notes
}

// oddLevels returns notes if columns hardly are in Hz and dB.
func (t *Table) oddLevels() []string {
	notes := t.oddFrequencies()
	if _, greatest, _ := t.spans(); greatest < leastLevel || greatest > mostLevelDB {
		notes = append(notes, fmt.Sprintf("%s: the highest level is %.3g: is it in dB SPL, at 2.83 V? It is taken as that; give dB SPL", t.Name, greatest))
	}
	return notes
}

// oddResponse is oddImpedance for levels in dB, whose phases go round.
func (t *Table) oddResponse() []string {
	notes := t.oddLevels()
	if least, greatest, phase := t.spans(); len(t.Rows) >= fewestForUnits && greatest > least+10 && phase <= 1.02*math.Pi {
		notes = append(notes, smallPhase(t.Name, phase))
	}
	return notes
}

func smallPhase(name string, most float64) string {
	if most == 0 {
		return name + ": the phase is 0 in every row while the values change a lot: was it measured? Give it in degrees; a response can have phase = \"minimum\" instead"
	}
	return name + ": the phase stays within a few units while the values change a lot: is it in radians? It is taken as degrees; give degrees"
}
