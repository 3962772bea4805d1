package sim

import (
	"errors"
	"fmt"
	"maps"
	"math"
	"slices"

	"sixdown/xover"
)

// A Family is what a tone network does over the travel of one control, the others standing as the design has them.
type Family struct {
	Control   string
	At        []float64   // settings, rising
	Responses []*Response // one a setting, over the same frequencies
	Reaches   []Reach     // of each control of the design, at ReachFrequencies
}

// A Reach is how far a control moves the output.
type Reach struct {
	Control                string
	Frequency              float64 // Hz
	LeastDB, GreatestDB    float64 // over its travel, the others as the design has them
	LeastAnyDB, MostAnyDB  float64 // of what its travel is worth in dB, over the other controls at their ends and middles
	LeastOhms, LeastOhmsAt float64 // input impedance in Ω over its travel and all frequencies, and the setting of that
}

// ReachFrequencies are where reaches are told, in Hz.
func ReachFrequencies() []float64 { return []float64{100, 1000, 10000} }

// mostOthers is how many other controls are gone through by ends and middles; of more, a reach is that with the others as they stand.
const mostOthers = 3

// settingsOf returns d with controls at these settings; d stays.
func settingsOf(d *xover.Design, at map[string]float64) *xover.Design {
	c := *d
	c.Controls = slices.Clone(d.Controls)
	for i := range c.Controls {
		if v, ok := at[c.Controls[i].Name]; ok {
			c.Controls[i].At = v
		}
	}
	return &c
}

// predictAtSettings predicts d with controls at these settings.
func predictAtSettings(d *xover.Design, at map[string]float64, freqs []float64) (*Response, error) {
	s, err := New(settingsOf(d, at), nil)
	if err != nil {
		return nil, fmt.Errorf("at %s: %w", settingsText(at), err)
	}
	return s.Predict(freqs)
}

func settingsText(at map[string]float64) string {
	text := ""
	for _, name := range slices.Sorted(maps.Keys(at)) {
		if text != "" {
			text += ", "
		}
		text += fmt.Sprintf("%s=%g", name, at[name])
	}
	return text
}

// NewFamily predicts the tone network d at steps settings of a control, evenly from one end of its travel to the other, over freqs in
// Hz, and finds the reach of every control. It fails if d is no tone network, has no such control, or steps is below 2.
func NewFamily(d *xover.Design, control string, steps int, freqs []float64) (*Family, error) {
	switch {
	case d.Tone == nil:
		return nil, errors.New("family: the design is no tone network; give one with [tone] and [control.NAME]")
	case steps < 2:
		return nil, fmt.Errorf("family: %d settings; give 2 or more", steps)
	}
	if err := settingsOf(d, nil).SetControl(control, 0); err != nil {
		return nil, fmt.Errorf("family: %w", err)
	}
	f := &Family{Control: control}
	for i := range steps {
		at := float64(i) / float64(steps-1)
		r, err := predictAtSettings(d, map[string]float64{control: at}, freqs)
		if err != nil {
			return nil, fmt.Errorf("family: %w", err)
		}
		f.At, f.Responses = append(f.At, at), append(f.Responses, r)
	}
	for _, c := range d.Controls {
		reaches, err := reachesOf(d, c.Name)
		if err != nil {
			return nil, fmt.Errorf("family: %w", err)
		}
		f.Reaches = append(f.Reaches, reaches...)
	}
	return f, nil
}

// reachesOf finds the reaches of one control at ReachFrequencies.
func reachesOf(d *xover.Design, control string) ([]Reach, error) {
	const travel = 11 // settings of it
	freqs := ReachFrequencies()
	grid := logGrid([2]float64{20, 20e3})
	all := make([]Reach, len(freqs))
	for k, f := range freqs {
		all[k] = Reach{Control: control, Frequency: f, LeastDB: math.Inf(1), GreatestDB: math.Inf(-1), LeastAnyDB: math.Inf(1), MostAnyDB: math.Inf(-1), LeastOhms: math.Inf(1)}
	}
	for i := range travel {
		at := float64(i) / (travel - 1)
		r, err := predictAtSettings(d, map[string]float64{control: at}, append(slices.Clone(freqs), grid...))
		if err != nil {
			return nil, err
		}
		ohms, where := math.Inf(1), at
		for _, z := range Magnitudes(r.Zin) {
			ohms = min(ohms, z)
		}
		for k := range all {
			a, db := &all[k], DB(r.Ways[0].H[k])
			a.LeastDB, a.GreatestDB = min(a.LeastDB, db), max(a.GreatestDB, db)
			if ohms < a.LeastOhms {
				a.LeastOhms, a.LeastOhmsAt = ohms, where
			}
		}
	}
	var others []string
	for _, c := range d.Controls {
		if c.Name != control && len(others) < mostOthers {
			others = append(others, c.Name)
		}
	}
	corners := 1
	for range others {
		corners *= 3
	}
	for corner := range corners {
		at := map[string]float64{}
		for i, rest := 0, corner; i < len(others); i, rest = i+1, rest/3 {
			at[others[i]] = float64(rest%3) / 2
		}
		var ends [2]*Response
		for end := range ends {
			at[control] = float64(end)
			var err error
			if ends[end], err = predictAtSettings(d, at, freqs); err != nil {
				return nil, err
			}
		}
		for k := range all {
			worth := math.Abs(DB(ends[1].Ways[0].H[k]) - DB(ends[0].Ways[0].H[k]))
			all[k].LeastAnyDB, all[k].MostAnyDB = min(all[k].LeastAnyDB, worth), max(all[k].MostAnyDB, worth)
		}
	}
	return all, nil
}
