package preferred

import (
	"fmt"
	"math"
	"strconv"
	"testing"
)

// IEC 60063:2015. E24 and below as reference works reprint them; E48 and E96 follow from 100·10^(i/n) rounded, which in
// these two has no exception, and agree with the reprints read.
var published = map[Series][]int{
	E3:  {10, 22, 47},
	E6:  {10, 15, 22, 33, 47, 68},
	E12: {10, 12, 15, 18, 22, 27, 33, 39, 47, 56, 68, 82},
	E24: {10, 11, 12, 13, 15, 16, 18, 20, 22, 24, 27, 30, 33, 36, 39, 43, 47, 51, 56, 62, 68, 75, 82, 91},
	E48: {100, 105, 110, 115, 121, 127, 133, 140, 147, 154, 162, 169, 178, 187, 196, 205, 215, 226, 237, 249, 261, 274, 287, 301,
		316, 332, 348, 365, 383, 402, 422, 442, 464, 487, 511, 536, 562, 590, 619, 649, 681, 715, 750, 787, 825, 866, 909, 953},
	E96: {100, 102, 105, 107, 110, 113, 115, 118, 121, 124, 127, 130, 133, 137, 140, 143, 147, 150, 154, 158, 162, 165, 169, 174,
		178, 182, 187, 191, 196, 200, 205, 210, 215, 221, 226, 232, 237, 243, 249, 255, 261, 267, 274, 280, 287, 294, 301, 309,
		316, 324, 332, 340, 348, 357, 365, 374, 383, 392, 402, 412, 422, 432, 442, 453, 464, 475, 487, 499, 511, 523, 536, 549,
		562, 576, 590, 604, 619, 634, 649, 665, 681, 698, 715, 732, 750, 768, 787, 806, 825, 845, 866, 887, 909, 931, 953, 976},
}

func TestPublishedSeries(t *testing.T) {
	for series, want := range published {
		got := series.Values()
		if len(got) != len(want) {
			t.Errorf("%v has %d values, want %d", series, len(got), len(want))
			continue
		}
		for i, w := range want {
			if series <= E24 {
				w *= 10 // printed with two digits
			}
			if got[i] != float64(w)/100 {
				t.Errorf("%v value %d is %v, want the digits %d", series, i, got[i], w)
			}
		}
	}
}

// IEC 60063:2015, from memory: E192 holds all of E96, and departs from the rounded powers once, 920 for 919.
func TestE192(t *testing.T) {
	values := E192.Values()
	for i, v := range E96.Values() {
		if values[2*i] != v {
			t.Errorf("E192 value %d is %v, want %v as in E96", 2*i, values[2*i], v)
		}
	}
	exceptions := 0
	for i, v := range values {
		rule := math.Round(100*math.Pow(10, float64(i)/192)) / 100
		if v != rule {
			exceptions++
			if v != 9.20 || rule != 9.19 {
				t.Errorf("E192 value %d is %v where the rule gives %v", i, v, rule)
			}
		}
	}
	if exceptions != 1 {
		t.Errorf("E192 departs from the rule %d times, want once", exceptions)
	}
}

// Eight values of E24 depart from the rounded powers: the count is in reference works, the values follow.
func TestE24Exceptions(t *testing.T) {
	var got []float64
	for i, v := range E24.Values() {
		if v != math.Round(10*math.Pow(10, float64(i)/24))/10 {
			got = append(got, v)
		}
	}
	if want := "[2.7 3 3.3 3.6 3.9 4.3 4.7 8.2]"; fmt.Sprint(got) != want {
		t.Errorf("E24 departs from the rule at %v, want %s", got, want)
	}
}

// A value is what its decimal literal denotes; the strconv package is the judge.
func TestValuesAreTheirLiterals(t *testing.T) {
	for _, series := range []Series{E3, E6, E12, E24, E48, E96, E192} {
		for exponent := -17; exponent < 18; exponent++ {
			for i, v := range series.Values() {
				literal := strconv.FormatFloat(v, 'f', 2, 64) + "e" + strconv.Itoa(exponent)
				want, err := strconv.ParseFloat(literal, 64)
				if err != nil {
					t.Fatal(err)
				}
				if got := series.at(i + exponent*int(series)); got != want {
					t.Fatalf("%v: %v, want %s exactly", series, got, literal)
				}
				if got := series.Nearest(want); got != want {
					t.Fatalf("%v: the nearest to %s is %v, want itself", series, literal, got)
				}
				if below, above := series.Neighbours(want); below != want || above != want {
					t.Fatalf("%v: the neighbours of %s are %v and %v, want itself", series, literal, below, above)
				}
			}
		}
	}
}

