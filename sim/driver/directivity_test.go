package driver

import (
	"errors"
	"fmt"
	"math"
	"math/cmplx"
	"slices"
	"strings"
	"testing"
)

// tableOf makes a table of a pressure in dB and degrees at 1/3-octave steps or so, as a file would give it.
func tableOf(t testing.TB, name string, lo, hi float64, dB, deg func(f float64) float64) *Table {
	t.Helper()
	var b strings.Builder
	for _, f := range grid(lo, hi, 61) {
		fmt.Fprintf(&b, "%.9g %.9g %.9g\n", f, dB(f), math.Remainder(deg(f), 360))
	}
	table, err := ReadTable(name, strings.NewReader(b.String()))
	if err != nil {
		t.Fatal(err)
	}
	return table
}

// sloping is a response that falls by drop dB a decade above 100 Hz and lags by lag degrees times lg(f/100 Hz).
func sloping(t testing.TB, name string, drop, lag float64) *Table {
	return tableOf(t, name, 100, 10e3,
		func(f float64) float64 { return 90 - drop*math.Log10(f/100) },
		func(f float64) float64 { return 20 - lag*math.Log10(f/100) })
}

// TestToward: logarithmic slopes make every expected value a product of three numbers: weight, slope, decades.
func TestToward(t *testing.T) {
	axis := sloping(t, "0", 0, 0)
	at := func(deg, drop, lag float64) AngledTable {
		return AngledTable{AngleDeg: deg, Table: sloping(t, fmt.Sprint(deg), drop, lag)}
	}
	both := [2][]AngledTable{{at(30, 3, 30), at(60, 6, 600), at(-30, 4, 40)}, {at(20, 10, 0), at(-20, 2, 0), at(180, 40, 0)}}
	right := [2][]AngledTable{{at(30, 3, 30), at(60, 6, 60)}, nil}
	for _, c := range []struct {
		name        string
		tables      [2][]AngledTable
		off, around float64
		drop, lag   float64 // dB and degrees a decade
		invented    int
	}{
		{"on the axis", both, 0, 0, 0, 0, 0},
		{"at a measured angle", both, 30, 0, 3, 30, 0},
		{"halfway to the axis", both, 15, 0, 1.5, 15, 0},
		{"between two, of which one turns by more than a whole turn", both, 45, 0, 4.5, 315, 0},
		{"to the left", both, 15, 180, 2, 20, 0},
		{"beyond the last to the left", both, 90, 180, 4, 40, 1},
		{"up", both, 10, 90, 5, 0, 0},
		{"down", both, 20, -90, 2, 0, 0},
		{"behind above: from 20° to 180°", both, 100, 90, 25, 0, 0},
		{"behind below: the same file at 180°", both, 100, -90, 21, 0, 0},
		{"between the planes: half of each", both, 15, 45, 0.5*1.5 + 0.5*7.5, 7.5, 0},
		{"nearer the horizontal: 3/4 and 1/4", both, 15, 30, 0.75*1.5 + 0.25*7.5, 0.75 * 15, 0},
		{"one side, the other as its mirror image", right, 30, 180, 3, 30, 1},
		{"one plane, all round as it", right, 45, 90, 4.5, 45, 1},
		{"one plane, all round as it, to the left", right, 45, 135, 4.5, 45, 2},
		{"one plane, beyond its last angle", right, 120, 0, 6, 60, 1},
	} {
		d, err := NewDirectivity(axis, c.tables[0], c.tables[1], false)
		if err != nil {
			t.Fatal(err)
		}
		toward := d.Toward(c.off, c.around)
		for _, decades := range []float64{0, 0.5, 1, 2} {
			want := cmplx.Rect(math.Pow(10, -c.drop*decades/20), -c.lag*decades*math.Pi/180)
			// Nine printed digits of some hundred degrees.
			nearC(t, fmt.Sprintf("%s, %g decades up", c.name, decades), toward.At(100*math.Pow(10, decades)), want, 1e-7)
		}
		if got := d.Invented(c.off, c.around); len(got) != c.invented {
			t.Errorf("%s: invented: %q, want %d", c.name, got, c.invented)
		}
	}
}

