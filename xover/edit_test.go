package xover

import (
	"errors"
	"math"
	"strings"
	"testing"
)

// replaced returns src with one piece of text replaced; it must be there once.
func replaced(t *testing.T, src, from, to string) string {
	t.Helper()
	if strings.Count(src, from) != 1 {
		t.Fatalf("%q is there %d times", from, strings.Count(src, from))
	}
	return strings.Replace(src, from, to, 1)
}

// TestEdit changes values and looks at every byte: what should differ is written here by hand.
func TestEdit(t *testing.T) {
	type change struct{ from, to string }
	tests := []struct {
		name, file string
		values     map[string]float64
		changes    []change
	}{
		{"nothing", "harbour", nil, nil},
		{"a value that it has already", "harbour", map[string]float64{"C2": 12e-6}, nil},
		{"short form", "harbour", map[string]float64{"R1": 5.6}, []change{{`R1 = "6.2 ohm"   `, `R1 = "5.6 ohm"   `}}},
		{"inline tables", "harbour", map[string]float64{"L1": 1.5e-3, "L2": 0.33e-3},
			[]change{{`"1.8 mH"`, `"1.5 mH"`}, {`{ value = "0.27 mH", dcr`, `{ value = "0.33 mH", dcr`}}},
		{"all digits that the value has", "harbour", map[string]float64{"C3": 6.8123456789e-6}, []change{{`"6.8 uF"`, `"6.8123456789 uF"`}}},
		{"a table of its own, three quotes, a value behind another key", "spelling", map[string]float64{"R1": 10, "C1": 3.3e-6, "L1": 0.5e-3},
			[]change{{`"8.2 ohm" # in`, `"10 ohm" # in`}, {`'''4.7 uF'''`, `"3.3 uF"`}, {`"1 mH"`, `"0.5 mH"`}}},
		{"a code", "threeway", map[string]float64{"R1": 0.68, "C3": 12e-6}, []change{{`"R47"`, `"0.68 ohm"`}, {`C3 = "10u"`, `C3 = "12 uF"`}}},
		{"one that another follows", "threeway", map[string]float64{"R2": 3.9}, []change{{`"3R3"`, `"3.9 ohm"`}}},
		{"a byte order mark and CRLF", "windows", map[string]float64{"C1": 12e-6}, []change{{`"10 µF" # K`, `"12 uF" # K`}}},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			src := readFile(t, "testdata/good/"+test.file+".toml")
			want := string(src)
			for _, c := range test.changes {
				want = replaced(t, want, c.from, c.to)
			}
			got, err := Edit(src, test.values)
			if err != nil {
				t.Fatal(err)
			}
			if string(got) != want {
				t.Errorf("got\n%s\nwant\n%s", got, want)
			}
		})
	}
}

func TestEditControl(t *testing.T) {
	src := readFile(t, "testdata/good/tone.toml")
	got, err := EditControl(src, map[string]float64{"bass": 0.75, "treble": 0})
	if err != nil {
		t.Fatal(err)
	}
	want := replaced(t, string(src), "at = 0.5\n", "at = 0.75\n")
	want = replaced(t, want, "at = 1\n", "at = 0.0\n") // a TOML float has a point
	if string(got) != want {
		t.Errorf("got\n%s\nwant\n%s", got, want)
	}
}

