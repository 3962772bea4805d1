package sim

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"sixdown/xover"
	"sixdown/xover/tone"
)

// template makes a System of a template, changed by change unless that is nil.
func template(t *testing.T, k tone.Kind, change func(d *xover.Design)) (*System, *xover.Design) {
	t.Helper()
	d, _, err := xover.Parse(string(k), []byte(k.Text()))
	if err != nil {
		t.Fatal(err)
	}
	if change != nil {
		change(d)
	}
	return mustNew(t, d), d
}

func turned(settings map[string]float64) func(d *xover.Design) {
	return func(d *xover.Design) {
		for name, at := range settings {
			d.Control(name).At = at
		}
	}
}

var audible = []float64{20, 50, 200, 1000, 3000, 10e3, 20e3}

// A feedback control is its own mirror image: with all its knobs turned the other way, input and output change places, so that from
// an ideal source the gains multiply to 1, and with the knobs in the middle the gain is -1.
func TestFeedbackControlsMirror(t *testing.T) {
	for k, controls := range map[tone.Kind][]string{tone.BassTrebleFeedback: {"bass", "treble"}, tone.Tilt: {"tilt"}} {
		for _, at := range []float64{0.5, 0.3, 0.05} {
			gains := func(at float64) []complex128 {
				s, _ := template(t, k, func(d *xover.Design) {
					d.Tone.Source = 0
					for _, c := range controls {
						d.Control(c).At = at
					}
				})
				return mustPredict(t, s, audible...).Ways[0].H
			}
			one, other := gains(at), gains(1-at)
			for i, f := range audible {
				nearC(t, fmt.Sprintf("%s: at %g, %g Hz", k, at, f), one[i]*other[i], 1, 1e-11)
				if at == 0.5 {
					nearC(t, fmt.Sprintf("%s: in the middle, %g Hz", k, f), one[i], -1, 1e-11)
				}
			}
		}
	}
}

// The controls do what they are called: with a knob turned up, the gain at its end of the band is higher by several dB than with it down.
func TestKnobsDoWhatTheySay(t *testing.T) {
	for _, tt := range []struct {
		kind    tone.Kind
		control string
		hz      float64
		least   float64 // dB
	}{
		{tone.TrebleCut, "treble", 3000, 6}, {tone.TrebleCut, "volume", 500, 20},
		{tone.BassTreble, "bass", 50, 20}, {tone.BassTreble, "treble", 10e3, 20},
		{tone.BassTrebleFeedback, "bass", 50, 20}, {tone.BassTrebleFeedback, "treble", 15e3, 20},
		{tone.BassMiddleTreble, "bass", 80, 10}, {tone.BassMiddleTreble, "middle", 500, 6}, {tone.BassMiddleTreble, "treble", 8000, 10},
		{tone.Tilt, "tilt", 50, 6}, {tone.Blend, "blend", 8000, 10}, {tone.HighPass, "bass", 50, 10}, {tone.LowPass, "treble", -10e3, 10},
		{tone.Loudness, "volume", 1000, 15},
	} {
		level := func(at float64) float64 {
			s, _ := template(t, tt.kind, turned(map[string]float64{tt.control: at}))
			return DB(mustPredict(t, s, math.Abs(tt.hz)).Ways[0].H[0])
		}
		up := level(0.99) - level(0.01)
		if tt.hz < 0 { // turned up, a variable resistor before a capacitor lets less through
			up = -up
		}
		if up < tt.least {
			t.Errorf("%s: %s moves %g Hz by %.1f dB, want %g or more", tt.kind, tt.control, math.Abs(tt.hz), up, tt.least)
		}
	}
}

