package xover

import "math"

// DefaultMid is the fraction of a logarithmic track that lies below the wiper at half turn when a part does
// not say: 0.1 (0.1 to 0.2 is common practice, no source).
const DefaultMid = 0.1

// Fraction returns how much of a potentiometer's track, 0 to 1, lies between its `from` end and the wiper
// when it is turned to at, 0 to 1; at is brought into that range first. A Linear taper gives at itself. A
// Log taper gives (bˣ − 1)/(b − 1) with b = (1/Mid − 1)², the exponential through (0, 0), (½, Mid) and
// (1, 1); Mid outside (0, 1) counts as DefaultMid. ReverseLog gives 1 − Log(1 − at).
func (p *Part) Fraction(at float64) float64 {
	if !(at > 0) {
		return 0
	}
	if at >= 1 {
		return 1
	}
	switch p.Taper {
	case Log:
		return exponential(at, p.Mid)
	case ReverseLog:
		return 1 - exponential(1-at, p.Mid)
	}
	return at
}

// FractionSlope returns the derivative of Fraction by at, at 0 < at < 1.
func (p *Part) FractionSlope(at float64) float64 {
	switch p.Taper {
	case Log:
		return exponentialSlope(at, p.Mid)
	case ReverseLog:
		return exponentialSlope(1-at, p.Mid)
	}
	return 1
}

// exponentialSlope is the derivative of exponential: bˣ·ln b/(b − 1).
func exponentialSlope(x, mid float64) float64 {
	if !(mid > 0 && mid < 1) {
		mid = DefaultMid
	}
	logB := 2 * math.Log((1-mid)/mid)
	switch {
	case logB == 0:
		return 1
	case logB < 0:
		return logB * math.Exp(x*logB) / math.Expm1(logB)
	}
	return -logB * math.Exp((x-1)*logB) / math.Expm1(-logB)
}

// exponential is the Log taper at x, 0 < x < 1.
func exponential(x, mid float64) float64 {
	if !(mid > 0 && mid < 1) {
		mid = DefaultMid
	}
	logB := 2 * math.Log((1-mid)/mid)
	switch {
	case logB == 0: // mid = 1/2 is a straight line
		return x
	case logB < 0:
		return math.Expm1(x*logB) / math.Expm1(logB)
	}
	// The same with numerator and denominator divided by bˣ and b, so that a large b overflows neither.
	return math.Exp((x-1)*logB) * math.Expm1(-x*logB) / math.Expm1(-logB)
}
