package sim

import (
	"sixdown/xover"
	"sixdown/xover/align"
)

// TargetDB returns the gain in dB that a way's targets together ask for at freqs, in Hz: that of their product. Without
// targets it is 0.
func TargetDB(targets []xover.Target, freqs []float64) ([]float64, error) {
	levels := make([]float64, len(freqs))
	for _, t := range targets {
		a, err := alignment(t)
		if err != nil {
			return nil, err
		}
		for k, f := range freqs {
			s := complex(0, f/t.Frequency)
			if t.HighPass {
				levels[k] += DB(a.HighPass(s))
			} else {
				levels[k] += DB(a.LowPass(s))
			}
		}
	}
	return levels, nil
}

// alignment returns the alignment that a target names.
func alignment(t xover.Target) (*align.Alignment, error) {
	shape, err := align.ParseShape(t.Shape)
	if err != nil {
		return nil, err
	}
	spec := align.Spec{Shape: shape, Order: t.Order, RippleDB: t.RippleDB}
	if t.Reference != "" {
		if spec.Reference, err = align.ParseReference(t.Reference); err != nil {
			return nil, err
		}
	}
	return align.New(spec)
}