// The corner networks in closed form, load and source in it.
func TestVariableCorners(t *testing.T) {
	beside := func(a, b complex128) complex128 { return a * b / (a + b) }
	for _, at := range []float64{0, 0.2, 0.5, 1} {
		high, d := template(t, tone.HighPass, turned(map[string]float64{"bass": at}))
		low, e := template(t, tone.LowPass, turned(map[string]float64{"treble": at}))
		for _, f := range audible {
			s := complex(0, 2*math.Pi*f)
			r := beside(complex(d.Part("R1").Value+d.Part("P1").Value*d.Part("P1").Fraction(at), 0), complex(d.Tone.Load, 0))
			want := r / (r + complex(d.Tone.Source, 0) + 1/(s*complex(d.Part("C1").Value, 0)))
			nearC(t, fmt.Sprintf("high-pass at %g, %g Hz", at, f), mustPredict(t, high, f).Ways[0].H[0], want, 1e-12)
			z := beside(1/(s*complex(e.Part("C1").Value, 0)), complex(e.Tone.Load, 0))
			want = z / (z + complex(e.Tone.Source+e.Part("R1").Value+e.Part("P1").Value*e.Part("P1").Fraction(at), 0))
			nearC(t, fmt.Sprintf("low-pass at %g, %g Hz", at, f), mustPredict(t, low, f).Ways[0].H[0], want, 1e-12)
		}
	}
}

// The bridge by its limits: at DC a divider of resistances, far above a divider of R1 and R2 for the bass wiper and of P2 for the treble.
// Loudness at the tap: a divider into R2 beside R1 and C1.
func TestBridgeAndTapByHand(t *testing.T) {
	beside := func(a, b complex128) complex128 { return a * b / (a + b) }
	for _, at := range []float64{0.2, 0.5, 0.8} {
		s, d := template(t, tone.BassTreble, turned(map[string]float64{"bass": at, "treble": at}))
		v := func(name string) complex128 { return complex(d.Part(name).Value, 0) }
		share, load := complex(d.Part("P1").Fraction(at), 0), complex(d.Tone.Load, 0)
		lower := beside(v("R2")+share*v("P1"), v("R3")+load)
		want := lower / (lower + complex(d.Tone.Source, 0) + v("R1") + (1-share)*v("P1")) * load / (v("R3") + load)
		nearC(t, fmt.Sprintf("DC at %g", at), mustPredict(t, s, 1e-5).Ways[0].H[0], want, 1e-6)
		// At 100 MHz the capacitors are shorts: P2 lies from the source's end to the return, its wiper loaded by R3 to the bass wiper's node.
		up := v("P2") * (1 - complex(d.Part("P2").Fraction(at), 0))
		down := v("P2") - up
		// Node equations of amp and out; the bass node is between R1 and R2.
		rs := complex(d.Tone.Source, 0)
		det := func(a, b, c, e complex128) complex128 { return a*e - b*c }
		rb := beside(v("R1"), v("R2"))
		share = v("R2") / (v("R1") + v("R2"))
		y11, y12 := 1/rs+1/(v("R1")+v("R2"))+1/up+share*share/(rb+v("R3")), -1/up-share/(rb+v("R3"))
		y22 := 1/up + 1/down + 1/(rb+v("R3")) + 1/load
		want = -y12 / rs / det(y11, y12, y12, y22)
		nearC(t, fmt.Sprintf("far above, at %g", at), mustPredict(t, s, 1e8).Ways[0].H[0], want, 1e-4)
	}
	s, d := template(t, tone.Loudness, turned(map[string]float64{"volume": 0}))
	for _, f := range audible {
		v := func(name string) complex128 { return complex(d.Part(name).Value, 0) }
		tap := beside(beside(v("R2"), v("R1")+1/(complex(0, 2*math.Pi*f)*v("C1"))), complex(d.Tone.Load, 0))
		in := beside(v("R3"), tap+v("P1"))
		want := in / (in + complex(d.Tone.Source, 0)) * tap / (tap + v("P1"))
		nearC(t, fmt.Sprintf("loudness at the tap, %g Hz", f), mustPredict(t, s, f).Ways[0].H[0], want, 1e-12)
	}
	// It loses less bass than middle, the more the quieter: some dB at full, many at the tap.
	if bass, middle := mustPredict(t, s, 30).Ways[0].H[0], mustPredict(t, s, 2000).Ways[0].H[0]; cmplx.Abs(bass) < 3*cmplx.Abs(middle) {
		t.Errorf("at the tap %g at 30 Hz, %g at 2 kHz", cmplx.Abs(bass), cmplx.Abs(middle))
	}
}
