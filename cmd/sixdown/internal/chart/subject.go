package chart

import (
	"math"
	"math/cmplx"

	"sixdown/sim"
)

// A Subject is a design as the panels show it. Where panels take two, the second is drawn paler and dashed.
type Subject struct {
	Name     string        // after the names of its curves, where there are two; else ""
	Response *sim.Response // over rising frequencies
	// Targets are the levels in dB that the ways should have at Response.Freqs, one slice a way in the order of
	// Response.Ways; nil where there is none.
	Targets  [][]float64
	Crossing []Crossing // rising
	Step     *Step      // for StepResponse
	Late     float64    // s, flight time that measurements hold, to be left out of phases and times
	Gains    bool       // gains are drawn though there is a sum, since the other subject has none
	// Summary is over the span of Response.Freqs: its lowest impedances are marked. nil: none are.
	Summary *sim.Summary
}

// A Crossing is where the lead passes from one way to another, with what each way gives there.
type Crossing struct {
	sim.Alignment              // without a sum its Crossing alone
	Parts         []complex128 // Pa, in the order of Response.Ways
}

// tone reports whether it is a tone network.
func (s *Subject) tone() bool { return len(s.Response.Ways) == 1 && s.Response.Ways[0].Driver == "" }

// sounds reports whether there is a sum at the ear to be drawn.
func (s *Subject) sounds() bool { return s.Response.Sum != nil && !s.Gains }

// levels returns what way i gives in dB: SPL at the ear if there is a sum, else its gain.
func (s *Subject) levels(i int) []float64 {
	if w := s.Response.Ways[i]; s.sounds() {
		return sim.SPLs(w.P)
	} else {
		return sim.DBs(w.H)
	}
}

// output returns the complex curve of way i that goes with levels.
func (s *Subject) output(i int) []complex128 {
	if w := s.Response.Ways[i]; s.sounds() {
		return w.P
	} else {
		return w.H
	}
}

// named returns the name of a curve of this subject.
func (s *Subject) named(name string) string {
	if s.Name == "" {
		return name
	}
	return name + " " + s.Name
}

// wayInk returns the ink of way i: that of the sum for the one output of a tone network.
func (s *Subject) wayInk(i int) ink {
	if s.tone() {
		return total
	}
	return wayInk(i)
}

// styles returns the pens of subject k of n: the sum's and the ways'.
func styles(k, n int, ink ink, i int, width float64) pen {
	switch {
	case k > 0:
		return pen{ink.pale(), width, []float64{5, 2.5}}
	case n > 1 || i < 0:
		return pen{ink, width, nil}
	}
	return pen{ink, width, dashes(i)}
}

// Line widths in page units.
const (
	totalWidth = 2.2
	wayWidth   = 1.7
	aimWidth   = 1.0
)

// leads returns the frequency in the middle, in log frequency, of where way i is the loudest; 0 if nowhere.
func (s *Subject) leads(i int) float64 {
	sum, n := 0.0, 0.0
	for k, f := range s.Response.Freqs {
		loudest := true
		for j := range s.Response.Ways {
			loudest = loudest && cmplx.Abs(s.output(j)[k]) <= cmplx.Abs(s.output(i)[k])
		}
		if loudest {
			sum, n = sum+math.Log(f), n+1
		}
	}
	if n == 0 {
		return 0
	}
	return math.Exp(sum / n)
}

// ends returns the first and the last frequency of the first subject.
func ends(subjects []*Subject) (lo, hi float64) {
	f := subjects[0].Response.Freqs
	return f[0], f[len(f)-1]
}

// most returns the highest finite value of all, -Inf if there is none; least the lowest.
func most(values ...[]float64) float64 {
	m := math.Inf(-1)
	for _, vs := range values {
		for _, v := range vs {
			if !math.IsNaN(v) && !math.IsInf(v, 0) {
				m = max(m, v)
			}
		}
	}
	return m
}

func least(values ...[]float64) float64 {
	m := math.Inf(1)
	for _, vs := range values {
		for _, v := range vs {
			if !math.IsNaN(v) && !math.IsInf(v, 0) {
				m = min(m, v)
			}
		}
	}
	return m
}

// A plotPanel is a Panel with one plot.
type plotPanel struct {
	plot
	high float64
	half bool
}

func (p *plotPanel) height() float64          { return p.high }
func (p *plotPanel) narrow() bool             { return p.half }
func (p *plotPanel) draw(s *scene, room rect) { p.plot.draw(s, room) }
