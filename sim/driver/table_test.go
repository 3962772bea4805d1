package driver

import (
	"errors"
	"fmt"
	"slices"
	"strings"
	"testing"
	"testing/iotest"
)

// Columns, comments and line ends as measuring programs are seen to write them: common practice, no source.
func TestReadTable(t *testing.T) {
	plain := []Row{{20, 6.25, -10, 1}, {25, 7.5, -20.5, 2}, {30, 9, -40, 3}}
	for name, tt := range map[string]struct {
		src  string
		want []Row // Line is compared only if it is not 0
	}{
		"spaces":                 {"20 6.25 -10\n25 7.5 -20.5\n30 9 -40\n", plain},
		"no last newline":        {"20 6.25 -10\n25 7.5 -20.5\n30 9 -40", plain},
		"tabs":                   {"20\t6.25\t-10\n25\t7.5\t-20.5\n30\t9\t-40\n", plain},
		"commas":                 {"20,6.25,-10\n25,7.5,-20.5\n30,9,-40\n", plain},
		"commas and spaces":      {"20, 6.25, -10\n25, 7.5, -20.5\n30, 9, -40\n", plain},
		"semicolons":             {"20;6.25;-10\n25;7.5;-20.5\n30;9;-40\n", plain},
		"semicolons at the ends": {"20 ; 6.25 ; -10 ;\n25 ; 7.5 ; -20.5 ;\n30;9;-40;\n", plain},
		"CR LF":                  {"20 6.25 -10\r\n25 7.5 -20.5\r\n30 9 -40\r\n", plain},
		"CR alone":               {"20 6.25 -10\r25 7.5 -20.5\r30 9 -40\r", plain},
		"byte-order mark":        {"\uFEFF20 6.25 -10\n25 7.5 -20.5\n30 9 -40", plain},
		"control-Z at the end":   {"20 6.25 -10\r\n25 7.5 -20.5\r\n30 9 -40\r\n\x1A", plain},
		"no-break spaces":        {"20\u00A06.25\u00A0-10\n25\u00A07.5\u00A0-20.5\n30\u00A09\u00A0-40", plain},
		"the long minus sign":    {"20 6.25 \u221210\n25 7.5 \u221220.5\n30 9 \u221240", plain},
		"exponents":              {"2e1 +6.25E+0 -1e1\n2.5E1 .75e1 -20.5\n3.E+01 9 -4e1\n", plain},
		"exponents and commas":   {"2,0E+01 6,25E+00 -1,0E+01\n2,5E+01 7,5E+00 -2,05E+01\n3,0E+01 9,0E+00 -4,0E+01\n", plain},
		"blank lines":            {"\n  20   6.25 -10  \n\n\t\n25 7.5 -20.5\n\n30 9 -40", []Row{{20, 6.25, -10, 2}, {25, 7.5, -20.5, 5}, {30, 9, -40, 7}}},
		"comments":               {"* a\n# b\n; c\n\"d\"\nFreq Z Phase\n// e\n20 6.25 -10\nmore words\n25 7.5 -20.5\nend 3\n30 9 -40", []Row{{20, 6.25, -10, 7}, {25, 7.5, -20.5, 9}, {30, 9, -40, 11}}},
		"more columns":           {"20 6.25 -10 0.99\n25 7.5 -20.5 0.98\n30 9 -40 0.97", plain},
		"falling":                {"30 9 -40\n25 7.5 -20.5\n20 6.25 -10\n", []Row{{20, 6.25, -10, 3}, {25, 7.5, -20.5, 2}, {30, 9, -40, 1}}},
		"two columns":            {"20 6.25\n25 7.5\n30 9", []Row{{20, 6.25, 0, 1}, {25, 7.5, 0, 2}, {30, 9, 0, 3}}},
		"whole-number commas":    {"20,6,-10\n25,7,-20\n30,9,-40", []Row{{20, 6, -10, 1}, {25, 7, -20, 2}, {30, 9, -40, 3}}},
		"comma tight and loose":  {"20,6.25, -10\n25,7.5, -20.5\n30,9, -40", plain},
		"decimal commas, spaces": {"20,0 6,25 -10\n25 7,5 -20,5\n30 9 -40", plain},
		"decimal commas, semi":   {"20,0;6,25;-10\n25;7,5;-20,5\n30;9;-40", plain},
		"decimal commas, tabs":   {"20\t6,25\t-10\n25\t7,5\t-20,5\n30\t9\t-40", plain},
		"three places, commas":   {"20,000;6,250;-10,000\n25,000;7,500;-20,500\n30,000;9,000;-40,000", plain},
	} {
		table, err := ReadTable("w.zma", strings.NewReader(tt.src))
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if !slices.Equal(table.Rows, tt.want) {
			t.Errorf("%s: got %v, want %v", name, table.Rows, tt.want)
		}
		if got, want := table.HasPhase, name != "two columns"; got != want {
			t.Errorf("%s: HasPhase is %t, want %t", name, got, want)
		}
		if len(table.Notes) > 0 {
			t.Errorf("%s: unexpected notes %q", name, table.Notes)
		}
	}
}

