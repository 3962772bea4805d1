package sim

import (
	"fmt"
	"math"
	"math/cmplx"
	"slices"
	"strings"
	"testing"

	"sixdown/xover"
)

// A driver whose level alone was measured, a second-order high-pass at 100 Hz of 90 dB (closed box, Small 1972): with
// phase = "minimum" it must reach the ear with that filter's own phase, 3-4-5 below the ear's height: r = 2.5 m where
// the flight time of 2 m is taken out. A microphone 0.5 m away makes it half as loud 1 m away, and no later.
func TestMinimumPhaseDriver(t *testing.T) {
	var file strings.Builder
	filter := func(f float64) complex128 {
		s := complex(0, f/100)
		return s * s / (s*s + s*math.Sqrt2 + 1)
	}
	for i := range 121 {
		f := 10 * math.Pow(10, float64(i)/30)
		fmt.Fprintf(&file, "%.12g %.12g\n", f, 90+20*math.Log10(cmplx.Abs(filter(f))))
	}
	for name, tt := range map[string]struct {
		mic    *[3]float64
		factor float64
	}{
		"1 m ahead by itself": {nil, 1 / 2.5},
		"stated":              {&[3]float64{0, -1, 0.5}, 0.5 / 2.5},
	} {
		d := &xover.Design{
			Drive:   xover.Drive{Level: 2.83},
			Listen:  xover.Listen{Distance: 2, Height: 0.5},
			Drivers: []xover.Driver{{Name: "woofer", Resistance: 8, ResponseFile: "w.frd", MinimumPhase: true, At: [3]float64{0, -1, 0}}},
			Ways:    []xover.Way{{Name: "low", Driver: "woofer"}},
		}
		if tt.mic != nil {
			d.Drivers[0].HasMic, d.Drivers[0].Mic = true, *tt.mic
		}
		s, err := New(d, files(map[string]string{"w.frd": file.String()}))
		if err != nil {
			t.Fatal(err)
		}
		want := []string{"w.frd: its minimum phase takes the level to be one that falls by 12.0 dB an octave below 10 Hz and stays level above 100000 Hz"}
		if !slices.Equal(s.Warnings(), want) {
			t.Errorf("%s: warnings %q, want %q", name, s.Warnings(), want)
		}
		r := mustPredict(t, s, 30, 100, 1000, 10e3)
		for i, f := range r.Freqs {
			p := 20e-6 * math.Pow(10, 90.0/20) * tt.factor
			// 0.002 is a tenth of a degree, what 30 rows a decade are worth.
			nearC(t, fmt.Sprintf("%s: %g Hz", name, f), r.Sum[i], filter(f)*cmplx.Rect(p, -2*math.Pi*f*0.5/343), 0.002)
		}
		r = mustPredict(t, s, 5)
		if want := "w.frd: the table begins at 10.0 Hz; below it the slope fitted to its nearest octave is carried on, which is invented"; !slices.Equal(r.Warnings, []string{want}) {
			t.Errorf("%s: warnings %q, want %q", name, r.Warnings, want)
		}
	}
}
