package driver

import (
	"fmt"
	"math"
	"math/cmplx"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"
)

// impedanceFile writes z at freqs as a table.
func impedanceFile(freqs []float64, z func(f float64) complex128) string {
	var b strings.Builder
	for _, f := range freqs {
		v := z(f)
		fmt.Fprintf(&b, "%.12g %.12g %.12g\n", f, cmplx.Abs(v), cmplx.Phase(v)*180/math.Pi)
	}
	return b.String()
}

func mustImpedance(t testing.TB, src string) *ImpedanceTable {
	t.Helper()
	table, err := ReadTable("w.zma", strings.NewReader(src))
	if err != nil {
		t.Fatal(err)
	}
	z, err := NewImpedanceTable(table)
	if err != nil {
		t.Fatal(err)
	}
	return z
}

func mustResponse(t testing.TB, src string) *ResponseTable {
	t.Helper()
	table, err := ReadTable("w.frd", strings.NewReader(src))
	if err != nil {
		t.Fatal(err)
	}
	r, err := NewResponseTable(table)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// A table of a woofer whose impedance is known in closed form (Small 1972): in its rows it must say what the
// table says, and between them what the woofer does. The bound between rows is what a table with 24 rows an
// octave is worth: 0.1 % and 0.1°, a tenth of what an ordinary measuring rig reads. Straight lines would miss
// the peak by 0.5 %.
func TestImpedanceTable(t *testing.T) {
	woofer := func(f float64) complex128 { return wooferA.Impedance(jw(f)) }
	rows := grid(10, 20e3, 264)
	z := mustImpedance(t, impedanceFile(rows, woofer))
	for _, f := range rows {
		nearC(t, fmt.Sprintf("row %g Hz", f), z.Impedance(jw(f)), woofer(f), 1e-10) // 12 figures were written
	}
	for _, f := range grid(10.1, 19.9e3, 1500) {
		got, want := z.Impedance(jw(f)), woofer(f)
		near(t, fmt.Sprintf("|Z| at %g Hz", f), cmplx.Abs(got), cmplx.Abs(want), 1e-3)
		if d := cmplx.Phase(got/want) * 180 / math.Pi; math.Abs(d) > 0.1 {
			t.Errorf("angle at %g Hz is off by %g degrees", f, d)
		}
	}
	if n := z.Notes(); len(n) > 0 {
		t.Errorf("unexpected notes %q", n)
	}
	nearC(t, "toward DC", z.Impedance(complex(1, 0)), complex(cmplx.Abs(woofer(10)), 0), 1e-10)
	nearC(t, "toward infinity", z.Impedance(complex(1e9, 0)), complex(cmplx.Abs(woofer(20e3)), 0), 1e-10)
	nearC(t, "at -jω", z.Impedance(-jw(100)), cmplx.Conj(z.Impedance(jw(100))), 0)
}

// A coil's impedance is a straight line in log frequency, so it must be met between the rows and beyond both
// ends.
func TestPowerLawIsExact(t *testing.T) {
	coil := func(f float64) complex128 { return jw(f) * 1e-3 }
	z := mustImpedance(t, impedanceFile(grid(100, 10e3, 30), coil))
	for _, f := range []float64{1, 50, 123, 4567, 20e3, 1e6} {
		nearC(t, fmt.Sprintf("%g Hz", f), z.Impedance(jw(f)), coil(f), 1e-9) // 12 figures were written
	}
	// 12 dB an octave up to a level of 90 dB at 1 kHz, then level: beyond the ends the third of an octave
	// nearest carries on.
	r := mustResponse(t, "125 54 180\n250 66 180\n500 78 180\n1000 90 180\n2000 90 0\n4000 90 0\n8000 90 0\n")
	for f, want := range map[float64]float64{62.5: 42, 31.25: 30, 16e3: 90, 64e3: 90} {
		p := r.Pressure(f) * 2.83 / 20e-6
		near(t, fmt.Sprintf("level at %g Hz", f), 20*math.Log10(cmplx.Abs(p)), want, 1e-12)
	}
	if got := cmplx.Phase(r.Pressure(31.25)); math.Abs(math.Abs(got)-math.Pi) > 1e-12 {
		t.Errorf("phase at 31.25 Hz is %g rad, want π", got)
	}
}

// With equally spaced rows Akima's slopes are exact for a parabola, at the ends too (by hand: both weights are
// equal and each slope is the mean of its neighbours'), so a rounded peak between two rows must be met, not cut
// off.
func TestPeakBetweenRows(t *testing.T) {
	var b strings.Builder
	for k := -3.5; k <= 3.5; k++ {
		fmt.Fprintf(&b, "%.15g %.15g 0\n", 1000*math.Exp2(k/3), 90-0.25*k*k)
	}
	r := mustResponse(t, b.String())
	for _, k := range []float64{-3.2, -1, 0, 0.3, 2} {
		p := r.Pressure(1000*math.Exp2(k/3)) * 2.83 / 20e-6
		near(t, fmt.Sprintf("row %g", k), 20*math.Log10(cmplx.Abs(p)), 90-0.25*k*k, 1e-12)
	}
}

// Beyond a row at the end the slope of the third of an octave next to it carries on, not that of a wider
// stretch: 10 dB down in the first third of an octave is 30 dB an octave, 3 dB up in the last one is 9 dB an
// octave.
func TestSlopeOfTheNearestThirdOctave(t *testing.T) {
	third := math.Cbrt(2)
	r := mustResponse(t, fmt.Sprintf("1000 90 0\n%.15g 80 0\n%.15g 82 0\n%.15g 85 0\n", 1000*third, 1000*third*third, 2000.0))
	for f, want := range map[float64]float64{500: 120, 250: 150, 4000: 94, 8000: 103} {
		p := r.Pressure(f) * 2.83 / 20e-6
		near(t, fmt.Sprintf("%g Hz", f), 20*math.Log10(cmplx.Abs(p)), want, 1e-12)
	}
}

// The phase of 1 ms of delay, wrapped as files have it, is followed through its jumps.
func TestPhaseIsUnwrapped(t *testing.T) {
	delay := func(f float64) complex128 { return cmplx.Rect(1, -2*math.Pi*f*1e-3) }
	var b strings.Builder
	for _, f := range grid(20, 20e3, 4000) {
		fmt.Fprintf(&b, "%.12g 90 %.12g\n", f, cmplx.Phase(delay(f))*180/math.Pi)
	}
	r := mustResponse(t, b.String())
	for _, f := range []float64{33, 777, 1500.5, 12345} {
		p := r.Pressure(f)
		// Akima's curve through rows a 1/400 octave apart is off by some (step)³·ωτ/12, 4e-8 rad here.
		nearC(t, fmt.Sprintf("%g Hz", f), p/complex(cmplx.Abs(p), 0), delay(f), 1e-5)
	}
}

func TestTableNotes(t *testing.T) {
	z := mustImpedance(t, "20 8 100\n200 8 -30\n2000 8 110\n")
	want := []string{
		"w.zma:3: the phase turns by more than 135 degrees from one row to the next near 2000 Hz, so which way it went is a guess; measure in finer steps",
		"w.zma:3: the real part of the impedance is negative in 2 rows from 20 to 2000 Hz, at worst -2.74 ohm at 2000 Hz, and no passive driver gives power; check how it was measured", // 8·cos 110°
	}
	if !slices.Equal(z.Notes(), want) {
		t.Errorf("got notes %q, want %q", z.Notes(), want)
	}
	if lo, hi := z.Range(); lo != 20 || hi != 2000 {
		t.Errorf("range is %g to %g Hz, want 20 to 2000 Hz", lo, hi)
	}
}

// Outside a table the load stays passive: the angle does not pass 90°, nor does |Z| rise faster than a coil's.
func TestExtrapolationStaysPassive(t *testing.T) {
	z := mustImpedance(t, "100 8 60\n110 16 80\n1000 16 -80\n1100 64 -89\n")
	for _, f := range []float64{0.01, 1, 50, 2e3, 1e6} {
		if got := z.Impedance(jw(f)); !(real(got) >= -1e-12*cmplx.Abs(got)) {
			t.Errorf("at %g Hz the impedance is %g, which gives power", f, got)
		}
	}
	near(t, "|Z| at ten times the last row", cmplx.Abs(z.Impedance(jw(11e3))), 640, 1e-9)
}

func TestOneRowIsAConstant(t *testing.T) {
	// A table put together in code; ReadTable asks for more.
	z, err := NewImpedanceTable(&Table{Rows: []Row{{Frequency: 100, Value: 8, PhaseDeg: 30}}, HasPhase: true})
	if err != nil {
		t.Fatal(err)
	}
	for _, f := range []float64{1, 100, 1e4} {
		nearC(t, fmt.Sprintf("%g Hz", f), z.Impedance(jw(f)), cmplx.Rect(8, math.Pi/6), 1e-14)
	}
}

func TestTableRefusals(t *testing.T) {
	for src, want := range map[string]string{
		"20 8\n30 8\n40 8":        "w.zma: the impedance has no phase column; give three columns: Hz, ohm, degrees",
		"20 8 0\n30 0 0\n40 8 0":  "w.zma:2: the impedance is 0 ohm; give its magnitude in ohm, above 0",
		"20 -8 0\n30 8 0\n40 8 0": "w.zma:1: the impedance is -8 ohm; give its magnitude in ohm, above 0",
	} {
		table, err := ReadTable("w.zma", strings.NewReader(src))
		if err != nil {
			t.Fatal(err)
		}
		if z, err := NewImpedanceTable(table); err == nil || err.Error() != want || z != nil {
			t.Errorf("%q: got %v and error %v, want error %s", src, z, err, want)
		}
	}
	for src, want := range map[string]string{
		"20 80\n30 80\n40 80":         "w.frd: the response has no phase column; give three columns: Hz, dB, degrees; or let it be minimum phase with phase = \"minimum\"",
		"20 1000 0\n30 80 0\n40 80 0": "w.frd:1: the level is 1000 dB; give the sound pressure level in dB",
	} {
		table, err := ReadTable("w.frd", strings.NewReader(src))
		if err != nil {
			t.Fatal(err)
		}
		if r, err := NewResponseTable(table); err == nil || err.Error() != want || r != nil {
			t.Errorf("%q: got %v and error %v, want error %s", src, r, err, want)
		}
	}
}

func TestTablesAllocateNothing(t *testing.T) {
	woofer := func(f float64) complex128 { return wooferA.Impedance(jw(f)) }
	z := mustImpedance(t, impedanceFile(grid(10, 20e3, 264), woofer))
	r := mustResponse(t, "125 54 180\n250 66 170\n500 78 160\n")
	var sum complex128
	if n := testing.AllocsPerRun(100, func() {
		sum += z.Impedance(jw(777)) + r.Pressure(300) + r.Pressure(1) + wooferA.Impedance(jw(50))
	}); n != 0 {
		t.Errorf("%v allocations", n)
	}
	if cmplx.IsNaN(sum) {
		t.Error("the sum is not a number")
	}
}

// FuzzTable: whatever the file holds, it is refused with an error, or the load and radiators made of it are
// finite everywhere.
func FuzzTable(f *testing.F) {
	files, err := filepath.Glob("testdata/tables/*.*")
	if err != nil || len(files) < 30 {
		f.Fatalf("%d seeds, error %v", len(files), err)
	}
	for _, name := range files {
		seed, err := os.ReadFile(name)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(seed)
	}
	for _, seed := range []string{
		"1e9 1e-300 1e7\n1 2 3\n4 5 6", "20 500 0\n20.0001 -500 0\n21 500 0\n", "nan\n", "\xff\xfe", "\xfe\xff\xd8\x00", "5e-324 1 1\n1 1 1\n2 2 2",
		",\n;\n,,\n1,,\n", "1,000,000\n1;1,1\n", "2\x000\x00 \x001\x00", "1e-300 0\n2e-300 1\n1e9 2",
	} {
		f.Add([]byte(seed))
	}
	f.Fuzz(func(t *testing.T, src []byte) {
		table, err := ReadTable("f", strings.NewReader(string(src)))
		if err != nil {
			if te, ok := err.(*TableError); !ok || table != nil || te.Line > len(src)+1 || te.Mend == "" {
				t.Fatalf("error %T %v with table %v", err, err, table)
			}
			return
		}
		if len(table.Rows) < leastRows {
			t.Fatalf("a table of %d rows", len(table.Rows))
		}
		for i, r := range table.Rows[1:] {
			if !(r.Frequency > table.Rows[i].Frequency) {
				t.Fatalf("row %v does not come after %v", r, table.Rows[i])
			}
		}
		freqs := []float64{1e-3, 1, 20, 1e3, 1e5, 1e9, table.Rows[0].Frequency * 1.01}
		if z, err := NewImpedanceTable(table); err == nil {
			for _, f := range freqs {
				if v := z.Impedance(jw(f)); cmplx.IsNaN(v) || cmplx.IsInf(v) || v == 0 {
					t.Fatalf("Z is %g at %g Hz", v, f)
				}
			}
		}
		var radiators []Radiator
		if r, err := NewResponseTable(table); err == nil {
			radiators = append(radiators, r)
		}
		if r, err := NewMinimumResponse(table); err == nil {
			radiators = append(radiators, r)
		}
		for _, r := range radiators {
			for _, f := range freqs {
				if v := r.Pressure(f); cmplx.IsNaN(v) || cmplx.IsInf(v) {
					t.Fatalf("pressure is %g at %g Hz", v, f)
				}
			}
		}
	})
}

func BenchmarkImpedanceTable(b *testing.B) {
	woofer := func(f float64) complex128 { return wooferA.Impedance(jw(f)) }
	z := mustImpedance(b, impedanceFile(grid(10, 20e3, 264), woofer))
	b.ReportAllocs()
	var sum complex128
	for b.Loop() {
		sum += z.Impedance(jw(1234))
	}
	if cmplx.IsNaN(sum) {
		b.Fatal("the sum is not a number")
	}
}
