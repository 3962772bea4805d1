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
	plain := []Row{{20, 6.25, -10, 1}, {25, 7.5, -20.5, 2}}
	for name, tt := range map[string]struct {
		src  string
		want []Row // Line is compared only if it is not 0
	}{
		"spaces":                {"20 6.25 -10\n25 7.5 -20.5\n", plain},
		"no last newline":       {"20 6.25 -10\n25 7.5 -20.5", plain},
		"tabs":                  {"20\t6.25\t-10\n25\t7.5\t-20.5\n", plain},
		"commas":                {"20,6.25,-10\n25,7.5,-20.5\n", plain},
		"commas and spaces":     {"20, 6.25, -10\n25, 7.5, -20.5\n", plain},
		"semicolons":            {"20;6.25;-10\n25;7.5;-20.5\n", plain},
		"CR LF":                 {"20 6.25 -10\r\n25 7.5 -20.5\r\n", plain},
		"CR alone":              {"20 6.25 -10\r25 7.5 -20.5\r", plain},
		"byte-order mark":       {"\uFEFF20 6.25 -10\n25 7.5 -20.5\n", plain},
		"exponents":             {"2e1 +6.25E+0 -1e1\n2.5E1 .75e1 -20.5\n", plain},
		"blank lines":           {"\n  20   6.25 -10  \n\n\t\n25 7.5 -20.5\n\n", []Row{{20, 6.25, -10, 2}, {25, 7.5, -20.5, 5}}},
		"comments":              {"* a\n# b\n; c\n\"d\"\nFreq Z Phase\n2 way box\n// e\n20 6.25 -10\nmore words\n25 7.5 -20.5", []Row{{20, 6.25, -10, 8}, {25, 7.5, -20.5, 10}}},
		"more columns":          {"20 6.25 -10 0.99\n25 7.5 -20.5 0.98\n", plain},
		"falling":               {"25 7.5 -20.5\n20 6.25 -10\n", []Row{{20, 6.25, -10, 2}, {25, 7.5, -20.5, 1}}},
		"two columns":           {"20 6.25\n25 7.5\n", []Row{{20, 6.25, 0, 1}, {25, 7.5, 0, 2}}},
		"whole-number commas":   {"20,6,-10\n25,7,-20", []Row{{20, 6, -10, 1}, {25, 7, -20, 2}}},
		"comma tight and loose": {"20,6.25, -10\n25,7.5, -20.5", plain},
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
	table, err := ReadTable("w.frd", strings.NewReader("0 0 0\n20 80 1\n30 81 2\n20 79 3\n30 81 2\n"))
	if err != nil {
		t.Fatal(err)
	}
	if want := []Row{{20, 80, 1, 2}, {30, 81, 2, 3}}; !slices.Equal(table.Rows, want) {
		t.Errorf("got %v, want %v: the first row of a frequency counts", table.Rows, want)
	}
	want := []string{
		"w.frd:1: the row at 0 Hz was passed over",
		"w.frd:4: 2 row(s) repeat a frequency and were passed over",
	}
	if !slices.Equal(table.Notes, want) {
		t.Errorf("got notes %q, want %q", table.Notes, want)
	}
}

func TestReadTableErrors(t *testing.T) {
	const comma = "a comma stands inside a number, or looks as if it did; write numbers with a decimal point and no thousands comma, 1020.5"
	for name, tt := range map[string]struct{ src, want string }{
		"empty":                    {"", "w.zma: there are no rows of numbers in the file; give rows of a frequency in Hz, a value and a phase in degrees"},
		"words only":               {"Freq Z Phase\n# nothing\n", "w.zma: there are no rows of numbers in the file; give rows of a frequency in Hz, a value and a phase in degrees"},
		"one column":               {"20\n", "w.zma:1: the row has one column only; give a frequency in Hz, a value and a phase in degrees"},
		"no number":                {"20 8 0\n21 8..1 0\n", `w.zma:2: column 2 is "8..1", which is no number; give a number such as 6.25`},
		"hexadecimal":              {"20 8 0\n0x15 8 0\n", `w.zma:2: column 1 is "0x15", which is no number; give a number such as 6.25`},
		"not a number":             {"20 8 0\n21 NaN 0\n", `w.zma:2: column 2 is "NaN"; leave the row out`},
		"NaN first":                {"20 8 0\nnan 8 0\n", `w.zma:2: column 1 is "nan"; leave the row out`},
		"infinite":                 {"20 8 0\n21 1e999 0\n", `w.zma:2: column 2 is "1e999"; leave the row out`},
		"negative frequency":       {"-20 8 0\n", "w.zma:1: the frequency is -20 Hz; give a frequency in Hz"},
		"wild phase":               {"20 8 1e9\n", "w.zma:1: the phase is 1e+09 degrees; give a phase in degrees"},
		"phase now and then":       {"20 8 0\n21 8\n22 8 0\n", "w.zma:2: the row has no phase, and others have one; give a phase in every row or in none"},
		"decimal commas, spaces":   {"20,5 6,1 -3,2\n", "w.zma:1: " + comma},
		"decimal commas, semi":     {"20,5;6,1;-3,2\n", "w.zma:1: " + comma},
		"decimal commas, tabs":     {"20\t6,1\t-3\n", "w.zma:1: " + comma},
		"decimal commas, commas":   {"20,5,6,1,-3,2\n", "w.zma:1: " + comma},
		"thousands comma":          {"980 6.1 -3\n1,020 6.1 -3\n", "w.zma:2: " + comma},
		"thousands comma, commas":  {"980, 6.1, -3\n1,020, 6.1, -3\n", "w.zma:2: " + comma},
		"UTF-16":                   {"\xff\xfe2\x000\x00", "w.zma: the file is not plain text; save it as plain text (UTF-8 or ASCII)"},
		"binary":                   {"20 8 0\n\x00\x01\n", "w.zma: the file is not plain text; save it as plain text (UTF-8 or ASCII)"},
		"unprintable in a message": {"20 8 0\n1 \x1b[31mred 0\n", `w.zma:2: column 2 is "\x1b[31mred", which is no number; give a number such as 6.25`},
		"too large":                {strings.Repeat("20 8 0\n", MaxTableBytes/7+1), "w.zma: the file is larger than 16 MiB; give a table of measured rows, which is far smaller"},
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