func TestNearest(t *testing.T) {
	for _, test := range []struct {
		name   string
		series Series
		v      float64
		want   float64
	}{
		{"between, nearer the lower", E12, 4.9e-6, 4.7e-6},
		{"between, nearer the upper", E12, 5.4e-6, 5.6e-6},
		{"over the decade's end", E12, 9.4e-6, 10e-6},
		{"before the decade's end", E12, 8.9e-6, 8.2e-6},
		{"a power of ten", E6, 0.01, 0.01},
		// √(1·2.2) = 1.483: 1.49 is nearer to 1 by difference and nearer to 2.2 by ratio.
		{"by ratio, not difference", E3, 1.49, 2.2},
		{"just under the mean", E3, 1.48, 1},
		{"the least value taken", E24, Least, Least},
		{"the greatest value taken", E24, Greatest, Greatest},
		{"the next number under a value", E96, math.Nextafter(4.75e-6, 0), 4.75e-6},
		{"the next number over a value", E96, math.Nextafter(4.75e-6, 1), 4.75e-6},
	} {
		if got := test.series.Nearest(test.v); got != test.want {
			t.Errorf("%s: the nearest to %v in %v is %v, want %v", test.name, test.v, test.series, got, test.want)
		}
	}
}

func TestNeighbours(t *testing.T) {
	for _, test := range []struct {
		name         string
		series       Series
		v            float64
		below, above float64
	}{
		{"inside", E12, 5e-6, 4.7e-6, 5.6e-6},
		{"across decades", E6, 7.5, 6.8, 10},
		{"on a value", E6, 6.8, 6.8, 6.8},
		{"under a value", E6, math.Nextafter(6.8, 0), 4.7, 6.8},
		{"over a value", E6, math.Nextafter(6.8, 9), 6.8, 10},
		{"about the exception", E192, 9.19, 9.09, 9.20},
	} {
		below, above := test.series.Neighbours(test.v)
		if below != test.below || above != test.above {
			t.Errorf("%s: %v and %v, want %v and %v", test.name, below, above, test.below, test.above)
		}
	}
}

func TestWhatHasNoAnswer(t *testing.T) {
	for _, v := range []float64{0, -4.7, math.NaN(), math.Inf(1), math.Inf(-1), 0.9 * Least, 1.1 * Greatest} {
		if got := E12.Nearest(v); !math.IsNaN(got) {
			t.Errorf("the nearest to %v is %v, want NaN", v, got)
		}
		if below, above := E12.Neighbours(v); !math.IsNaN(below) || !math.IsNaN(above) {
			t.Errorf("the neighbours of %v are %v and %v, want NaNs", v, below, above)
		}
		if got := E12.Within(v, 1); got != nil {
			t.Errorf("within %v and 1 there are %v, want none", v, got)
		}
	}
	for _, s := range []Series{0, 7, -12, 384} {
		if s.Values() != nil || s.Within(1, 10) != nil || !math.IsNaN(s.Nearest(1)) {
			t.Errorf("%v has values; want none", s)
		}
	}
}

func TestWithin(t *testing.T) {
	if got, want := fmt.Sprint(E6.Within(0.1, 1.5)), "[0.1 0.15 0.22 0.33 0.47 0.68 1 1.5]"; got != want {
		t.Errorf("E6 from 0.1 to 1.5 is %s, want %s", got, want)
	}
	if got, want := fmt.Sprint(E3.Within(2.3, 4.6)), "[]"; got != want {
		t.Errorf("E3 from 2.3 to 4.6 is %s, want %s", got, want)
	}
	if got := E3.Within(47, 22); got != nil {
		t.Errorf("E3 from 47 down to 22 is %v, want none", got)
	}
}

func TestParseSeries(t *testing.T) {
	for _, s := range []Series{E3, E6, E12, E24, E48, E96, E192} {
		if got, err := ParseSeries(s.String()); err != nil || got != s {
			t.Errorf("%q parses as %v, %v", s.String(), got, err)
		}
	}
	if got, err := ParseSeries("e12"); err != nil || got != E12 {
		t.Errorf("e12 parses as %v, %v", got, err)
	}
	for _, bad := range []string{"", "E", "E7", "12", "E012", "E+12", "E-12", "E12 ", "E384", "E1e1", "E99999999999999999999"} {
		if got, err := ParseSeries(bad); err == nil {
			t.Errorf("%q parses as %v, want an error", bad, got)
		}
	}
	_, err := ParseSeries("E13")
	if want := `series: "E13" is not one; give E3, E6, E12, E24, E48, E96 or E192`; err == nil || err.Error() != want {
		t.Errorf("error is %v, want %s", err, want)
	}
}

func TestNearestAllocatesNothing(t *testing.T) {
	v := 1e-6
	if n := testing.AllocsPerRun(100, func() { v = E96.Nearest(v * 1.07) }); n != 0 {
		t.Errorf("%v allocations a call, want none", n)
	}
}

func ExampleSeries_Nearest() {
	fmt.Println(E12.Nearest(4.6e-6))
	// Output: 4.7e-06
}

func ExampleSeries_Neighbours() {
	fmt.Println(E24.Neighbours(1.2004e-3))
	// Output: 0.0012 0.0013
}

func ExampleSeries_Within() {
	fmt.Println(E12.Within(0.27e-3, 1e-3))
	// Output: [0.00027 0.00033 0.00039 0.00047 0.00056 0.00068 0.00082 0.001]
}
