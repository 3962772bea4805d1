package driver

import "testing"

// What spreadsheets put in quotes is seen in exports: common practice, no source.
func TestUnquoted(t *testing.T) {
	for line, want := range map[string]string{
		`"20.0","5.6","-3"`:     "20.0;5.6;-3",
		`"20.0", "5.6" , "-3"`:  "20.0;5.6;-3",
		`"20,0","5,6","-3"`:     "20,0;5,6;-3", // decimal commas
		`"20,0";"5,6";-3`:       "20,0;5,6;-3",
		`"1,020","5.6","-3"`:    "1,020;5.6;-3", // which is refused as a thousands comma
		`'20.0' '5.6'  '-3'`:    "20.0;5.6;-3",
		"\"20.0\"\t5.6\t\"-3\"": "20.0;5.6;-3",
		`20.0,"5.6","-3"`:       "20.0;5.6;-3",
		`"20.0 5.6 -3"`:         "20.0 5.6 -3",
		`"20.0,5.6,-3"`:         "20.0,5.6,-3",
		`"20.0","","-3"`:        "20.0;;-3",
		`"20.0","five","-3"`:    "20.0;five;-3",    // a row with a slip
		`"NaN","5.6","-3"`:      "NaN;5.6;-3",      // to be refused, not passed over
		`"20.0","5.6","-3`:      `20.0","5.6","-3`, // to be refused, not passed over

		// Comments, and what has no quotes around a column.
		`"20 Hz to 20 kHz"`:      `"20 Hz to 20 kHz"`,
		`"Freq","Z","Phase"`:     `"Freq","Z","Phase"`,
		`"8" woofer in 40 l`:     `"8" woofer in 40 l`,
		`"the 12" woofer"`:       `"the 12" woofer"`,
		`"`:                      `"`,
		`'`:                      `'`,
		`""`:                     `""`,
		`1'020.5 6.1 -3`:         `1'020.5 6.1 -3`,
		`20.0 5.6 -3`:            `20.0 5.6 -3`,
		`'tis a woofer of 8 ohm`: `'tis a woofer of 8 ohm`,
	} {
		if got := unquoted(line); got != want {
			t.Errorf("%s: got %s, want %s", line, got, want)
		}
	}
}