func TestEditRefuses(t *testing.T) {
	src := readFile(t, "testdata/good/threeway.toml")
	tests := []struct {
		name, want string
		err        error
	}{
		{"no such part", `there is no part "C44"; did you mean "C4"?`, edited(src, "C44", 1e-6)},
		{"a follower", "R3 follows R2; set R2, or give R3 a value of its own", edited(src, "R3", 1)},
		{"zero", "C1: 0 F is not above zero; give a positive value", edited(src, "C1", 0)},
		{"negative", "C1: -0.1 uF is not above zero; give a positive value", edited(src, "C1", -1e-7)},
		{"not a number", "C1: NaN F is not finite; give a finite value", edited(src, "C1", math.NaN())},
		{"infinite", "C1: +Inf F is not finite; give a finite value", edited(src, "C1", math.Inf(1))},
		{"henries for farads", "C1: 47 F is beyond what can be; check the prefix; a capacitance is between 0.001 pF and 10 F", edited(src, "C1", 47)},
		{"no such control", `there is no control "presents"; did you mean "presence"?`, turned(src, "presents", 1)},
		{"too far", `control "presence" is turned to 1.5; give a number from 0 to 1`, turned(src, "presence", 1.5)},
		{"turned to no number", `control "presence" is turned to NaN; give a number from 0 to 1`, turned(src, "presence", math.NaN())},
	}
	for _, test := range tests {
		if test.err == nil || test.err.Error() != test.want {
			t.Errorf("%s: got %v\nwant %s", test.name, test.err, test.want)
		}
	}
	var all Errors
	if _, err := Edit([]byte("title = 3"), nil); !errors.As(err, &all) {
		t.Errorf("a bad file gave %v, want Errors", err)
	}
}

func edited(src []byte, part string, v float64) error {
	out, err := Edit(src, map[string]float64{part: v})
	if out != nil {
		return errors.New("edited")
	}
	return err
}

func turned(src []byte, control string, at float64) error {
	out, err := EditControl(src, map[string]float64{control: at})
	if out != nil {
		return errors.New("edited")
	}
	return err
}

func TestEditDCR(t *testing.T) {
	const src = `[parts]
L1 = "0.5 mH" # short
L2 = { value = "1 mH", dcr = "0.3 ohm" } # stated
L3 = { value = "2 mH", hold = true }
L4 = { same = "L1" }
[parts.L5]
value = "3 mH" # a table of its own
[driver.d]
impedance = "8 ohm"
[[way]]
name = "low"
driver = "d"
network = ["series L1", "series L2", "series L3", "series L4", "series L5"]
`
	const want = `[parts]
L1 = { value = "0.5 mH", dcr = "0.25 ohm" } # short
L2 = { value = "1 mH", dcr = "0.35 ohm" } # stated
L3 = { value = "2 mH", dcr = "0.45 ohm", hold = true }
L4 = { same = "L1", dcr = "0.25 ohm" }
[parts.L5]
value = "3 mH"
dcr = "0.5 ohm" # a table of its own
[driver.d]
impedance = "8 ohm"
[[way]]
name = "low"
driver = "d"
network = ["series L1", "series L2", "series L3", "series L4", "series L5"]
`
	got, err := EditDCR([]byte(src), map[string]float64{"L1": 0.25, "L2": 0.35, "L3": 0.45, "L4": 0.25, "L5": 0.5})
	if err != nil {
		t.Fatal(err)
	}
	if string(got) != want {
		t.Errorf("got\n%s", got)
	}
	for _, bad := range []map[string]float64{{"L9": 1}, {"L1": -1}, {"L1": math.NaN()}} {
		if got, err := EditDCR([]byte(src), bad); err == nil || got != nil {
			t.Errorf("%v: no error", bad)
		}
	}
}

func TestEditTol(t *testing.T) {
	const src = `[parts]
L1 = "0.5 mH" # short
C2 = { value = "1 uF", tol = "10 %" } # stated
R3 = { value = "2 ohm", hold = true }
[driver.d]
impedance = "8 ohm"
[[way]]
name = "low"
driver = "d"
network = ["series L1", "series C2", "series R3"]
`
	want := strings.NewReplacer(`"0.5 mH"`, `{ value = "0.5 mH", tol = "2 %" }`, `"10 %"`, `"5 %"`, `"2 ohm"`, `"2 ohm", tol = "1 %"`).Replace(src)
	got, err := EditTol([]byte(src), map[string]float64{"L1": 0.02, "C2": 0.05, "R3": 0.01})
	if err != nil {
		t.Fatal(err)
	}
	if string(got) != want {
		t.Errorf("got\n%s", got)
	}
	for _, bad := range []map[string]float64{{"L9": 0.1}, {"L1": -1}, {"L1": math.NaN()}} {
		if got, err := EditTol([]byte(src), bad); err == nil || got != nil {
			t.Errorf("%v: no error", bad)
		}
	}
}
