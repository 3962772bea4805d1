package quantity

import "testing"

// IEC 60062:2016, marking codes for resistors and capacitors, clause 4; R47, 4R7, 470R, 4K7, 47K3 and 4M7 and
// the letters L and G as in the common tables of the code, those for capacitors by the letters p, n, µ, m and
// F of the same standard. Each value is the code read by hand, so there is no tolerance.
func TestParsePartCodes(t *testing.T) {
	tests := []struct {
		name, text string
		want       float64
		unit       Unit
	}{
		{"R1", "R47", 0.47, Ohm},
		{"R1", "4R7", 4.7, Ohm},
		{"R1", "470R", 470, Ohm},
		{"R1", "4K7", 4.7e3, Ohm},
		{"R1", "47K3", 47.3e3, Ohm},
		{"R1", "4M7", 4.7e6, Ohm},
		{"R1", "1G", 1e9, Ohm},
		{"R1", "1L5", 1.5e-3, Ohm},
		{"R1", "0R05", 0.05, Ohm},
		{"Rload", "470K", 470e3, Ohm}, // the first letter is the multiplier, not a tolerance
		{"r1", "4K7", 4.7e3, Ohm},
		{"P1", "250K", 250e3, Ohm},
		{"C1", "p68", 0.68e-12, Farad},
		{"C1", "4p7", 4.7e-12, Farad},
		{"C1", "4n7", 4.7e-9, Farad},
		{"C1", "100n", 100e-9, Farad},
		{"C1", "1\u00b55", 1.5e-6, Farad},
		{"C1", "1\u03bc5", 1.5e-6, Farad},
		{"C1", "10m", 10e-3, Farad},
		{"C1", "1F", 1, Farad},
		{"C1", "2m2", 2.2e-3, Farad},
		// Common usage, no source: the small k, and u for µ.
		{"R1", "2k2", 2.2e3, Ohm},
		{"C1", "4u7", 4.7e-6, Farad},
		{"C1", " 4u7 ", 4.7e-6, Farad},
		// With a unit the name does not matter.
		{"R1", "4.7 ohm", 4.7, Ohm},
		{"R1", "8ohm", 8, Ohm},
		{"C1", "10mH", 10e-3, Henry},
		{"C1", "10uF", 10e-6, Farad},
		{"L1", "0.33 mH", 0.33e-3, Henry},
		{"L1", "10H", 10, Henry},
		{"Zobel", "4.7kohm", 4.7e3, Ohm},
	}
	for _, test := range tests {
		v, unit, err := ParsePart(test.name, test.text)
		if err != nil || v != test.want || unit != test.unit {
			t.Errorf("ParsePart(%q, %q) = %v, %v, %v; want %v, %v", test.name, test.text, v, unit, err, test.want, test.unit)
		}
	}
}

// The tolerance letters are those of IEC 60062:2016, clause 5 (from memory).
func TestParsePartErrors(t *testing.T) {
	for _, test := range []struct{ name, text, want string }{
		{"L1", "4R7", `"4R7" is a code of resistors and capacitors, and L1 is an inductor; write the unit, such as "0.33 mH": makers print R there for the point of ohms as well as of microhenries`},
		{"L1", "1m5", `"1m5" is a code of resistors and capacitors, and L1 is an inductor; write the unit, such as "0.33 mH": makers print R there for the point of ohms as well as of microhenries`},
		{"L1", "10", `"10" has no unit; write "0.33 mH"`},
		{"Pad", "470", `"470" has no unit; write "4.7 kohm" or "4K7"`},
		{"C1", "473", `"473" has no unit; write "4.7 uF" or "4u7"`},
		{"C1", "1e5", `"1e5" is not a code for a capacitance; capacitors take p, n, u or µ, m or F for the point, such as "4u7"`},
		{"X1", "10", `"10" has no unit; write a value with its unit, such as "4.7 uF"`},
		{"X1", "4K7", `"4K7" is a code, and X1 does not begin with R, P or C; write the unit, such as "4.7 kohm" or "4.7 uF"`},
		{"C1", "4K7", `"4K7" is not a code for a capacitance; capacitors take p, n, u or µ, m or F for the point, such as "4u7"`},
		{"R1", "4n7", `"4n7" is not a code for a resistance; resistors take R, K, M, G or L for the point, such as "4K7"`},
		{"C1", "4N7", `"4N7" is not a code for a capacitance; capacitors take p, n, u or µ, m or F for the point, such as "4u7"`},
		{"R1", "4K7J", `"4K7J" ends in the tolerance letter J, 5 %; write value = "4K7" and tol = "5 %"`},
		{"R1", "4K7K", `"4K7K" ends in the tolerance letter K, 10 %; write value = "4K7" and tol = "10 %"`},
		{"C1", "4n7M", `"4n7M" ends in the tolerance letter M, 20 %; write value = "4n7" and tol = "20 %"`},
		{"R1", "470RF", `"470RF" ends in the tolerance letter F, 1 %; write value = "470R" and tol = "1 %"`},
		{"C1", "4u7F", `"4u7F" ends in F, which could be farad or the tolerance letter for 1 %; write "4u7", and the tolerance as tol`},
		{"R1", "4K7Z", `"4K7Z" has "Z" behind the code; write "4K7", and the tolerance as tol`},
		{"R1", "K", `"K" does not begin with a number; write a number with its unit, such as "4.7 uF"`},
		{"R1", "4.7k", `"4.7k" has the prefix k and no unit; write the unit too, such as "4.7 kohm"`},
		{"R1", "4,7 ohm", `"4,7 ohm" has a comma in the number; write a decimal point ("4.7 ohm") and nothing between the thousands`},
	} {
		v, unit, err := ParsePart(test.name, test.text)
		if err == nil || err.Error() != test.want || v != 0 || unit != None {
			t.Errorf("ParsePart(%q, %q) = %v, %v\ngot  %v\nwant %s", test.name, test.text, v, unit, err, test.want)
		}
	}
}
