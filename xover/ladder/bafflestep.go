package ladder

import "math"

// BaffleStep returns an inductor and a resistor in parallel, in series with the load (Ω), that take db off above
// the step of a cabinet's front, where it begins to add to the level. f (Hz) is the middle of the step: there
// the network takes off half of db. db is 6 for the whole step in free field, less near walls.
//
// With g = 10^(db/20), R = load·(g - 1). The transfer is (1 + s/ωz)/(1 + s/ωp) with ωz = R/L and ωp = ωz/g; its magnitude
// is 1/√g at √(ωz·ωp) = ωz/√g, so L = R/(2π·f·√g). (Derived.)
//
// db is from MinAttenuationDB to MaxAttenuationDB. The load must be a resistance about f: take out the resonance if it lies near.
func BaffleStep(load, f, db float64) (Network, error) {
	if err := check(quantity{"baffle step: load", load, " Ω"}, quantity{"baffle step: frequency", f, " Hz"}); err != nil {
		return nil, err
	}
	if err := checkDB("baffle step: height", db); err != nil {
		return nil, err
	}
	r := load * math.Expm1(db/20*math.Ln10)
	return Network{Series(Beside(L(r/(2*math.Pi*f*math.Exp(db/40*math.Ln10))), R(r)))}, nil
}

// BaffleStepFrequency returns the frequency (Hz) about which the level of a driver on a front of that width (m) has
// risen by half the step: 115 m/s over the width. It is a rule of thumb, common practice, no source. A rigid
// sphere of that diameter, for which the answer is exact, gives 108.6 m/s; a flat front with sharp edges
// ripples about the step, and where its driver sits matters as much.
func BaffleStepFrequency(width float64) float64 { return 115 / width }
