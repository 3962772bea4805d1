package quantity

import (
	"errors"
	"strings"
	"testing"
)

// TestParse compares with the decimal value written out as a Go constant, which is the nearest float64; Parse
// promises that very number, so there is no tolerance.
//
// The prefixes are those of the SI Brochure, 9th edition, BIPM 2019, table 7; the litre is 10⁻³ m³ by its
// table 8 (from memory).
func TestParse(t *testing.T) {
	tests := []struct {
		text string
		want float64
		unit Unit
	}{
		{"4.7 uF", 4.7e-6, Farad},
		{"4.7 \u00b5F", 4.7e-6, Farad}, // the micro sign
		{"4.7 \u03bcF", 4.7e-6, Farad}, // the Greek letter
		{"4.7uF", 4.7e-6, Farad},
		{"  4.7\t uF ", 4.7e-6, Farad},
		{"4.7\u00a0uF", 4.7e-6, Farad}, // a no-break space, as documents have it
		{"100 pF", 100e-12, Farad},
		{"22nF", 22e-9, Farad},
		{"10 mF", 10e-3, Farad},
		{"1 F", 1, Farad},
		{"0.33mH", 0.33e-3, Henry},
		{"330 uH", 330e-6, Henry},
		{"47 nH", 47e-9, Henry},
		{"8 ohm", 8, Ohm},
		{"8ohm", 8, Ohm},
		{"8 ohms", 8, Ohm},
		{"8 Ohm", 8, Ohm},
		{"8 \u03a9", 8, Ohm}, // Greek capital omega
		{"8 \u2126", 8, Ohm}, // the ohm sign
		{"20 mohm", 0.020, Ohm},
		{"4.7 k\u03a9", 4.7e3, Ohm},
		{"4.7 Kohm", 4.7e3, Ohm},
		{"1 Mohm", 1e6, Ohm},
		{"1 Gohm", 1e9, Ohm},
		{"2.2 kHz", 2200, Hertz},
		{"2.2kHz", 2200, Hertz},
		{"20Hz", 20, Hertz},
		{"20 hz", 20, Hertz},
		{"2.2 khz", 2200, Hertz},
		{"1 MHz", 1e6, Hertz},
		{"250 mm", 0.250, Metre},
		{"-90 mm", -0.090, Metre},
		{"\u221290 mm", -0.090, Metre}, // a minus sign
		{"+90 mm", 0.090, Metre},
		{"26 cm", 0.26, Metre},
		{"2 m", 2, Metre},
		{"0 mm", 0, Metre},
		{"132 cm2", 132e-4, SquareMetre},
		{"132 cm^2", 132e-4, SquareMetre},
		{"132 cm²", 132e-4, SquareMetre},
		{"13200 mm2", 13200e-6, SquareMetre},
		{"2 dm2", 2e-2, SquareMetre},
		{"0.022 m2", 0.022, SquareMetre},
		{"12 l", 12e-3, CubicMetre},
		{"12 L", 12e-3, CubicMetre},
		{"12 litres", 12e-3, CubicMetre},
		{"500 ml", 0.5e-3, CubicMetre},
		{"12 dm3", 12e-3, CubicMetre},
		{"500 cm³", 500e-6, CubicMetre},
		{"0.012 m^3", 0.012, CubicMetre},
		{"10 ms", 10e-3, Second},
		{"3 us", 3e-6, Second},
		{"2.83 V", 2.83, Volt},
		{"500 mV", 0.5, Volt},
		{"60 W", 60, Watt},
		{"1 kW", 1e3, Watt},
		{"87 dB", 87, Decibel},
		{"-3 dB", -3, Decibel},
		{"5 %", 0.05, Percent},
		{"5%", 0.05, Percent},
		{"343 m/s", 343, MetrePerSecond},
		{"1.2 kg/m3", 1.2, KilogramPerCubicMetre},
		{"1.2 kg/m³", 1.2, KilogramPerCubicMetre},
		{"3.1", 3.1, None},
		{".5 ohm", 0.5, Ohm},
		{"5. ohm", 5, Ohm},
		{"1e-6 F", 1e-6, Farad},
		{"1E3uF", 1e-3, Farad},
		{"0.1 uF", 0.1e-6, Farad}, // 0.1 × 1e-6 in floating point would be another number
	}
	for _, test := range tests {
		v, unit, err := Parse(test.text)
		if err != nil || v != test.want || unit != test.unit {
			t.Errorf("Parse(%q) = %v, %v, %v; want %v, %v", test.text, v, unit, err, test.want, test.unit)
		}
		if v, err := ParseAs(test.text, test.unit); err != nil || v != test.want {
			t.Errorf("ParseAs(%q, %v) = %v, %v; want %v", test.text, test.unit, v, err, test.want)
		}
	}
}

