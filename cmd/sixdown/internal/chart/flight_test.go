package chart

import (
	"math"
	"math/cmplx"
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
	for _, c := range []struct{ late, want float64 }{
		{0, 0}, {0.2e-3, 0}, {-1e-3, 0}, // drivers apart in depth, and an acausal file: left as they are
		{2.915e-3, 2.915e-3}, {1, mostFlight},
	} {
		r := delayed(StepFrequencies(), c.late)
		late := flight(r)
		if late != c.want {
			t.Errorf("late by %g s: %g s is taken out, want %g", c.late, late, c.want)
		}
		for i, z := range withoutFlight(r.Sum, r.Freqs, late) {
			if want := cmplx.Rect(1, -2*math.Pi*r.Freqs[i]*(c.late-c.want)); cmplx.Abs(z-want) > 1e-9 { // rounding of 2πfτ, some 4e5 rad at most
				t.Fatalf("late by %g s: at %g Hz %v is left, want %v", c.late, r.Freqs[i], z, want)
			}
		}
	}
	quiet := delayed([]float64{3e3, 4e3}, math.NaN())
	if late := flight(quiet); late != 0 {
		t.Errorf("no group delay at all: %g s is taken out", late)
	}
}

// The edge of a sum that is late by 30 ms, more than the panel is wide, is in the picture.
func TestStepFollowsTheFlight(t *testing.T) {
	const late = 30e-3
	s, err := StepOf(delayed(StepFrequencies(), late))
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
