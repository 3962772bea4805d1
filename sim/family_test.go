package sim

import (
	"fmt"
	"math"
	"testing"

	"sixdown/xover"
	"sixdown/xover/tone"
)

// The family of a variable low-pass is its closed form at each setting, its reach the difference of two of them, and the least load
// that of the shortest track at the top of the band.
func TestFamilyOfALowPass(t *testing.T) {
	_, d := template(t, tone.LowPass, nil)
	freqs := []float64{100, 2000, 15e3}
	f, err := NewFamily(d, "treble", 5, freqs)
	if err != nil {
		t.Fatal(err)
	}
	gain := func(at, hz float64) complex128 {
		z := 1 / (complex(0, 2*math.Pi*hz*2.2e-9) + 1e-6)
		return z / (z + complex(1e3+4.7e3+100e3*d.Part("P1").Fraction(at), 0))
	}
	for i, at := range []float64{0, 0.25, 0.5, 0.75, 1} {
		if f.At[i] != at {
			t.Errorf("settings %v", f.At)
		}
		for k, hz := range freqs {
			nearC(t, fmt.Sprintf("at %g, %g Hz", at, hz), f.Responses[i].Ways[0].H[k], gain(at, hz), 1e-12)
		}
	}
	if len(f.Reaches) != 3 {
		t.Fatalf("reaches %+v", f.Reaches)
	}
	for _, r := range f.Reaches {
		near(t, "greatest", r.GreatestDB, DB(gain(0, r.Frequency)), 1e-9)
		near(t, "least", r.LeastDB, DB(gain(1, r.Frequency)), 1e-9)
		near(t, "worth, there being no other control", r.MostAnyDB, r.GreatestDB-r.LeastDB, 1e-9)
		z := 1 / (complex(0, 2*math.Pi*20e3*2.2e-9) + 1e-6)
		near(t, "load", r.LeastOhms, math.Hypot(real(z)+4.7e3, imag(z)), 1e-6)
		if r.LeastOhmsAt != 0 {
			t.Errorf("the least load is at %g", r.LeastOhmsAt)
		}
	}
}

// Bass and treble of the bridge hardly meddle with one another; what the treble is worth at 10 kHz is nearly the same wherever the bass
// stands. In the stack the middle takes part in what the bass does.
func TestReachesTellInteraction(t *testing.T) {
	spread := func(k tone.Kind, control string, hz float64) float64 {
		_, d := template(t, k, nil)
		f, err := NewFamily(d, control, 2, []float64{hz})
		if err != nil {
			t.Fatal(err)
		}
		for _, r := range f.Reaches {
			if r.Control == control && r.Frequency == hz {
				return r.MostAnyDB - r.LeastAnyDB
			}
		}
		t.Fatalf("no reach of %s at %g Hz", control, hz)
		return 0
	}
	if bridge, stack := spread(tone.BassTrebleFeedback, "treble", 10e3), spread(tone.BassMiddleTreble, "bass", 100); bridge > 2 || stack < 3 {
		t.Errorf("the other controls are worth %.1f dB in the bridge and %.1f dB in the stack", bridge, stack)
	}
}

func TestFamilyRefuses(t *testing.T) {
	_, d := template(t, tone.Tilt, nil)
	for what, err := range map[string]error{
		"no such control": refused(NewFamily(d, "bass", 5, []float64{1000})),
		"one setting":     refused(NewFamily(d, "tilt", 1, []float64{1000})),
		"a loudspeaker":   refused(NewFamily(&xover.Design{}, "tilt", 5, []float64{1000})),
	} {
		if err == nil {
			t.Errorf("%s: no error", what)
		}
	}
}

func refused(_ *Family, err error) error { return err }
