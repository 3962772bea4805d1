package chart

import (
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"sixdown/sim"
)

// delayed is a flat sum of 1 Pa that comes late by so many seconds: group delay by definition.
func delayed(freqs []float64, late float64) *sim.Response {
	r := &sim.Response{Freqs: freqs, Ways: []sim.WayResponse{{Name: "full", Driver: "cone"}}}
	for _, f := range freqs {
		r.Sum = append(r.Sum, cmplx.Rect(1, -2*math.Pi*f*late))
		r.SumDelay = append(r.SumDelay, late)
	}
	r.Ways[0].P, r.Ways[0].H = r.Sum, r.Sum
	return r
}

func TestFlightIsTakenOut(t *testing.T) {
	for _, late := range []float64{0, -1e-3, 2.915e-3} {
		r := delayed(StepFrequencies(), late)
		for i, z := range withoutFlight(r.Sum, r.Freqs, late) {
			if cmplx.Abs(z-1) > 1e-9 { // rounding of 2πfτ, some 4e5 rad at most
				t.Fatalf("late by %g s: at %g Hz %v is left, want 1", late, r.Freqs[i], z)
			}
		}
	}
}

// What the tables hold is left out of the curves of phase, group delay and step, and all three say so.
func TestHeldFlightIsSaid(t *testing.T) {
	const late = 2.915e-3
	r := delayed([]float64{100, 1000, 10e3}, late)
	step, err := StepOf(delayed(StepFrequencies(), late), late)
	if err != nil {
		t.Fatal(err)
	}
	subjects := []*Subject{{Response: r, Late: late, Step: step}}
	for _, p := range []Panel{Phase(subjects, "a"), GroupDelay(subjects, "a"), StepResponse(subjects)} {
		plot := p.(*plotPanel)
		if !strings.HasSuffix(plot.note, ", less the 2.92 ms that the tables hold") {
			t.Errorf("%s: the note is %q", plot.title, plot.note)
		}
		for _, c := range plot.series {
			for i := range c.x {
				value, want := c.y[i], 0.0
				if plot.title == "Step" { // half-way up is the moment of the edge, since the Gaussian has no delay
					value, want = c.x[i], math.Copysign(math.Abs(c.x[i]), c.y[i]-0.5)
				}
				if math.Abs(value-want) > 0.02 { // 5 samples of 7.6 µs in ms, 0.02°
					t.Fatalf("%s: %g at %g, want %g", plot.title, c.y[i], c.x[i], want)
				}
			}
		}
		subjects[0].Gains = true
		if note := Phase(subjects, "a").(*plotPanel).note; note != "a" {
			t.Errorf("gains hold no flight, and the note is %q", note)
		}
		subjects[0].Gains = false
	}
}

// The edge of a sum that is late by 30 ms, more than the panel is wide, is in the picture.
func TestStepFollowsTheFlight(t *testing.T) {
	const late = 30e-3
	s, err := StepOf(delayed(StepFrequencies(), late), late)
	if err != nil {
		t.Fatal(err)
	}
	if from, to := s.Seconds[0], s.Seconds[len(s.Seconds)-1]; math.Abs(from-late-stepFrom) > 1e-5 || math.Abs(to-late-stepTo) > 1e-5 {
		t.Errorf("the picture is from %g to %g s; want %g and %g within a sample", from, to, late+stepFrom, late+stepTo)
	}
	for i, at := range s.Seconds {
		// Half-way up is the moment of the edge, since the Gaussian has no delay.
		if s.Sum[i] > 0.5 {
			if math.Abs(at-late) > 1e-5 {
				t.Errorf("the edge is at %g s, want %g", at, late)
			}
			break
		}
	}
}
