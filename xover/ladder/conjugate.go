package ladder

import (
	"errors"
	"fmt"
	"math"
)

// Conjugate returns the network, across the driver, that makes a driver of impedance Re + Z look like the
// plain resistance Re at every frequency, where Z is the excess (it holds resistors, inductors and
// capacitors to any depth) and re is Re in Ω. The network is Re in series with the dual of Z about Re:
//
//	1/(Re + Z) + 1/(Re + Re²/Z) = 1/(Re + Z) + Z/(Re·(Z + Re)) = 1/Re
//
// exactly, for any Z. The identity is that of the constant-resistance networks of O. J. Zobel, "Distortion
// Correction in Electrical Circuits with Constant Resistance Recurrent Networks", Bell System Technical
// Journal 7, 1928 (from memory).
func Conjugate(re float64, excess Expr) (Network, error) {
	if err := check(quantity{"conjugate: Re", re, " Ω"}); err != nil {
		return nil, err
	}
	if err := excess.check(0); err != nil {
		return nil, err
	}
	return conjugate(re, excess), nil
}

// conjugate is Conjugate for arguments that have been checked.
func conjugate(re float64, excess Expr) Network {
	// Re and what resistance the dual has in series with it are one resistor to buy.
	dual := excess.dual(re * re)
	chain := []Expr{dual}
	if dual.Op == InSeries {
		chain = dual.Args
	}
	network := []Expr{R(re)}
	for _, e := range chain {
		if e.Op == Leaf && e.Part.Kind == Resistor {
			network[0].Part.Value += e.Part.Value
		} else {
			network = append(network, e)
		}
	}
	if len(network) == 1 {
		return Network{Shunt(network[0])}
	}
	return Network{Shunt(Chain(network...))}
}

// VoiceCoil returns the network, across the driver, that takes out the inductance of its voice coil:
// R = Re in series with C = Le/Re². re is Re in Ω, le is Le in H.
//
// It is exact when the driver is Re + s·Le and nothing else. A real driver is that only well above its
// resonance, and only as far as its coil's inductance is lossless: with eddy currents in the pole piece a
// single R and C make it resistive at one frequency. Conjugate takes a lossy coil, and Dual the resonance too.
//
// A. N. Thiele, "Optimum Passive Loudspeaker Dividing Networks", Proc. IREE Australia 36, 1975; W. M. Leach Jr.,
// "Impedance Compensation Networks for the Lossy Voice-Coil Inductance of Loudspeaker Drivers", JAES 52(4), 2004.
func VoiceCoil(re, le float64) (Network, error) {
	if err := check(quantity{"voice coil: Re", re, " Ω"}, quantity{"voice coil: Le", le, " H"}); err != nil {
		return nil, err
	}
	return conjugate(re, L(le)), nil
}

// Resonance returns the network, across the driver, that takes out the peak of its impedance at resonance:
// in series R = Re + Re²/Res = Re·(1 + Qes/Qms), L = Re²·Cmes = Re·Qes/(2π·fs) and C = Lces/Re² = 1/(2π·fs·Qes·Re).
// re is Re in Ω, fs is in Hz.
//
// It is exact when the voice coil has no inductance. Beside VoiceCoil, neither is: each is made for a driver
// without what the other takes out. Dual takes out both.
//
// A. N. Thiele, as for VoiceCoil; the equivalent circuit is that of R. H. Small, "Direct-Radiator Loudspeaker
// System Analysis", JAES 20(5), 1972 (from memory).
func Resonance(re, fs, qms, qes float64) (Network, error) {
	if err := checkMotional("resonance", re, fs, qms, qes); err != nil {
		return nil, err
	}
	return conjugate(re, motional(re, fs, qms, qes)), nil
}

// Dual returns the network, across the driver, that makes Re + s·Le plus the resonance into the resistance Re
// exactly: R = Re in series with C = Le/Re² beside the chain Re²/Res, Re²·Cmes, Lces/Re². re is Re in Ω, le is Le in
// H, fs is in Hz.
//
// It is exact for the data-sheet driver whose coil is lossless. The formula is Conjugate's.
func Dual(re, le, fs, qms, qes float64) (Network, error) {
	if err := check(quantity{"dual: Le", le, " H"}); err != nil {
		return nil, err
	}
	if err := checkMotional("dual", re, fs, qms, qes); err != nil {
		return nil, err
	}
	return conjugate(re, Chain(L(le), motional(re, fs, qms, qes))), nil
}

// motional is what a driver's moving parts look like from its terminals: Res, Cmes and Lces in parallel.
func motional(re, fs, qms, qes float64) Expr {
	w := 2 * math.Pi * fs
	return Beside(R(re*qms/qes), C(qes/(w*re)), L(re/(w*qes)))
}

func checkMotional(name string, re, fs, qms, qes float64) error {
	return check(
		quantity{name + ": Re", re, " Ω"},
		quantity{name + ": fs", fs, " Hz"},
		quantity{name + ": Qms", qms, ""},
		quantity{name + ": Qes", qes, ""},
	)
}

// dual returns the network whose impedance is square/Z, square in Ω².
func (e Expr) dual(square float64) Expr {
	switch {
	case e.Op != Leaf:
		op := InSeries
		if e.Op == InSeries {
			op = InParallel
		}
		args := make([]Expr, len(e.Args))
		for i, arg := range e.Args {
			args[i] = arg.dual(square)
		}
		return Expr{Op: op, Args: args}
	case e.Part.Kind == Inductor:
		return C(e.Part.Value / square)
	case e.Part.Kind == Capacitor:
		return L(e.Part.Value * square)
	default:
		return R(square / e.Part.Value)
	}
}

// maxDepth bounds how deep an excess may nest, so that a faulty one cannot exhaust the stack.
const maxDepth = 64

// check returns an error unless every part of the expression, which lies depth joints deep, has a positive value and
// every joint has something to join.
func (e Expr) check(depth int) error {
	switch {
	case depth > maxDepth:
		return fmt.Errorf("conjugate: the excess is nested over %d deep; write it flatter", maxDepth)
	case e.Op > InParallel:
		return errors.New("conjugate: a joint is neither series nor parallel; make it one")
	case e.Op == Leaf && e.Part.Kind > Capacitor:
		return errors.New("conjugate: a part is neither resistor, inductor nor capacitor; make it one")
	case e.Op == Leaf:
		unit := [...]string{" Ω", " H", " F"}[e.Part.Kind]
		return check(quantity{fmt.Sprintf("conjugate: a %c", letters[e.Part.Kind]), e.Part.Value, unit})
	case len(e.Args) == 0:
		return errors.New("conjugate: a joint holds nothing; put parts into it")
	}
	for _, arg := range e.Args {
		if err := arg.check(depth + 1); err != nil {
			return err
		}
	}
	return nil
}
