package driver

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// readFile reads a table of testdata/tables and makes of it what its ending says: an impedance, or a response, of
// minimum phase if the table has no phase.
func readFile(name string) (t *Table, notes []string, err error) {
	r, err := os.Open(filepath.Join("testdata", "tables", name))
	if err != nil {
		return nil, nil, err
	}
	defer r.Close() // it is only read
	t, err = ReadTable(name, r)
	if err != nil {
		return nil, nil, err
	}
	switch {
	case filepath.Ext(name) == ".zma":
		var z *ImpedanceTable
		if z, err = NewImpedanceTable(t); err == nil {
			notes = z.Notes()
		}
	case t.HasPhase:
		var p *ResponseTable
		if p, err = NewResponseTable(t); err == nil {
			notes = slices.Concat(p.Notes(), p.Doubt().Notes())
		}
	default:
		var p *MinimumResponse
		if p, err = NewMinimumResponse(t); err == nil {
			notes = p.Notes()
		}
	}
	return t, notes, err
}

// Every file of testdata/tables is read right or refused: the rows (Line left out; nil: those of spaces.zma or
// phase-wrapped.frd, as its README says), and the notes without the file's name before them.
func TestTableFiles(t *testing.T) {
	impedance := []Row{{20, 6.9, 28.5, 0}, {25, 8.4, 35.25, 0}, {31.5, 12.6, 37, 0}, {40, 29.8, -3.5, 0}, {50, 13.1, -36.75, 0}, {63, 8.6, -31.5, 0}, {80, 6.9, -18.25, 0}, {100, 6.4, -8.5, 0}}
	response := []Row{{100, 81.5, 95.25, 0}, {200, 86.75, 48.5, 0}, {400, 88.25, 12, 0}, {800, 88, -20.5, 0}, {1600, 87.5, -61.75, 0}, {3150, 84.25, -118, 0}, {6300, 72.5, 176.5, 0}, {12500, 55.25, 120.25, 0}}
	// phases returns rows with other phases.
	phases := func(rows []Row, deg ...float64) []Row {
		rows = slices.Clone(rows)
		for i := range rows {
			rows[i].PhaseDeg = deg[i]
		}
		return rows
	}
	// times returns rows in other units.
	times := func(rows []Row, frequency, value float64) []Row {
		rows = slices.Clone(rows)
		for i := range rows {
			rows[i].Frequency *= frequency
			rows[i].Value *= value
		}
		return rows
	}
	averaged := slices.Clone(impedance)
	averaged[3] = Row{40, 30, -4, 0} // of 29.8 Ω, -3.5° and 30.2 Ω, -4.5°

	type good struct {
		rows  []Row
		notes []string
	}
	files := map[string]good{
		"row-at-0-hz.zma":                 {nil, []string{":1: the row at 0 Hz was passed over"}},
		"out-of-order.zma":                {nil, []string{":3: the frequency turns back to 100 Hz; it runs over rows that are there already; all were put in order, as of one measurement; if they are of two, keep one"}},
		"title-with-a-digit.zma":          {nil, []string{`:1: "2 way box, woofer" is no row of numbers and was taken for a title`}},
		"rows-that-repeat.zma":            {nil, []string{":5: 1 row(s) repeat another and were passed over"}},
		"rows-that-repeat-and-differ.zma": {averaged, []string{":5: 1 row(s) repeat a frequency and were averaged; they differ by up to 0.4, at 40 Hz"}},
		"whole-hertz.frd": {[]Row{{20, 70.3, 149, 0}, {21, 70.8, 146.5, 0}, {22, 71.1, 145, 0}},
			[]string{":2: 3 row(s) repeat a frequency and were averaged; they differ by up to 0.4, at 20 Hz", ": the table ends at 22 Hz: is its first column in kHz? It is taken as Hz; give Hz"}},
		"phase-followed.frd":         {phases(response, 95.25, 48.5, 12, -20.5, -61.75, -118, -183.5, -239.75), nil},
		"phase-shifted-by-turns.frd": {phases(response, 1175.25, 1128.5, -708, -20.5, 2458.25, 2402, 176.5, -1679.75), nil},
		"phase-from-0-to-360.frd":    {phases(response, 95.25, 48.5, 12, 339.5, 298.25, 242, 176.5, 120.25), nil},
		"phase-in-steps-too-coarse.frd": {phases(response, 90, -20, -160, 30, -110, 100, -60, 150),
			[]string{":3: the phase turns by more than 135 degrees from one row to the next near 400 Hz, and in 5 more places, so which way it went is a guess; take the flight time out, or measure in finer steps"}},
		"two-measurements.zma": {slices.Concat(impedance[:1], []Row{{21, 9, 1, 0}}, impedance[1:2], []Row{{26, 9.5, 2, 0}}, impedance[2:3], []Row{{33, 13, 3, 0}}, impedance[3:]),
			[]string{":9: the frequency turns back to 21 Hz; it runs over rows that are there already; all were put in order, as of one measurement; if they are of two, keep one"}},
		"low-band-last.zma": {nil, []string{":5: the frequency turns back to 20 Hz; the rows were put in order"}},
		// lg(6300/80)/lg 2 = 6.30, lg(126000/80)/lg 2 = 10.62
		"gap.zma": {slices.Concat(impedance[:7], []Row{{6300, 21.5, 62.25, 0}}),
			[]string{":8: there are no rows from 80 to 6300 Hz, over 6.3 octaves; what is there is a curve drawn through the rows beside it"}},
		"radians-a-second.zma": {slices.Concat(impedance[:7], []Row{{126e3, 28.5, 71, 0}}),
			[]string{":8: there are no rows from 80 to 126000 Hz, over 10.6 octaves; what is there is a curve drawn through the rows beside it",
				": the table ends at 126000 Hz: is its first column in radians a second? It is taken as Hz; give Hz"}},
		"kilohertz.zma": {times(impedance, 1e-3, 1), []string{": the table ends at 0.1 Hz: is its first column in kHz? It is taken as Hz; give Hz"}},
		"milliohm.zma":  {times(impedance, 1, 1e3), []string{": the impedance is from 6400 to 29800: is it in ohm? It is taken as ohm; give ohm"}},
		"pascal.frd": {[]Row{{100, 0.2377, 95.25, 0}, {200, 0.435, 48.5, 0}, {400, 0.517, 12, 0}, {800, 0.5024, -20.5, 0}, {1600, 0.4743, -61.75, 0}, {3150, 0.3262, -118, 0}, {6300, 0.0843, 176.5, 0}, {12500, 0.0116, 120.25, 0}},
			[]string{": the highest level is 0.517: is it in dB SPL, at 2.83 V? It is taken as that; give dB SPL"}},
		"minus-nothing.zma": {phases(impedance, 28.5, 35.25, 37, 0, -36.75, -31.5, -18.25, -8.5), nil},
		// By hand: 12.6·cos 120° = -6.3.
		"negative-resistance.zma": {phases(impedance, 28.5, 95, 120, -3.5, -36.75, -31.5, -18.25, -8.5),
			[]string{":4: the real part of the impedance is negative in 2 rows from 25 to 31.5 Hz, at worst -6.3 ohm at 31.5 Hz, and no passive driver gives power; check how it was measured"}},
	}
	for _, name := range []string{
		"spaces.zma", "spaces-in-columns.zma", "tabs.zma", "tabs-and-spaces.zma", "commas.zma", "commas-and-spaces.zma",
		"semicolons.zma", "semicolons-at-the-ends.zma", "comments-of-every-kind.zma", "header-row.zma", "header-of-many-lines.frd",
		"byte-order-mark.zma", "utf-16-le.zma", "utf-16-be.zma", "utf-16-le-without-mark.zma", "utf-16-be-without-mark.zma",
		"latin-1.zma", "latin-1-no-break-spaces.zma", "minus-signs-of-a-word-processor.zma", "cr-lf.zma", "cr.zma",
		"no-newline-at-the-end.zma", "control-z-at-the-end.zma", "blank-lines.zma", "exponents.zma", "falling.zma",
		"decimal-commas-and-semicolons.zma", "decimal-commas-and-tabs.zma", "decimal-commas-and-spaces.zma", "decimal-commas-three-places.zma",
		"five-columns.frd", "phase-wrapped.frd", "quoted.zma", "quoted-decimal-commas.zma", "quoted-title.zma",
		"header-above-every-page.zma", "header-of-names.frd", "footer.zma", "exponents-with-commas.zma",
	} {
		files[name] = good{}
	}
	const (
		comma  = "a comma stands inside a number, or looks as if it did; write numbers with a decimal point and no thousands comma, 1020.5"
		number = "which is no number; give a number such as 6.25"
		few    = "row(s) of different frequency; give three or more; ten an octave make a good one"
		binary = ": the file is not plain text; save it as plain text (UTF-8 or ASCII)"
		none   = ": there are no rows of numbers in the file; give rows of a frequency in Hz, a value and a phase in degrees"
		order  = "; put the columns in the order frequency in Hz, value, phase in degrees, and no other before them"
		space  = "; the first row has %d; if a space stands inside a number, leave it out, 1020.5"
	)
	refused := map[string]string{
		"bad-word-for-a-number.zma":          `:3: column 2 is "twelve", ` + number,
		"bad-letter-for-a-digit.zma":         `:8: column 1 is "l00", ` + number,
		"bad-two-points.zma":                 `:6: column 2 is "8.6.1", ` + number,
		"bad-units-in-rows.zma":              `:3: column 1 is "31.5Hz", ` + number,
		"bad-empty-column.zma":               ":4: column 2 is empty; give a number such as 6.25",
		"bad-nan.zma":                        `:4: column 2 is "NaN"; leave the row out`,
		"bad-infinite.zma":                   `:4: column 2 is "Inf"; leave the row out`,
		"bad-negative-impedance.zma":         ":4: the impedance is -29.8 ohm; give its magnitude in ohm, above 0",
		"bad-impedance-of-nothing.zma":       ":4: the impedance is 0 ohm; give its magnitude in ohm, above 0",
		"bad-negative-frequency.zma":         ":1: the frequency is -20 Hz; give a frequency in Hz",
		"bad-impedance-without-phase.zma":    ": the impedance has no phase column; give three columns: Hz, ohm, degrees",
		"bad-phase-in-some-rows.zma":         ":6: the row has no phase, and others have one; give a phase in every row or in none",
		"bad-one-column.zma":                 ":1: the row has one column only; give a frequency in Hz, a value and a phase in degrees",
		"bad-one-row.zma":                    ":2: the table ends after 1 " + few,
		"bad-two-rows.zma":                   ":3: the table ends after 2 " + few,
		"bad-empty.zma":                      none,
		"bad-words-alone.zma":                none,
		"bad-phases-of-two-sweeps.zma":       ":5: the phase is 175 degrees from that of another row at 40 Hz; leave one of them out",
		"bad-thousands-commas.frd":           ":3: " + comma,
		"bad-thousands-commas-alone.frd":     ":2: " + comma,
		"bad-decimal-commas-and-commas.zma":  ":1: " + comma,
		"bad-comma-here-and-point-there.zma": ":6: " + comma,
		"bad-not-text.zma":                   binary,
		"bad-utf-32.zma":                     binary,
		"bad-quoted-word.zma":                `:3: column 2 is "twelve", ` + number,
		"bad-quote-left-open.zma":            `:3: column 1 is "31.5\"", ` + number,
		"bad-thousands-spaces.zma":           `:6: the row has 4 columns, and column 2 is "120"` + fmt.Sprintf(space, 3),
		"bad-thousands-spaces-alone.zma":     `:1: the row has 4 columns, and column 2 is "020"` + fmt.Sprintf(space, 4),
		"bad-thousands-points.zma":           `:6: a point seems to part thousands in "1.120", after "980"; write it without, 1020.5`,
		"bad-thousands-apostrophes.zma":      `:6: column 1 is "1'120", ` + number,
		"bad-header-phase-before-ohm.zma":    `:1: the header has "Phase(deg)" for column 2` + order,
		"bad-header-real-and-imaginary.zma":  `:1: the header has "Re(Z)" for column 2` + order,
		"bad-header-kilohertz.zma":           `:1: the header has "kHz" for column 1; give Hz`,
		"bad-header-radians.zma":             `:1: the header has "Phase[rad]" for column 3; give degrees`,
		"bad-header-row-numbers.zma":         `:1: the header has "No." for column 1` + order,
		"bad-header-decibel.zma":             `:1: the header has "Z[dB]" for column 2; give the impedance in ohm, or correct the header`,
		"bad-header-ohm.frd":                 `:1: the header has "ohm" for column 2; give the sound pressure level in dB, or correct the header`,
		"bad-header-coherence.frd":           `:1: the header has "Coherence" for column 3` + order,
		"bad-header-below-rows.zma":          ":1: the row stands above the header in line 2; put a * before it if it is a remark",
		"bad-footer-with-a-count.zma":        `:9: column 2 is "rows", ` + number,
		"bad-en-dashes.zma":                  ":4: column 3 is \"–3.5\", " + number,
		"bad-degree-signs.zma":               `:1: column 3 is "28.5°", ` + number,
		"bad-nul.zma":                        binary,
		"bad-level.frd":                      ":4: the level is 8800 dB; give the sound pressure level in dB",
	}

	for name, want := range files {
		table, notes, err := readFile(name)
		if err != nil {
			t.Error(err)
			continue
		}
		if want.rows == nil {
			want.rows = impedance
			if filepath.Ext(name) == ".frd" {
				want.rows = response
			}
		}
		rows := slices.Clone(table.Rows)
		for i := range rows {
			rows[i].Line = 0
		}
		// Averages are rounded; what is read is not.
		alike := func(a, b Row) bool {
			return a.Frequency == b.Frequency && abs(a.Value-b.Value) < 1e-12 && abs(a.PhaseDeg-b.PhaseDeg) < 1e-12
		}
		if !slices.EqualFunc(rows, want.rows, alike) {
			t.Errorf("%s: got rows %v, want %v", name, rows, want.rows)
		}
		for i := range notes {
			notes[i] = strings.TrimPrefix(notes[i], name)
		}
		if !slices.Equal(notes, want.notes) {
			t.Errorf("%s: got notes %q, want %q", name, notes, want.notes)
		}
	}
	for name, want := range refused {
		if _, _, err := readFile(name); err == nil || err.Error() != name+want {
			t.Errorf("%s: got error %v, want %s", name, err, name+want)
		}
	}

	entries, err := os.ReadDir(filepath.Join("testdata", "tables"))
	if err != nil {
		t.Fatal(err)
	}
	tables := 0
	for _, e := range entries {
		if name := e.Name(); strings.HasSuffix(name, ".zma") || strings.HasSuffix(name, ".frd") {
			tables++
			_, isGood := files[name]
			_, isBad := refused[name]
			if !isGood && !isBad && name != "two-columns.frd" && name != "flight-time-left-in.frd" {
				t.Errorf("%s is in no test", name)
			}
		}
	}
	if tables < 100 {
		t.Errorf("%d tables; 100 are wanted", tables)
	}
}

