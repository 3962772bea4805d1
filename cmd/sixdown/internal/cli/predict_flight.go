package cli

import (
	"fmt"
	"math"
	"strings"

	"sixdown/sim"
)

// The JSON of what a driver's measured phase holds beyond minimum phase.
type flightDocument struct {
	Driver  string `json:"driver"`
	File    string `json:"file"`
	DelayS  number `json:"delay_s"`  // null: the phase follows no delay
	SpreadS number `json:"spread_s"` // its standard deviation
	PathM   number `json:"path_m"`   // that sound goes in this time
}

func flightDocuments(sys *sim.System) []flightDocument {
	docs := []flightDocument{}
	for _, f := range sys.Flights() {
		doc := flightDocument{f.Driver, f.File, number(f.Delay), number(f.Spread), number(f.Delay * sys.SoundSpeed())}
		if math.IsInf(f.Spread, 1) {
			doc.DelayS, doc.PathM = number(math.NaN()), number(math.NaN())
		}
		docs = append(docs, doc)
	}
	return docs
}

// flightsText says what the drivers' measured phases hold, and whether they can be held against each other.
func flightsText(sys *sim.System) string {
	fs := sys.Flights()
	if len(fs) == 0 {
		return ""
	}
	said := make([]string, len(fs))
	for i, f := range fs {
		said[i] = fmt.Sprintf("%s %s ± %s µs, %s mm", f.File, fixed(1e6*f.Delay, 0), fixed(max(1e6*f.Spread, 0.1), 1), fixed(1e3*f.Delay*sys.SoundSpeed(), 0))
		if math.IsInf(f.Spread, 1) {
			said[i] = f.File + " follows no delay"
		}
	}
	text := "beyond minimum phase the tables hold: " + strings.Join(said, "; ")
	switch {
	case !sys.OneTimeBase():
		text += "; not on one time base"
	case len(fs) > 1:
		text += "; one time base"
	}
	return folded("time      ", text)
}

// heldText says what flight time tables hold that is in the group delay: "" if it is little or not in all of them.
func (p *prediction) heldText() string {
	held, ok := p.system.HeldFlight()
	if !ok || !p.system.OneTimeBase() {
		return ""
	}
	return fmt.Sprintf("; the tables hold %s ms more", fixed(1000*held, 2))
}
