package quantity

import "strings"

// A Unit is what a number counts.
type Unit uint8

// The units. A value is always in the SI unit named, whatever the text said.
const (
	None                  Unit = iota // a bare number
	Ohm                               // Ω
	Henry                             // H
	Farad                             // F
	Hertz                             // Hz
	Metre                             // m
	SquareMetre                       // m²
	CubicMetre                        // m³; litres are read and written
	Second                            // s
	Volt                              // V
	Watt                              // W
	Decibel                           // dB, as it stands
	Percent                           // %, as a fraction: 5 % is 0.05
	MetrePerSecond                    // m/s
	KilogramPerCubicMetre             // kg/m³
	unitCount
)

// words says how a unit is spoken of in messages.
type words struct {
	name    string // of the unit
	noun    string // of what it measures
	example string // a right text
}

// vocabulary has an entry for each Unit.
var vocabulary = [unitCount]words{
	None:                  {"number", "a bare number", "0.5"},
	Ohm:                   {"ohm", "a resistance", "8 ohm"},
	Henry:                 {"henry", "an inductance", "0.33 mH"},
	Farad:                 {"farad", "a capacitance", "4.7 uF"},
	Hertz:                 {"hertz", "a frequency", "2.2 kHz"},
	Metre:                 {"metre", "a length", "250 mm"},
	SquareMetre:           {"square metre", "an area", "132 cm2"},
	CubicMetre:            {"cubic metre", "a volume", "12 l"},
	Second:                {"second", "a time", "10 ms"},
	Volt:                  {"volt", "a voltage", "2.83 V"},
	Watt:                  {"watt", "a power", "60 W"},
	Decibel:               {"decibel", "a level", "87 dB"},
	Percent:               {"percent", "a percentage", "5 %"},
	MetrePerSecond:        {"metre per second", "a speed", "343 m/s"},
	KilogramPerCubicMetre: {"kilogram per cubic metre", "a density", "1.2 kg/m3"},
}

// String returns the unit's name, "ohm".
func (u Unit) String() string { return u.words().name }

// Example returns a text that ParseAs takes for this unit, "8 ohm".
func (u Unit) Example() string { return u.words().example }

// Noun returns what the unit measures with its article, "a resistance".
func (u Unit) Noun() string { return u.words().noun }

func (u Unit) words() words {
	if u >= unitCount {
		return words{"unknown unit", "an unknown quantity", ""}
	}
	return vocabulary[u]
}

// A symbol is one way of writing a unit.
type symbol struct {
	text     string
	unit     Unit
	exponent int    // the symbol stands for 10^exponent SI units
	power    int    // a prefix counts this many times: 2 for an area
	prefixes string // that may stand before it
}

// symbols are all the spellings that are understood. Each spelling, with any of its prefixes, is unique.
// Case matters where SI says that it does (m is milli, M is mega), so it matters everywhere but for the few
// spellings that are common and cannot be mistaken.
var symbols = []symbol{
	{"ohm", Ohm, 0, 1, "pnuµμmkKMG"},
	{"ohms", Ohm, 0, 1, "pnuµμmkKMG"},
	{"Ohm", Ohm, 0, 1, "pnuµμmkKMG"},
	{"Ohms", Ohm, 0, 1, "pnuµμmkKMG"},
	{"\u03a9", Ohm, 0, 1, "pnuµμmkKMG"}, // Greek capital omega
	{"\u2126", Ohm, 0, 1, "pnuµμmkKMG"}, // the ohm sign
	{"H", Henry, 0, 1, "pnuµμmk"},
	{"F", Farad, 0, 1, "pnuµμm"},
	{"Hz", Hertz, 0, 1, "mkKMG"},
	{"hz", Hertz, 0, 1, "mkKMG"},
	{"m", Metre, 0, 1, "nuµμmcdk"},
	{"m2", SquareMetre, 0, 2, "mcd"},
	{"m^2", SquareMetre, 0, 2, "mcd"},
	{"m²", SquareMetre, 0, 2, "mcd"},
	{"m3", CubicMetre, 0, 3, "mcd"},
	{"m^3", CubicMetre, 0, 3, "mcd"},
	{"m³", CubicMetre, 0, 3, "mcd"},
	{"l", CubicMetre, -3, 1, "uµμmcd"},
	{"L", CubicMetre, -3, 1, "uµμmcd"},
	{"litre", CubicMetre, -3, 1, ""},
	{"litres", CubicMetre, -3, 1, ""},
	{"liter", CubicMetre, -3, 1, ""},
	{"liters", CubicMetre, -3, 1, ""},
	{"s", Second, 0, 1, "pnuµμm"},
	{"V", Volt, 0, 1, "nuµμmk"},
	{"W", Watt, 0, 1, "pnuµμmkM"},
	{"dB", Decibel, 0, 1, ""},
	{"db", Decibel, 0, 1, ""},
	{"%", Percent, -2, 1, ""},
	{"m/s", MetrePerSecond, 0, 1, "k"},
	{"kg/m3", KilogramPerCubicMetre, 0, 1, ""},
	{"kg/m^3", KilogramPerCubicMetre, 0, 1, ""},
	{"kg/m³", KilogramPerCubicMetre, 0, 1, ""},
}

// prefixExponent returns the power of ten that a prefix stands for. The micro sign U+00B5 and the Greek mu
// U+03BC look the same and are both in use; u is what a keyboard has.
func prefixExponent(prefix rune) int {
	switch prefix {
	case 'p':
		return -12
	case 'n':
		return -9
	case 'u', '\u00b5', '\u03bc':
		return -6
	case 'm':
		return -3
	case 'c':
		return -2
	case 'd':
		return -1
	case 'k', 'K':
		return 3
	case 'M':
		return 6
	case 'G':
		return 9
	}
	return 0
}

// lookUp finds the unit that text spells, "uF", and the power of ten by which to multiply.
func lookUp(text string) (unit Unit, exponent int, ok bool) {
	for _, s := range symbols {
		prefix, found := strings.CutSuffix(text, s.text)
		if !found {
			continue
		}
		if prefix == "" {
			return s.unit, s.exponent, true
		}
		for _, p := range s.prefixes {
			if prefix == string(p) {
				return s.unit, s.exponent + s.power*prefixExponent(p), true
			}
		}
	}
	return None, 0, false
}

// nearestSpelling returns the right spelling of a unit that differs from text by case alone, "kHz" for
// "khz"; "" if there is none, or if there are two that mean different things ("mf" could never be "MF").
func nearestSpelling(text string) string {
	for _, s := range symbols {
		for _, p := range append([]string{""}, strings.Split(s.prefixes, "")...) {
			if strings.EqualFold(p+s.text, text) && (p == "" || strings.HasPrefix(text, p)) {
				return p + s.text
			}
		}
	}
	return ""
}