func abs(x float64) float64 { return max(x, -x) }

// Four ways to write the same phase make one response.
func TestPhasesAreOne(t *testing.T) {
	pressures := func(name string) (ps []complex128) {
		table, _, err := readFile(name)
		if err != nil {
			t.Fatal(err)
		}
		r, err := NewResponseTable(table)
		if err != nil {
			t.Fatal(err)
		}
		for _, f := range grid(50, 20e3, 40) {
			ps = append(ps, r.Pressure(f))
		}
		return ps
	}
	want := pressures("phase-followed.frd")
	for _, name := range []string{"phase-wrapped.frd", "phase-shifted-by-turns.frd", "phase-from-0-to-360.frd"} {
		for i, p := range pressures(name) {
			nearC(t, name, p, want[i], 1e-11) // rounding, of angles of several turns
		}
	}
}

// Two columns are no measured response, but one of minimum phase.
func TestTwoColumns(t *testing.T) {
	table, notes, err := readFile("two-columns.frd")
	if err != nil {
		t.Fatal(err)
	}
	if table.HasPhase || len(table.Rows) != 8 || table.Rows[7].Value != 55.25 {
		t.Errorf("got %+v", table)
	}
	if len(notes) != 2 || !strings.HasPrefix(notes[0], "two-columns.frd: its minimum phase takes the level to be one that falls by ") ||
		notes[1] != "two-columns.frd: it has 1.0 rows an octave, so the phase is that of a smooth curve through them; give ten or more" {
		t.Errorf("got notes %q", notes)
	}
	const want = `two-columns.frd: the response has no phase column; give three columns: Hz, dB, degrees; or let it be minimum phase with phase = "minimum"`
	if r, err := NewResponseTable(table); r != nil || err == nil || err.Error() != want {
		t.Errorf("got %v and error %v, want %s", r, err, want)
	}
}

// The file was made with 0.4 m of flight, 1.166 ms.
func TestFlightTimeInAFile(t *testing.T) {
	table, notes, err := readFile("flight-time-left-in.frd")
	if err != nil {
		t.Fatal(err)
	}
	if delay, spread := ExcessDelay(table); abs(delay-0.4/343) > 5e-6 || !(spread < 5e-6) { // as TestExcessDelay
		t.Errorf("got %.2f µs ± %.2f, want %.2f", delay*1e6, spread*1e6, 0.4/343*1e6)
	}
	if len(notes) > 0 {
		t.Errorf("got notes %q", notes)
	}
}
