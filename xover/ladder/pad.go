package ladder

import (
	"fmt"
	"math"
)

// What a pad, a trap and a baffle step may be asked to take off, in dB. Outside, the resistors are shorts or open
// for every practical purpose, and the figure is a slip.
const (
	MinAttenuationDB = 0.001
	MaxAttenuationDB = 60
)

// A Pad is an L-pad: a series resistor, then a shunt resistor across the load.
type Pad struct {
	SeriesR float64 // Ω
	ShuntR  float64 // Ω
	// Where the power that the pad and load together take goes. The three add up to 1.
	SeriesPower, ShuntPower, LoadPower float64 // fractions
}

// LPad returns the pad that takes db decibels off a resistive load (Ω) and still shows that resistance to
// what feeds it. With k = 10^(-db/20): series R·(1 - k), shunt R·k/(1 - k); of the power taken the series resistor
// gets 1 - k, the shunt k·(1 - k), the load k². db is from MinAttenuationDB to MaxAttenuationDB.
//
// The formulas follow from the two conditions; every textbook has them.
func LPad(load, db float64) (Pad, error) {
	if err := check(quantity{"L-pad: load", load, " Ω"}); err != nil {
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
	if !(db >= MinAttenuationDB && db <= MaxAttenuationDB) { // so that NaN fails
		return fmt.Errorf("%s is %g dB; give %g to %d dB", name, db, MinAttenuationDB, MaxAttenuationDB)
	}
	return nil
}