func TestReadTableNotes(t *testing.T) {
	for src, tt := range map[string]struct {
		rows  []Row
		notes []string
	}{
		"0 0 0\n20 80 1\n30 81 2\n20 79 5\n30 81 2\n40 82 3": {
			[]Row{{20, 79.5, 3, 2}, {30, 81, 2, 3}, {40, 82, 3, 6}}, // the means, by hand
			[]string{
				"w.frd:1: the row at 0 Hz was passed over",
				"w.frd:4: 2 row(s) repeat a frequency and were averaged; they differ by up to 1, at 20 Hz",
			},
		},
		// Across the jump of a wrapped phase: 179° and -179° are 2° apart, and 180° is between them.
		"20 80 179\n20 80 -179\n30 81 170\n40 82 160": {
			[]Row{{20, 80, 180, 1}, {30, 81, 170, 3}, {40, 82, 160, 4}},
			[]string{"w.frd:2: 1 row(s) repeat another and were passed over"},
		},
		"2 way box\n3 litres\n20 80 1\n30 81 2\n40 82 3": {
			[]Row{{20, 80, 1, 3}, {30, 81, 2, 4}, {40, 82, 3, 5}},
			[]string{`w.frd:1: "2 way box" is no row of numbers and was taken for a title`},
		},
	} {
		table, err := ReadTable("w.frd", strings.NewReader(src))
		if err != nil {
			t.Errorf("%q: %v", src, err)
			continue
		}
		if !slices.Equal(table.Rows, tt.rows) {
			t.Errorf("%q: got %v, want %v", src, table.Rows, tt.rows)
		}
		if !slices.Equal(table.Notes, tt.notes) {
			t.Errorf("%q: got notes %q, want %q", src, table.Notes, tt.notes)
		}
	}
}

