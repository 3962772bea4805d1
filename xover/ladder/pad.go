package ladder

import (
	"fmt"
	"math"
)

// maxAttenuationDB bounds what a pad, a trap and a baffle step are asked for: past it the shunt resistor of a pad
// is a short for every practical purpose, and the figure is a slip.
const maxAttenuationDB = 60

// A Pad is an L-pad: a series resistor, then a shunt resistor across the load.
type Pad struct {
	SeriesR float64 // Ω
	ShuntR  float64 // Ω
	// Where the power that the pad and load together take goes. The three add up to 1.
	SeriesPower, ShuntPower, LoadPower float64 // fractions
}

// LPad returns the pad that takes db decibels off a resistive load (Ω) and still shows that resistance to
// what feeds it. With k = 10^(-db/20): series R·(1 - k), shunt R·k/(1 - k); of the power taken the series resistor
// gets 1 - k, the shunt k·(1 - k), the load k². db is above 0, to 60.
//
// The formulas follow from the two conditions; every textbook has them.
func LPad(load, db float64) (Pad, error) {
	if err := check(quantity{"L-pad: load", load, "Ω"}); err != nil {
		return Pad{}, err
	}
	if err := checkDB("L-pad: attenuation", db); err != nil {
		return Pad{}, err
	}
	k := math.Exp(-db / 20 * math.Ln10)
	rest := -math.Expm1(-db / 20 * math.Ln10) // 1 - k, without cancelling where db is small
	return Pad{
		SeriesR:     load * rest,
		ShuntR:      load * k / rest,
		SeriesPower: rest,
		ShuntPower:  k * rest,
		LoadPower:   k * k,
	}, nil
}

// Network returns the pad's two elements, series first.
func (p Pad) Network() Network { return Network{Series(R(p.SeriesR)), Shunt(R(p.ShuntR))} }

func checkDB(name string, db float64) error {
	if !(db > 0 && db <= maxAttenuationDB) { // so that NaN fails
		return fmt.Errorf("%s is %g dB; give a number above 0, to %d", name, db, maxAttenuationDB)
	}
	return nil
}