// TestTowardTurns: tables whose written phases are a whole turn apart say the same.
func TestTowardTurns(t *testing.T) {
	flat := func(float64) float64 { return 90 }
	axis := tableOf(t, "0", 100, 10e3, flat, func(float64) float64 { return 170 })
	off := tableOf(t, "10", 100, 10e3, flat, func(float64) float64 { return -170 }) // 20° on
	d, err := NewDirectivity(axis, []AngledTable{{AngleDeg: 10, Table: off}}, nil, false)
	if err != nil {
		t.Fatal(err)
	}
	nearC(t, "halfway", d.Toward(5, 0).At(1e3), cmplx.Rect(1, 10*math.Pi/180), 1e-9)
}

// TestDirectivityMinimumPhase: a level that falls by 20 dB a decade more than on the axis lags by 90° more (Bode), and
// halfway in angle by 45°; phase columns are not looked at.
func TestDirectivityMinimumPhase(t *testing.T) {
	axis, off := sloping(t, "0", 0, 0), sloping(t, "40", 20, 77)
	d, err := NewDirectivity(axis, nil, []AngledTable{{AngleDeg: 40, Table: off}}, true)
	if err != nil {
		t.Fatal(err)
	}
	// 1e-3: the slope goes on beyond the table as fitted, and the integral is discrete.
	nearC(t, "at 40°", d.Toward(40, 90).At(1e3), cmplx.Rect(0.1, -math.Pi/2), 1e-3)
	nearC(t, "at 20°", d.Toward(20, 90).At(1e3), cmplx.Rect(math.Sqrt(0.1), -math.Pi/4), 1e-3)
}

// TestDirectivityTimeBase: the flight time that all files hold does not count; one that lacks it is told.
func TestDirectivityTimeBase(t *testing.T) {
	level := func(f float64) float64 { return 90 - 10*math.Log10(1+math.Pow(f/3000, 4)) }
	far := func(f float64) float64 { return -360 * f * 3e-3 }
	near := func(f float64) float64 { return 0 }
	d, err := NewDirectivity(tableOf(t, "0", 200, 10e3, level, far), []AngledTable{{AngleDeg: 10, Table: tableOf(t, "10", 200, 10e3, level, far)}}, nil, false)
	if err != nil || len(d.Notes()) > 0 {
		t.Fatal(err, d.Notes())
	}
	nearC(t, "the same at 10°", d.Toward(10, 0).At(5e3), 1, 1e-6)
	d, err = NewDirectivity(tableOf(t, "0", 200, 10e3, level, far), []AngledTable{{AngleDeg: 10, Table: tableOf(t, "10", 200, 10e3, level, near)}}, nil, false)
	if err != nil || !slices.ContainsFunc(d.Notes(), func(n string) bool { return strings.Contains(n, "one time base") }) {
		t.Error(err, d.Notes())
	}
}

func TestDirectivityErrors(t *testing.T) {
	axis := sloping(t, "0", 0, 0)
	two, err := ReadTable("two.frd", strings.NewReader("100 90\n200 90\n400 90\n"))
	if err != nil {
		t.Fatal(err)
	}
	d, err := NewDirectivity(axis, []AngledTable{{AngleDeg: 10, Table: two}}, nil, false)
	if e, ok := errors.AsType[*TableError](err); !ok || e.File != "two.frd" || d != nil {
		t.Errorf("no phase: %v", err)
	}
}

func TestTowardAllocates(t *testing.T) {
	d, err := NewDirectivity(sloping(t, "0", 0, 0), []AngledTable{{AngleDeg: 10, Table: sloping(t, "10", 1, 1)}, {AngleDeg: 20, Table: sloping(t, "20", 1, 1)}}, nil, false)
	if err != nil {
		t.Fatal(err)
	}
	toward := d.Toward(15, 0)
	if n := testing.AllocsPerRun(100, func() { toward.At(1000) }); n != 0 {
		t.Errorf("%g allocations", n)
	}
}