func TestParseErrors(t *testing.T) {
	const units = `use ohm, H, F, Hz, m, m2, m3, l, s, V, W, dB, %, m/s or kg/m3, with a prefix where it fits, such as "4.7 uF"`
	for text, want := range map[string]string{
		"":                       `the text is empty; write a number with its unit, such as "4.7 uF"`,
		"  ":                     `the text is empty; write a number with its unit, such as "4.7 uF"`,
		"loud":                   `"loud" does not begin with a number; write a number with its unit, such as "4.7 uF"`,
		"-":                      `"-" does not begin with a number; write a number with its unit, such as "4.7 uF"`,
		"NaN ohm":                `"NaN ohm" does not begin with a number; write a number with its unit, such as "4.7 uF"`,
		"inf":                    `"inf" does not begin with a number; write a number with its unit, such as "4.7 uF"`,
		"4,7 uF":                 `"4,7 uF" has a comma in the number; write a decimal point ("4.7 uF") and nothing between the thousands`,
		"1,000 ohm":              `"1,000 ohm" has a comma in the number; write a decimal point ("1.000 ohm") and nothing between the thousands`,
		"4.7 parsec":             `"4.7 parsec" has no unit that is known: "parsec"; ` + units,
		"4.7.1 ohm":              `"4.7.1 ohm" has no unit that is known: ".1 ohm"; ` + units,
		"1 000 ohm":              `"1 000 ohm" has no unit that is known: "000 ohm"; ` + units,
		"0x10 ohm":               `"0x10 ohm" has no unit that is known: "x10 ohm"; ` + units,
		"2.2 kHZ":                `"2.2 kHZ" has no unit that is known: "kHZ"; write "2.2 kHz"`,
		"10 uf":                  `"10 uf" has no unit that is known: "uf"; write "10 uF"`,
		"10 mh":                  `"10 mh" has no unit that is known: "mh"; write "10 mH"`,
		"4 OHM":                  `"4 OHM" has no unit that is known: "OHM"; write "4 ohm"`,
		"2 pm":                   `"2 pm" has no unit that is known: "pm"; ` + units,
		"4.7k":                   `"4.7k" has the prefix k and no unit; write the unit too, such as "4.7 kohm"`,
		"10 u":                   `"10 u" has the prefix u and no unit; write the unit too, such as "10 uF"`,
		"1e400 ohm":              `"1e400 ohm" is out of the range of numbers; check the power of ten and the prefix`,
		"1e308 kohm":             `"1e308 kohm" is out of the range of numbers; check the power of ten and the prefix`,
		"1e-400 ohm":             `"1e-400 ohm" is out of the range of numbers; check the power of ten and the prefix`,
		"1e99999999999 ohm":      `"1e99999999999 ohm" is out of the range of numbers; check the power of ten and the prefix`,
		"8 \xff":                 `the text is not UTF-8; write a number with its unit, such as "4.7 uF"`,
		strings.Repeat("1", 100): `the text is 100 bytes long; write a number with its unit, such as "4.7 uF"`,
	} {
		v, unit, err := Parse(text)
		if err == nil || err.Error() != want || v != 0 || unit != None {
			t.Errorf("Parse(%q) = %v, %v\ngot  %v\nwant %s", text, v, unit, err, want)
		}
		if _, ok := errors.AsType[*Error](err); !ok {
			t.Errorf("Parse(%q): the error is a %T", text, err)
		}
	}
}

func TestParseAsErrors(t *testing.T) {
	for _, test := range []struct {
		text string
		unit Unit
		want string
	}{
		{"8 H", Ohm, `"8 H" is an inductance, not a resistance; write a resistance such as "8 ohm"`},
		{"8", Ohm, `"8" has no unit; write a resistance such as "8 ohm"`},
		{"8 ohmm", Ohm, `"8 ohmm" has no unit that is known: "ohmm"; write a resistance such as "8 ohm"`},
		{"eight", Ohm, `"eight" does not begin with a number; write a resistance such as "8 ohm"`},
		{"87", Decibel, `"87" has no unit; write "87 dB"`},
		{"5", Percent, `"5" has no unit; write "5 %"`},
		{"3.1 ohm", None, `"3.1 ohm" is a resistance; write a bare number such as "0.5"`},
		{"2.2k", Hertz, `"2.2k" has the prefix k and no unit; write the unit too, such as "2.2 kHz"`},
		{"2.2 k", Ohm, `"2.2 k" has the prefix k and no unit; write the unit too, such as "2.2 kohm"`},
		{"500u", Henry, `"500u" has the prefix u and no unit; write the unit too, such as "500 uH"`},
		{"12 k", CubicMetre, `"12 k" has no unit that is known: "k"; write a volume such as "12 l"`},
		{"2 mm", Hertz, `"2 mm" is a length, not a frequency; write a frequency such as "2.2 kHz"`},
	} {
		if v, err := ParseAs(test.text, test.unit); err == nil || err.Error() != test.want || v != 0 {
			t.Errorf("ParseAs(%q, %v) = %v\ngot  %v\nwant %s", test.text, test.unit, v, err, test.want)
		}
	}
}

// TestUnitWords holds each unit's own example to what ParseAs takes.
func TestUnitWords(t *testing.T) {
	for u := None; u < unitCount; u++ {
		if _, err := ParseAs(u.Example(), u); err != nil {
			t.Errorf("the example of %v: %v", u, err)
		}
		if u.Noun() == "" || u.String() == "" {
			t.Errorf("unit %d has no name", u)
		}
	}
	if got := Unit(99).String(); got != "unknown unit" {
		t.Errorf("Unit(99) is called %q", got)
	}
}

// TestSymbolsAreUnique spells every unit with every prefix: each spelling must be found as its own.
func TestSymbolsAreUnique(t *testing.T) {
	type meaning struct {
		unit     Unit
		exponent int
	}
	seen := map[string]meaning{}
	for _, s := range symbols {
		for _, p := range append([]string{""}, strings.Split(s.prefixes, "")...) {
			exponent := s.exponent
			if p != "" {
				exponent += s.power * prefixExponent([]rune(p)[0])
				if prefixExponent([]rune(p)[0]) == 0 {
					t.Errorf("prefix %q has no meaning", p)
				}
			}
			here := meaning{s.unit, exponent}
			if before, again := seen[p+s.text]; again && before != here {
				t.Errorf("%q means %v and %v", p+s.text, before, here)
			}
			seen[p+s.text] = here
			if unit, e, ok := lookUp(p + s.text); !ok || (meaning{unit, e}) != here {
				t.Errorf("%q is found as %v × 10^%d, want %v", p+s.text, unit, e, here)
			}
		}
	}
}
