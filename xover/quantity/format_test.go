package quantity

import (
	"math"
	"testing"
)

// The texts are written by hand from the rules in the comment of Format.
func TestFormat(t *testing.T) {
	for _, test := range []struct {
		v    float64
		unit Unit
		want string
	}{
		{4.7e-6, Farad, "4.7 uF"}, {0.1e-6, Farad, "0.1 uF"}, {22e-9, Farad, "22 nF"}, {4700e-6, Farad, "4700 uF"},
		{10e-3, Farad, "10 mF"}, {470e-12, Farad, "470 pF"}, {1, Farad, "1 F"}, {0.5e-12, Farad, "0.5 pF"},
		{0.33e-3, Henry, "0.33 mH"}, {1.8e-3, Henry, "1.8 mH"}, {47e-6, Henry, "0.047 mH"}, {4.7e-6, Henry, "4.7 uH"},
		{8, Ohm, "8 ohm"}, {0.05, Ohm, "0.05 ohm"}, {0.005, Ohm, "5 mohm"}, {4700, Ohm, "4.7 kohm"}, {1e6, Ohm, "1 Mohm"},
		{0, Ohm, "0 ohm"}, {-8, Ohm, "-8 ohm"}, {999.9, Ohm, "999.9 ohm"},
		{2200, Hertz, "2.2 kHz"}, {20, Hertz, "20 Hz"}, {0.5, Hertz, "0.5 Hz"},
		{0.25, Metre, "250 mm"}, {2, Metre, "2 m"}, {-0.09, Metre, "-90 mm"}, {0, Metre, "0 m"}, {1e-6, Metre, "1 um"},
		{132e-4, SquareMetre, "132 cm2"}, {12e-3, CubicMetre, "12 l"}, {0.5e-3, CubicMetre, "0.5 l"}, {2, CubicMetre, "2 m3"},
		{2.83, Volt, "2.83 V"}, {60, Watt, "60 W"}, {87, Decibel, "87 dB"}, {-3.5, Decibel, "-3.5 dB"},
		{0.05, Percent, "5 %"}, {0.001, Percent, "0.1 %"}, {0, Percent, "0 %"}, {1, Percent, "100 %"},
		{0.01, Second, "10 ms"}, {343, MetrePerSecond, "343 m/s"}, {1.2, KilogramPerCubicMetre, "1.2 kg/m3"},
		{3.1, None, "3.1"}, {1e20, Ohm, "1e11 Gohm"}, {1e-30, Farad, "1e-18 pF"}, {math.Inf(1), Hertz, "+Inf Hz"},
	} {
		if got := Format(test.v, test.unit); got != test.want {
			t.Errorf("Format(%v, %v) = %q, want %q", test.v, test.unit, got, test.want)
		}
	}
}

func TestRound(t *testing.T) {
	for _, test := range []struct {
		v      float64
		unit   Unit
		digits int
		want   string
	}{
		{4.7e-6, Farad, 3, "4.70 µF"}, {8, Ohm, 3, "8.00 Ω"}, {4700, Ohm, 2, "4.7 kΩ"}, {0.3333e-3, Henry, 2, "0.33 mH"},
		{999.96, Hertz, 4, "1.000 kHz"}, {999.94, Hertz, 4, "999.9 Hz"}, {132.4e-4, SquareMetre, 3, "132 cm²"},
		{132.4e-4, SquareMetre, 2, "130 cm²"}, {2.5, CubicMetre, 2, "2.5 m³"}, {-0.0904, Metre, 2, "−90 mm"},
		{0, Ohm, 3, "0.00 Ω"}, {0.123, Percent, 2, "12 %"}, {5, None, 0, "5"}, {47e-9, Henry, 2, "0.047 µH"},
	} {
		if got := Round(test.v, test.unit, test.digits); got != test.want {
			t.Errorf("Round(%v, %v, %d) = %q, want %q", test.v, test.unit, test.digits, got, test.want)
		}
	}
}

// extremes are the float64 values at the edges of the format (IEEE 754 binary64) and around powers of ten.
var extremes = []float64{
	0, math.Copysign(0, -1), math.MaxFloat64, -math.MaxFloat64, math.SmallestNonzeroFloat64, 2.2250738585072014e-308,
	0.1, 0.3, 1.0 / 3, 1 - 0x1p-53, 1 + 0x1p-52, 999.9999999999999, 1000.0000000000001, 1e15, 1e16, 1e17, 1e22, 1e23,
	4.7e-6, 4.700000000000001e-6, 1e-5, 9.999999999999999e-6, 0.009999999999999998, 123456789.12345678,
}

func TestFormatReadsBack(t *testing.T) {
	for u := None; u < unitCount; u++ {
		for _, v := range extremes {
			checkReadsBack(t, v, u)
		}
	}
}

// checkReadsBack checks that v survives Format and ParseAs bit for bit, zero's sign included.
func checkReadsBack(t *testing.T, v float64, u Unit) {
	t.Helper()
	text := Format(v, u)
	got, err := ParseAs(text, u)
	if err != nil || math.Float64bits(got) != math.Float64bits(v) {
		t.Errorf("%v in %v is written %q and read %v, %v", v, u, text, got, err)
	}
}
