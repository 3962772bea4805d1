package audioio

import (
	"errors"
	"fmt"

	"sixdown/audioio/discrete"
	"sixdown/sim"
)

// A filter makes output channels of an input, late by Latency samples.
type filter interface {
	Latency() int
	PeakGain() []float64
	Process(dst [][]float64, u []float64)
}

// A turning is a knob turned evenly over a number of samples: the models of networks at settings in a row all hear the input, and what
// is heard of them passes from one to the next along a cubic of Catmull and Rom ("A Class of Local Interpolating Splines", 1974, from
// memory), which goes through every setting and has no corner. All along each has its own charges and currents as if the knob stood there, which for
// a slow turn it nearly does; the output has no step, since every model's is continuous and its share grows from nothing.
type turning struct {
	models []*discrete.Matched
	total  int // samples of the turn
	done   int // samples heard
	heard  [][]float64
}

// newTurning prepares for a turn over total samples through systems, two or more, at rate samples a second.
func newTurning(systems []*sim.System, rate float64, total int) (*turning, error) {
	if len(systems) < 2 {
		return nil, errors.New("render: a turn has two settings or more; give more")
	}
	t := &turning{total: max(total, 1)}
	for _, sys := range systems {
		ss, err := equations(sys)
		if err != nil {
			return nil, err
		}
		model, err := discrete.NewMatched(ss, rate, discrete.Settings{})
		if err != nil {
			return nil, fmt.Errorf("render: at one of the settings: %w", err)
		}
		t.models = append(t.models, model)
	}
	t.heard = grid(len(t.models[0].PeakGain()), block)
	return t, nil
}

func (t *turning) Latency() int { return t.models[0].Latency() }

// overshoot is the most that the weights of a mixture come to in all, the cubic's two small ones being negative: 1.25, in the middle.
const overshoot = 1.25

// PeakGain is the most of any of the models, and what a mixture may add to it.
func (t *turning) PeakGain() []float64 {
	most := make([]float64, len(t.heard))
	for _, m := range t.models {
		for c, g := range m.PeakGain() {
			most[c] = max(most[c], overshoot*g)
		}
	}
	return most
}

// Process is that of discrete.Matched, for blocks up to block.
func (t *turning) Process(dst [][]float64, u []float64) {
	for c := range dst {
		clear(dst[c][:len(u)])
	}
	last := float64(len(t.models) - 1)
	for k, m := range t.models {
		for c := range t.heard {
			t.heard[c] = t.heard[c][:len(u)]
		}
		m.Process(t.heard, u)
		for i := range u {
			at := last * min(max(float64(t.done+i-m.Latency()), 0)/float64(t.total), 1)
			share := t.share(k, at)
			if share == 0 {
				continue
			}
			for c := range dst {
				dst[c][i] += share * t.heard[c][i]
			}
		}
	}
	t.done += len(u)
}

// share is the weight of model k where the knob is at, counted in models. Before the first and behind the last the curve is carried
// on straight.
func (t *turning) share(k int, at float64) float64 {
	last := len(t.models) - 1
	left := min(int(at), last-1)
	u := at - float64(left)
	weights := [4]float64{(-u + 2*u*u - u*u*u) / 2, (2 - 5*u*u + 3*u*u*u) / 2, (u + 4*u*u - 3*u*u*u) / 2, (-u*u + u*u*u) / 2}
	sum := 0.0
	for i, w := range weights {
		switch of := left - 1 + i; {
		case of == k:
			sum += w
		case of < 0 && k == 0, of > last && k == last:
			sum += 2 * w
		case of < 0 && k == 1, of > last && k == last-1:
			sum -= w
		}
	}
	return sum
}
