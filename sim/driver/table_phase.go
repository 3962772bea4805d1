package driver

import (
	"fmt"
	"math"
)

// What phases may be, on the whole, of those that belong to the magnitudes. It would be 1, but beyond its ends a table is
// carried on by slopes, and one that ends amid a resonance, as a tweeter's from 800 Hz on, comes down to 0.26, at up to 5 % of
// noise. |Z| in dB has slopes of a third to a half, and so makes it 2 to 3.
const (
	leastShare = 0.2
	mostShare  = 1.6
	fewestDeg  = 10.0 // degrees rms: phases smaller than that may as well be noise
	leastSpan  = 8.0  // ratio of frequencies
)

// strangers returns a note if the phases of an impedance are not those that belong to its magnitudes. The impedance of
// what is passive and linear has minimum phase, as a positive real function has no zeros on the right of the s-plane (O.
// Brune, J. Math. Phys. 10, 191–236, 1931), so both columns say the same in two ways. What does not fit is most often
// another column.
func (t *Table) strangers() []string {
	n := len(t.Rows)
	if n < fewestForUnits || t.Rows[n-1].Frequency < leastSpan*t.Rows[0].Frequency {
		return nil
	}
	freqs, ohms, deg := t.columns()
	ln := make([]float64, n)
	for i, z := range ohms {
		ln[i] = math.Log(z)
	}
	m := minimumPhaseOf(freqs, ln)
	var both, own, span float64
	for i, f := range freqs {
		if f < 2*freqs[0] || f > freqs[n-1]/2 {
			continue // where what is beyond the ends counts most
		}
		share := math.Log(freqs[min(i+1, n-1)] / freqs[max(i-1, 0)])
		belongs := m.angle(math.Log(f)) * 180 / math.Pi
		both += share * belongs * math.Remainder(deg[i], 360)
		own += share * belongs * belongs
		span += share
	}
	if math.Sqrt(own/span) < fewestDeg {
		return nil
	}
	share := both / own
	switch {
	case share < -leastShare && share > -mostShare:
		return []string{fmt.Sprintf("%s: the phases are those that belong to the magnitudes, but for their sign: is it turned? A coil's is positive", t.Name)}
	case share < leastShare || share > mostShare:
		return []string{fmt.Sprintf("%s: the phases are %.2g times those that belong to the magnitudes: is it Hz, ohm, degrees? Both columns of an impedance must fit", t.Name, share)}
	}
	return nil
}
