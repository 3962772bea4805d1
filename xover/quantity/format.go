package quantity

import (
	"math"
	"strconv"
	"strings"
)

// Format writes v, in SI units, with its unit in ASCII: "4.7 uF", "0.05 ohm", "2.2 kHz", "12 l", "5 %".
// It takes the fewest digits that read back exactly: for every finite v, ParseAs(Format(v, u), u) returns v
// bit for bit. The prefix is the one that the trade writes: mH down to 0.01 mH, uF from 0.1 uF to 10000 uF.
func Format(v float64, u Unit) string {
	return write(v, u, -1, false)
}

// Round writes v, in SI units, for people, with that many significant digits (at least 1) and the unit in
// its proper signs: "4.70 µF", "8.00 Ω", "132 cm²". The result need not read back exactly.
func Round(v float64, u Unit, digits int) string {
	return write(v, u, max(digits, 1)-1, true)
}

// write does the work of Format and Round; decimals counts the digits behind the first, -1 for as many as
// v needs.
func write(v float64, u Unit, decimals int, signs bool) string {
	text := strconv.FormatFloat(v, 'e', decimals, 64)
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return join(text, scaleOf(u, 0).text, signs)
	}
	mantissa, power, _ := strings.Cut(text, "e")
	if v == 0 {
		return join(place(mantissa, 0), zeroScale(u).text, signs)
	}
	// FormatFloat has rounded already, so that 999.96 Hz to four digits counts as 1.000e3 here and gets "kHz".
	e, err := strconv.Atoi(power)
	if err != nil {
		panic("quantity: strconv wrote a number without its power of ten") // cannot be: format 'e' has one
	}
	s := scaleOf(u, e)
	return join(place(mantissa, e-s.exponent), s.text, signs)
}

func join(number, unit string, signs bool) string {
	if signs {
		number = strings.Replace(number, "-", "\u2212", 1)
		unit = prettyUnit(unit)
	}
	if unit == "" {
		return number
	}
	return number + " " + unit
}

// prettyUnit replaces what ASCII must make do with.
func prettyUnit(unit string) string {
	for _, pair := range [][2]string{{"ohm", "Ω"}, {"m2", "m²"}, {"m3", "m³"}} {
		unit = strings.Replace(unit, pair[0], pair[1], 1)
	}
	if after, found := strings.CutPrefix(unit, "u"); found {
		unit = "µ" + after
	}
	return unit
}

// place writes mantissa × 10^e, with mantissa in the form d.ddd that FormatFloat gives, without a power of
// ten where that keeps it short.
func place(mantissa string, e int) string {
	if e < -6 || e > 9 {
		return mantissa + "e" + strconv.Itoa(e)
	}
	sign := ""
	if after, found := strings.CutPrefix(mantissa, "-"); found {
		sign, mantissa = "-", after
	}
	digits := strings.Replace(mantissa, ".", "", 1)
	switch point := 1 + e; {
	case point <= 0:
		return sign + "0." + strings.Repeat("0", -point) + digits
	case point >= len(digits):
		return sign + digits + strings.Repeat("0", point-len(digits))
	default:
		return sign + digits[:point] + "." + digits[point:]
	}
}

// A scale is the way to write values of 10^least and above.
type scale struct {
	least    int // power of ten
	exponent int // the text stands for 10^exponent SI units
	text     string
}

// scalesOf lists the scales of a unit from large to small. The last serves all that is smaller too.
func scalesOf(u Unit) []scale {
	switch u {
	case Ohm:
		return []scale{{9, 9, "Gohm"}, {6, 6, "Mohm"}, {3, 3, "kohm"}, {-2, 0, "ohm"}, {-5, -3, "mohm"}, {-8, -6, "uohm"}}
	case Henry:
		return []scale{{0, 0, "H"}, {-5, -3, "mH"}, {-8, -6, "uH"}, {-9, -9, "nH"}}
	case Farad:
		return []scale{{0, 0, "F"}, {-2, -3, "mF"}, {-7, -6, "uF"}, {-9, -9, "nF"}, {-12, -12, "pF"}}
	case Hertz:
		return []scale{{9, 9, "GHz"}, {6, 6, "MHz"}, {3, 3, "kHz"}, {0, 0, "Hz"}}
	case Metre:
		return []scale{{0, 0, "m"}, {-5, -3, "mm"}, {-6, -6, "um"}}
	case SquareMetre:
		return []scale{{0, 0, "m2"}, {-6, -4, "cm2"}, {-8, -6, "mm2"}}
	case CubicMetre:
		return []scale{{0, 0, "m3"}, {-5, -3, "l"}, {-6, -6, "ml"}}
	case Second:
		return []scale{{0, 0, "s"}, {-3, -3, "ms"}, {-6, -6, "us"}, {-9, -9, "ns"}}
	case Volt:
		return []scale{{3, 3, "kV"}, {-1, 0, "V"}, {-3, -3, "mV"}, {-6, -6, "uV"}}
	case Watt:
		return []scale{{3, 3, "kW"}, {-1, 0, "W"}, {-3, -3, "mW"}, {-6, -6, "uW"}}
	case Decibel:
		return []scale{{0, 0, "dB"}}
	case Percent:
		return []scale{{0, -2, "%"}}
	case MetrePerSecond:
		return []scale{{0, 0, "m/s"}}
	case KilogramPerCubicMetre:
		return []scale{{0, 0, "kg/m3"}}
	}
	return []scale{{0, 0, ""}}
}

// scaleOf picks the scale for a value whose first digit stands at 10^e.
func scaleOf(u Unit, e int) scale {
	scales := scalesOf(u)
	for _, s := range scales {
		if e >= s.least {
			return s
		}
	}
	return scales[len(scales)-1]
}

// zeroScale picks the scale for zero: the one without a prefix, if there is one.
func zeroScale(u Unit) scale {
	scales := scalesOf(u)
	for _, s := range scales {
		if s.exponent == 0 {
			return s
		}
	}
	return scales[0]
}
