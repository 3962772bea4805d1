package tune

import (
	"fmt"
	"math"
)

// A Score says how good values are. What does not exist is NaN.
type Score struct {
	Objective      float64 // dB²
	SumRMSDB       float64 // dB, of the sum about what it should be; NaN without a sum
	WayRMSDB       float64 // dB, of the ways about their targets; NaN without targets
	PhaseRMSDeg    float64 // degrees, between neighbouring ways where both are within 12 dB of the sum; NaN without a sum
	LevelDB        float64 // dB SPL, or dB re the amplifier's voltage without a sum: what the objective is about
	MinImpedance   float64 // Ω, the least |Zin| from 20 Hz to 20 kHz
	MinImpedanceAt float64 // Hz
}

// Score returns the score of values, in Ω, H or F, by variable.
func (p *Problem) Score(values []float64) (Score, error) {
	x, err := p.logs(values)
	if err != nil {
		return Score{}, err
	}
	e, err := p.newEvaluator()
	if err != nil {
		return Score{}, err
	}
	return e.score(x)
}

// logs returns the logarithms of values.
func (p *Problem) logs(values []float64) ([]float64, error) {
	if len(values) != len(p.vars) {
		return nil, fmt.Errorf("tune: there are %d values for %d parts; give one for each", len(values), len(p.vars))
	}
	x := make([]float64, len(values))
	for v, value := range values {
		if !(value > 0) || math.IsInf(value, 1) {
			return nil, fmt.Errorf("tune: %s is %g; give a positive number", p.vars[v].Part, value)
		}
		x[v] = math.Log(value)
	}
	return x, nil
}

// score returns the score at x.
func (e *evaluator) score(x []float64) (Score, error) {
	if !e.pinned {
		e.pairs = e.pairs[:0]
	}
	if _, err := e.objective(x); err != nil {
		return Score{}, err
	}
	e.setPairs()
	f := e.residuals()
	s := Score{Objective: f, LevelDB: e.mean[0], SumRMSDB: math.NaN(), WayRMSDB: math.NaN(), PhaseRMSDeg: math.NaN()}
	ways, square := 0, 0.0
	for i := range e.p.terms {
		t := &e.p.terms[i]
		mean := 0.0
		for j, k := range t.at {
			d := e.level(t, k) - t.aim[j] - e.mean[t.level]
			mean += d * d / float64(len(t.at))
		}
		switch {
		case t.way >= 0:
			ways++
			square += mean
		case t.ear == 0:
			s.SumRMSDB = math.Sqrt(mean)
		}
	}
	if ways > 0 {
		s.WayRMSDB = math.Sqrt(square / float64(ways))
	}
	points, square := 0, 0.0
	for _, q := range e.meetingsHere() {
		for _, k := range q.at {
			d := e.between(&q, k)
			square += d * d
			points++
		}
	}
	if points > 0 {
		s.PhaseRMSDeg = math.Sqrt(square / float64(points))
	}
	var err error
	s.MinImpedance, s.MinImpedanceAt, err = e.p.leastImpedance(x, e.coils)
	return s, err
}