func TestReadTableErrors(t *testing.T) {
	const (
		comma   = "a comma stands inside a number, or looks as if it did; write numbers with a decimal point and no thousands comma, 1020.5"
		nothing = "w.zma: there are no rows of numbers in the file; give rows of a frequency in Hz, a value and a phase in degrees"
		binary  = "w.zma: the file is not plain text; save it as plain text (UTF-8 or ASCII)"
	)
	for name, tt := range map[string]struct{ src, want string }{
		"empty":                    {"", nothing},
		"words only":               {"Freq Z Phase\n# nothing\n", nothing},
		"one column":               {"20\n", "w.zma:1: the row has one column only; give a frequency in Hz, a value and a phase in degrees"},
		"one row":                  {"* c\n20 8 0\n* d\n", "w.zma:2: the table ends after 1 row(s) of different frequency; give three or more; ten an octave make a good one"},
		"two, one of them thrice":  {"20 8 0\n21 8 0\n20 8 0\n20 8 0", "w.zma:4: the table ends after 2 row(s) of different frequency; give three or more; ten an octave make a good one"},
		"no number":                {"20 8 0\n21 8..1 0\n", `w.zma:2: column 2 is "8..1", which is no number; give a number such as 6.25`},
		"no number in any row":     {"20 8..1 0\n21 8..2 0\n", `w.zma:1: column 2 is "8..1", which is no number; give a number such as 6.25`},
		"hexadecimal":              {"20 8 0\n0x15 8 0\n", `w.zma:2: column 1 is "0x15", which is no number; give a number such as 6.25`},
		"a letter for a digit":     {"20 8 0\nl00 8 0\n", `w.zma:2: column 1 is "l00", which is no number; give a number such as 6.25`},
		"not a number":             {"20 8 0\n21 NaN 0\n", `w.zma:2: column 2 is "NaN"; leave the row out`},
		"NaN first":                {"20 8 0\nnan 8 0\n", `w.zma:2: column 1 is "nan"; leave the row out`},
		"NaN in the first row":     {"20 NaN 0\n21 8 0\n", `w.zma:1: column 2 is "NaN"; leave the row out`},
		"infinite":                 {"20 8 0\n21 1e999 0\n", `w.zma:2: column 2 is "1e999"; leave the row out`},
		"an empty column":          {"20;8;0\n21;;0\n", "w.zma:2: column 2 is empty; give a number such as 6.25"},
		"negative frequency":       {"-20 8 0\n", "w.zma:1: the frequency is -20 Hz; give a frequency in Hz"},
		"wild phase":               {"20 8 1e9\n", "w.zma:1: the phase is 1e+09 degrees; give a phase in degrees"},
		"phase now and then":       {"20 8 0\n21 8\n22 8 0\n", "w.zma:2: the row has no phase, and others have one; give a phase in every row or in none"},
		"phase now and then, CSV":  {"20,8.5,0\n21,8.5\n22,8.5,0\n", "w.zma:2: the row has no phase, and others have one; give a phase in every row or in none"},
		"two phases":               {"20 8 0\n21 8 0\n20 8 -170\n", "w.zma:3: the phase is 170 degrees from that of another row at 20 Hz; leave one of them out"},
		"decimal commas, commas":   {"20,5,6,1,-3,2\n", "w.zma:1: " + comma},
		"two of them, commas":      {"20,5, 80\n", "w.zma:1: " + comma},
		"comma and point":          {"20,5;6,1;-3\n21.5;6.1;-3\n", "w.zma:2: " + comma},
		"point, then comma":        {"20.5;6.1;-3\n21,5;6,1;-3\n", "w.zma:2: " + comma},
		"point in the same number": {"1.020,5;6,1;-3\n", "w.zma:1: " + comma},
		"decimal comma and column": {"20,5 6,1\n21,6\n", "w.zma:2: " + comma},
		"thousands comma":          {"980 6.1 -3\n1,020 6.1 -3\n", "w.zma:2: " + comma},
		"thousands, whole numbers": {"980;6;-3\n1,020;6;-3\n2,020;6;-3\n", "w.zma:2: " + comma},
		"thousands throughout":     {"1,120;6;-3\n2,020;6;-3\n", "w.zma:1: " + comma},
		"thousands comma, commas":  {"980, 6.1, -3\n1,120, 6.1, -3\n", "w.zma:2: " + comma},
		"the same, all above 1000": {"1,120, 6.1, -3\n1,220, 6.1, -3\n", "w.zma:1: " + comma},
		"the same, no spaces":      {"1,120,6.1,-3\n2,020,6.1,-3\n", "w.zma:2: " + comma},
		"a number of two commas":   {"1,020,500;6;-3\n", "w.zma:1: " + comma},
		"UTF-32":                   {"\xff\xfe\x00\x002\x00\x00\x00", binary},
		"binary":                   {"20 8 0\n\x00\x01\n", binary},
		"unprintable in a message": {"20 8 0\n1 \x1b[31mred 0\n", `w.zma:2: column 2 is "\x1b[31mred", which is no number; give a number such as 6.25`},
		"too large":                {strings.Repeat("20 8 0\n", MaxTableBytes/7+1), "w.zma: the file is larger than 4 MiB; give a table of measured rows, which is far smaller"},
		"too many rows":            {strings.Repeat("20 8 0\n", maxRows+1), "w.zma:100001: the table has more than 100000 rows; thin it out"},
		"long line":                {"20 8 0\n30 8 0" + strings.Repeat(" 1", maxLine/2) + "\n", "w.zma:2: the line is longer than 4096 characters; give a table with a row of two or three numbers a line"},
	} {
		table, err := ReadTable("w.zma", strings.NewReader(tt.src))
		if err == nil || err.Error() != tt.want {
			t.Errorf("%s: got error %v, want %s", name, err, tt.want)
		}
		if te := (*TableError)(nil); !errors.As(err, &te) {
			t.Errorf("%s: error is %T, want a *TableError", name, err)
		}
		if table != nil {
			t.Errorf("%s: a table came with the error", name)
		}
	}
}

func TestReadTablePassesReadErrorsOn(t *testing.T) {
	broken := errors.New("the disk is gone")
	if _, err := ReadTable("w.zma", iotest.ErrReader(broken)); !errors.Is(err, broken) {
		t.Errorf("got %v, want it to wrap %v", err, broken)
	}
}

func ExampleReadTable() {
	const file = "* woofer in its box\nHz, ohm, degrees\n20, 7.1, 31\n40, 32.5, -4\n80, 9.2, -40\n"
	t, err := ReadTable("woofer.zma", strings.NewReader(file))
	if err != nil {
		fmt.Println(err)
		return
	}
	z, err := NewImpedanceTable(t)
	if err != nil {
		fmt.Println(err)
		return
	}
	lo, hi := z.Range()
	fmt.Println(len(t.Rows), "rows,", lo, "Hz to", hi, "Hz")
	// Output: 3 rows, 20 Hz to 80 Hz
}
