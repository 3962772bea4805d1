package quantity

import (
	"errors"
	"math"
	"testing"
)

// FuzzQuantity checks what holds for any text and any name: an error is ours; a value is finite and survives
// being written and read again; a part never comes without a unit.
func FuzzQuantity(f *testing.F) {
	for _, text := range []string{
		"4.7 uF", "0.33mH", "8 Ω", "2.2 kHz", "250 mm", "12 l", "5 %", "87 dB", "4µ7", "2K2", "R47", "10m", "4K7J", "1e-6 F",
		"-0 ohm", "4,7 uF", "343 m/s", "1.2 kg/m³", "1e999 V", "", "\xff", "0.0000000000000001e300 pF",
	} {
		for _, name := range []string{"R1", "C1", "L1", "X"} {
			f.Add(name, text)
		}
	}
	f.Fuzz(func(t *testing.T, name, text string) {
		v, unit, err := Parse(text)
		check(t, v, unit, err)
		part, partUnit, err := ParsePart(name, text)
		check(t, part, partUnit, err)
		if err == nil && partUnit == None {
			t.Errorf("ParsePart(%q, %q) gives %v without a unit", name, text, part)
		}
	})
}

func check(t *testing.T, v float64, unit Unit, err error) {
	t.Helper()
	if err != nil {
		if _, ok := errors.AsType[*Error](err); !ok || v != 0 || unit != None {
			t.Errorf("%v, %v with the error %T %v", v, unit, err, err)
		}
		return
	}
	if math.IsNaN(v) || math.IsInf(v, 0) {
		t.Errorf("%v is not finite", v)
	}
	checkReadsBack(t, v, unit)
	if text := Round(v, unit, 3); text == "" {
		t.Errorf("%v in %v is rounded to nothing", v, unit)
	}
}

// FuzzFormat checks that any finite number survives being written and read, in any unit.
func FuzzFormat(f *testing.F) {
	for i, v := range extremes {
		f.Add(v, uint8(i))
	}
	f.Fuzz(func(t *testing.T, v float64, unit uint8) {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return
		}
		checkReadsBack(t, v, Unit(unit)%unitCount)
	})
}
