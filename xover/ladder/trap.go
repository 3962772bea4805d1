package ladder

import "math"

// Trap returns a resistor, inductor and capacitor in parallel, in series with the load (Ω), that take depthDB
// out of a peak at fc (Hz), such as a cone's break-up. q is fc over the distance between the two frequencies
// at which the trap takes out half its depth in dB; to go by a bandwidth in Hz, give q = fc/bandwidth.
//
// With g = 10^(depth/20), R = load·(g - 1) is what the load sees in front of it at fc, where L and C cancel. Away from
// it the transfer is (1 + jy)/(g + jy), y = Qp·(f/fc - fc/f), Qp = 2π·fc·R·C; its magnitude is 1/√g, half the depth in
// dB, at y = ±√g, and f/fc - fc/f = ±1/q there: so Qp = q·√g. (Derived.)
//
// depthDB is from MinAttenuationDB to MaxAttenuationDB. The load must be a resistance about fc: compensate the voice coil first.
func Trap(load, fc, q, depthDB float64) (Network, error) {
	err := check(quantity{"trap: load", load, " Ω"}, quantity{"trap: frequency", fc, " Hz"}, quantity{"trap: Q", q, ""})
	if err != nil {
		return nil, err
	}
	if err := checkDB("trap: depth", depthDB); err != nil {
		return nil, err
	}
	r := load * math.Expm1(depthDB/20*math.Ln10)
	qp := q * math.Exp(depthDB/40*math.Ln10)
	w := 2 * math.Pi * fc
	return Network{Series(Beside(L(r/(w*qp)), C(qp/(w*r)), R(r)))}, nil
}
