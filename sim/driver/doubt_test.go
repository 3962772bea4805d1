package driver

import (
	"fmt"
	"math"
	"math/cmplx"
	"strings"
	"testing"
)

// What two sources 0.3 m apart give 60° off their axis is |cos(πfτ)|, with τ = 0.3 m·sin 60°/343 m/s, and changes its sign at each null:
// the phase turns by half a circle there, as it should, and nobody need be told.
func TestNullsAreNoDoubt(t *testing.T) {
	tau := 0.3 * math.Sin(math.Pi/3) / 343
	comb := func(f float64) complex128 { return complex(math.Cos(math.Pi*f*tau), 0) }
	if n := mustResponse(t, phaseFile(grid(200, 20e3, 960), comb)).Doubt().Notes(); len(n) > 0 {
		t.Errorf("notes %q", n)
	}
	// A phase that jumps where the level is as everywhere is none.
	jump := func(f float64) complex128 {
		if f > 3e3 {
			return -1
		}
		return 1
	}
	n := mustResponse(t, phaseFile(grid(200, 20e3, 960), jump)).Doubt().Notes()
	if len(n) != 1 || !strings.Contains(n[0], "more than 135 degrees") {
		t.Errorf("notes %q", n)
	}
}

// Doubts of many tables are one sentence.
func TestDoubtsAddUp(t *testing.T) {
	jumps := func(f float64) complex128 { return cmplx.Rect(1, math.Pi*math.Floor(f/3000)) }
	var angled []AngledTable
	for deg := 10; deg <= 90; deg += 10 {
		table := mustTable(t, phaseFile(grid(200, 20e3, 960), jumps))
		table.Name = fmt.Sprintf("%d.frd", deg)
		angled = append(angled, AngledTable{AngleDeg: float64(deg), Table: table})
	}
	d, err := NewDirectivity(mustTable(t, phaseFile(grid(200, 20e3, 960), func(float64) complex128 { return 1 })), angled, nil, false)
	if err != nil {
		t.Fatal(err)
	}
	// From 200 Hz to 20 kHz there are six multiples of 3 kHz, in nine tables: 53 places besides the first.
	if n := d.Doubt().Notes(); len(n) != 1 || !strings.HasPrefix(n[0], "10.frd:") || !strings.Contains(n[0], ", and in 53 more places of 9 tables, so") {
		t.Errorf("notes %q", n)
	}
}

// Tables whose columns are in other units ask for it; honest ones do not.
func TestOddUnits(t *testing.T) {
	sheet := func(f float64) complex128 { // re 6 Ω and 0.5 mH, a resonance of 30 Ω at 40 Hz with a Q of 3
		s := complex(0, f/40)
		return 6 + complex(0, 2*math.Pi*f*0.5e-3) + 30*s/3/(s*s+s/3+1)
	}
	file := func(from, to float64, hz, deg float64) string {
		var b strings.Builder
		for _, f := range grid(from, to, 100) {
			z := sheet(f)
			fmt.Fprintf(&b, "%.6g %.5g %.5g\n", f*hz, cmplx.Abs(z), cmplx.Phase(z)*deg)
		}
		return b.String()
	}
	rows := ""
	for i := range 400 {
		rows += fmt.Sprintf("%d %g %g\n", i, 6+float64(i%7), float64(i%13))
	}
	var index, resistive strings.Builder // index, Hz, ohm, degrees; and 6 Ω with a motion of 0.3 Ω
	for i, f := range grid(10, 20e3, 2500) {
		z := sheet(f)
		fmt.Fprintf(&index, "%d %.6g %.5g %.5g\n", i, f, cmplx.Abs(z), cmplx.Phase(z)*180/math.Pi)
		fmt.Fprintf(&resistive, "%.6g %.5g %.5g\n", f, 6+cmplx.Abs(z)/100, cmplx.Phase(z))
	}
	hertz := "" // a spectrum in steps of 1 Hz, as a recording of one second gives
	for f := 1.; f <= 2500; f++ {
		hertz += fmt.Sprintf("%g %.5g %.5g\n", f, cmplx.Abs(sheet(f)), cmplx.Phase(sheet(f))*180/math.Pi)
	}
	const degree = 180 / math.Pi
	for _, tt := range []struct{ name, file, want string }{
		{"as it should be", file(10, 20e3, 1, degree), ""},
		{"a subwoofer's", file(5, 500, 1, degree), ""},
		{"kHz", file(10, 20e3, 1e-3, degree), "in kHz?"},
		{"kHz, few rows", "0.1 6 0\n1 7 20\n20 20 60\n", "in kHz?"},
		{"radians", file(10, 20e3, 1, 1), "in radians?"},
		{"no phase", file(10, 20e3, 1, 0), "0 in every row"},
		{"rows counted", rows, "the number of the row?"},
		{"rows counted, many", index.String(), "the number of the row?"},
		{"steps of 1 Hz", hertz, ""},
		{"hardly more than a resistance", resistive.String(), ""},
		{"radians a second", file(10, 20e3, 2*math.Pi, degree), "in radians a second?"},
	} {
		z, err := NewImpedanceTable(mustTable(t, tt.file))
		if err != nil {
			t.Fatal(err)
		}
		n := strings.Join(z.Notes(), "; ")
		if tt.want == "" && n != "" || !strings.Contains(n, tt.want) {
			t.Errorf("%s: notes %q, want %q", tt.name, n, tt.want)
		}
	}
}
