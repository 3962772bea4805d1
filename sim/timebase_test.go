package sim

import (
	"fmt"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"sixdown/xover"
)

// highPassAt is a second-order Butterworth high-pass, s²/(s²+√2s+1).
func highPassAt(fc float64) func(f float64) complex128 {
	return func(f float64) complex128 {
		s := complex(0, f/fc)
		return s * s / (s*s + s*math.Sqrt2 + 1)
	}
}

// measured is a file of h, 90 dB where h is 1, from 20 Hz to 20 kHz, that comes late by so many seconds.
func measured(h func(f float64) complex128, late float64) string {
	var b strings.Builder
	for i := range 301 {
		f := 20 * math.Pow(1000, float64(i)/300)
		z := h(f) * cmplx.Rect(1, -2*math.Pi*f*late)
		fmt.Fprintf(&b, "%.12g %.9g %.9g\n", f, 90+20*math.Log10(cmplx.Abs(z)), cmplx.Phase(z)*180/math.Pi)
	}
	return b.String()
}

// twoMeasured is a two-way whose tables are w.frd and t.frd.
func twoMeasured() *xover.Design {
	return &xover.Design{
		Drive:  xover.Drive{Level: 2.83},
		Listen: xover.Listen{Distance: 1},
		Parts:  []xover.Part{coil("L1", 0.6e-3, 0), capacitor("C1", 10e-6, 0)},
		Drivers: []xover.Driver{
			{Name: "woofer", Resistance: 8, ResponseFile: "w.frd", At: [3]float64{0, -0.1, 0}},
			{Name: "tweeter", Resistance: 8, ResponseFile: "t.frd", At: [3]float64{0, 0.1, 0}},
		},
		Ways: []xover.Way{
			{Name: "low", Driver: "woofer", Network: []xover.Step{series(leaf("L1"))}},
			{Name: "high", Driver: "tweeter", Network: []xover.Step{series(leaf("C1"))}},
		},
	}
}

// What is on one time base and what is not follows from the delays put into the files and from section "at the ear" of the
// conventions: a file whose flight over the microphone's distance was taken out holds none, and so does a model.
func TestTimeBases(t *testing.T) {
	const metre = 1 / 343.0
	for _, tt := range []struct {
		name          string
		woofer, tweet float64 // s, in the files
		change        func(d *xover.Design)
		one           bool
		held          float64 // s; 0: none
	}{
		{name: "both hold the flight", woofer: metre + 20e-6, tweet: metre, one: true, held: metre},
		{name: "neither does", woofer: 20e-6, one: true},
		{name: "one does", woofer: metre, one: false},
		{name: "taken out of one too far", tweet: -1.5e-3, one: false},
		{name: "microphones at two distances, each with its own flight taken out", one: true, change: func(d *xover.Design) {
			d.Drivers[0].HasMic, d.Drivers[0].Mic = true, [3]float64{0, 0, 3}
		}},
		{name: "microphones at two distances, no flight taken out", woofer: 3 * metre, tweet: metre, one: false, change: func(d *xover.Design) {
			d.Drivers[0].HasMic, d.Drivers[0].Mic = true, [3]float64{0, 0, 3}
		}},
		{name: "a microphone beside the axis, with one trigger", woofer: math.Hypot(0.5, 1) * metre, tweet: math.Hypot(0.7, 1) * metre, one: true, held: math.Hypot(0.6, 1) * metre, change: func(d *xover.Design) {
			for i := range d.Drivers {
				d.Drivers[i].HasMic, d.Drivers[i].Mic = true, [3]float64{0, -0.6, 1}
			}
		}},
		{name: "a model beside a file that holds flight", woofer: metre, one: false, change: modelled},
		{name: "a model beside a file that holds none", woofer: 20e-6, one: true, change: modelled},
	} {
		d := twoMeasured()
		if tt.change != nil {
			tt.change(d)
		}
		s, err := New(d, files(map[string]string{"w.frd": measured(highPassAt(50), tt.woofer), "t.frd": measured(highPassAt(900), tt.tweet)}))
		if err != nil {
			t.Fatal(err)
		}
		if got := s.OneTimeBase(); got != tt.one {
			t.Errorf("%s: one time base: %t, want %t: %+v", tt.name, got, tt.one, s.Flights())
		}
		warned := strings.Contains(strings.Join(s.Warnings(), "\n"), "not on one time base")
		if warned == tt.one {
			t.Errorf("%s: warned of it: %t: %q", tt.name, warned, s.Warnings())
		}
		as, err := s.Alignment([2]float64{})
		if err != nil {
			t.Fatal(err)
		}
		for _, a := range as {
			if a.OneTimeBase != tt.one {
				t.Errorf("%s: %s to %s: one time base: %t", tt.name, a.Low, a.High, a.OneTimeBase)
			}
		}
		// 5 µs is what the estimate of a delay is good for; the driver's place, 0.1 m from the axis, makes 15 µs.
		if held, ok := s.HeldFlight(); tt.one && (ok != (tt.held > 0) || ok && math.Abs(held-tt.held) > 25e-6) {
			t.Errorf("%s: %g s held, %t; want %g", tt.name, held, ok, tt.held)
		}
	}
}

// modelled makes the tweeter one of the data sheet.
func modelled(d *xover.Design) {
	d.Drivers[1] = xover.Driver{Name: "tweeter", Re: 6, Fs: 900, Qms: 2, Qes: 1, Sensitivity: 90, HasSensitivity: true}
}

// The group delay of the high-pass is √2·(1+x²)/(1+x⁴)/(2π·fc) with x = f/fc, from the derivative of its phase; the first and the
// last row of the table are no worse than any other, though the curve is kinked there.
func TestGroupDelayAtATablesEnds(t *testing.T) {
	d := twoMeasured()
	d.Drivers, d.Ways = d.Drivers[:1], d.Ways[:1]
	d.Ways[0].Network = nil
	d.Drivers[0].At, d.Parts = [3]float64{}, nil
	s, err := New(d, files(map[string]string{"w.frd": measured(highPassAt(50), 0)}))
	if err != nil {
		t.Fatal(err)
	}
	r := mustPredict(t, s, 20, 20.5, 50, 500, 19.9e3, 20e3)
	for k, f := range r.Freqs {
		x := f / 50
		want := math.Sqrt2 * (1 + x*x) / (1 + x*x*x*x) / (2 * math.Pi * 50)
		// The curve between rows 1/30 octave apart has slopes to a thousandth inside and to some hundredths at its ends; far above the
		// resonance the delay itself is below a microsecond.
		near(t, fmt.Sprintf("delay at %g Hz", f), r.SumDelay[k], want, 0.02*want+1e-7)
	}
}
