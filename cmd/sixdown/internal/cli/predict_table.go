package cli

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"sixdown/cmd/sixdown/internal/caution"
	"sixdown/cmd/sixdown/internal/table"
	"sixdown/sim"
	"sixdown/sim/field"
	"sixdown/xover"
)

// pageWidth is how wide in characters tables may grow before they are folded.
const pageWidth = 100

// text returns the answer for people: a table and what a builder looks for first.
func (p *prediction) text() string {
	var b strings.Builder
	if p.Title != "" {
		fmt.Fprintf(&b, "%s\n", p.Title)
	}
	if p.Sum != nil {
		fmt.Fprintf(&b, "SPL at %[1]s m for %[2]s V; delay without the flight over %[1]s m%[3]s\n", figures(p.distance, 4), figures(p.level, 4), p.heldText())
	}
	if a := angleText(p.Angle); a != "" {
		fmt.Fprintf(&b, "The ear is turned %s\n", a)
	}
	if b.Len() > 0 {
		b.WriteByte('\n')
	}
	b.WriteString(p.table().Text(pageWidth))
	b.WriteByte('\n')
	b.WriteString(p.summaryText())
	if p.design.Tone != nil {
		b.WriteString("\n" + caution.Text(caution.Valves()))
	}
	return b.String()
}

func (p *prediction) table() *table.Table {
	columns := []table.Column{{Name: "f", Unit: "Hz"}}
	for _, w := range p.Ways {
		group := w.Name
		if w.Driver != "" && w.Driver != w.Name {
			group += ": " + w.Driver
		}
		columns = append(columns, table.Column{Group: group, Name: "gain", Unit: "dB"}, table.Column{Group: group, Name: "phase", Unit: "deg"})
		if w.P != nil {
			columns = append(columns, table.Column{Group: group, Name: "SPL", Unit: "dB"})
		}
	}
	if p.Sum != nil {
		columns = append(columns, table.Column{Group: "sum", Name: "SPL", Unit: "dB"}, table.Column{Group: "sum", Name: "delay", Unit: "ms"})
	}
	columns = append(columns, table.Column{Group: "load", Name: "|Z|", Unit: "Ω"}, table.Column{Group: "load", Name: "angle", Unit: "deg"})
	// A tone network has no output stage before it that could run hot.
	heats := p.design.Tone == nil
	if heats {
		columns = append(columns, table.Column{Group: "load", Name: "EPDR", Unit: "Ω"})
	}
	t := table.New(columns...)
	for k, f := range p.Freqs {
		row := []string{figures(f, 5)}
		for _, w := range p.Ways {
			row = append(row, fixed(sim.DB(w.H[k]), 2), angle(w.H[k]))
			if w.P != nil {
				row = append(row, fixed(sim.SPL(w.P[k]), 2))
			}
		}
		if p.Sum != nil {
			row = append(row, fixed(sim.SPL(p.Sum[k]), 2), fixed(1000*p.SumDelay[k], 3))
		}
		z := p.Zin[k]
		row = append(row, ohms(sim.Magnitudes(p.Zin[k : k+1])[0]), angle(z))
		if heats {
			row = append(row, ohms(sim.EPDR(z)))
		}
		t.Row(row...)
	}
	return t
}

// angle writes the phase of z in degrees for a table.
func angle(z complex128) string {
	if !hasPhase(z) {
		return none
	}
	// -179.96 would be written as -180.0, and that is 180.
	if text := fixed(sim.PhaseDeg(z), 1); text != "-180.0" {
		return text
	}
	return "180.0"
}

// summaryText says what a builder looks for first, a line each.
func (p *prediction) summaryText() string {
	s := p.summary
	var b strings.Builder
	for k, c := range s.Crossings {
		level := decibels(c.LevelDB) + " each"
		switch {
		case c.LevelDB > silentDB:
			level = "no sum is left of them, which is silent there"
		case s.Sum != nil:
			level += ", relative to the sum"
		}
		fmt.Fprintf(&b, "crossing  %s to %s at %s: %s; %s\n", c.Low, c.High, hertz(c.Frequency), level, relativePhase(c))
		switch {
		case p.alignment == nil && math.Abs(c.PhaseDeg) > 120: // beyond which the two are less than either alone
			b.WriteString("          they are nearly opposed: try the other polarity\n")
		case p.alignment != nil:
			b.WriteString(alignmentText(&p.alignment[k], aimAt(p.design, c), p.Angle != (field.Angle{})))
		}
	}
	switch q := s.Sum; {
	case q == nil:
	case math.IsInf(q.MeanSPL, 0):
		fmt.Fprintf(&b, "sum       %s to %s: nothing is heard at some of these frequencies, so there is no mean\n", hertz(q.Band[0]), hertz(q.Band[1]))
	default:
		fmt.Fprintf(&b, "sum       %s to %s: mean %s SPL, %s from lowest to highest, %s rms about the mean\n", hertz(q.Band[0]), hertz(q.Band[1]), decibels(q.MeanSPL), decibels(q.RippleDB), decibels(q.RMSDB))
		if q.DipDB > 0 {
			fmt.Fprintf(&b, "          a dip of %s below the mean at %s\n", decibels(q.DipDB), hertz(q.DipAt))
		}
		fmt.Fprintf(&b, "          3 dB below the mean: %s and %s\n", orBeyond(q.Low3DB, "not above "+hertz(s.Band[0])), orBeyond(q.High3DB, "not below "+hertz(s.Band[1])))
	}
	if t := s.Tone; t != nil && len(t.Freqs) > 0 {
		low, high := 0, 0
		for k, g := range t.GainDB {
			if g < t.GainDB[low] {
				low = k
			}
			if g > t.GainDB[high] {
				high = k
			}
		}
		fmt.Fprintf(&b, "output    in third-octaves from %s at %s to %s at %s\n", decibels(t.GainDB[low]), hertz(t.Freqs[low]), decibels(t.GainDB[high]), hertz(t.Freqs[high]))
	}
	b.WriteString(p.noiseText())
	b.WriteString(flightsText(p.system))
	b.WriteString(fitsText(p.system.Fits()))
	fmt.Fprintf(&b, "load      lowest |Z| %s Ω at %s", ohms(s.MinImpedance), hertz(s.MinImpedanceAt))
	if s.Tone == nil {
		fmt.Fprintf(&b, "; lowest EPDR %s Ω at %s", ohms(s.MinEPDR), hertz(s.MinEPDRAt))
	}
	b.WriteByte('\n')
	// IEC 60268-5 asks that the impedance be nowhere below 80 % of the rated one (from memory).
	if d := p.design.Drive; d.RatedPower > 0 && s.MinImpedance < 0.8*d.RatedLoad {
		fmt.Fprintf(&b, "          below %s Ω, 80 %% of rated_load, the least that IEC 60268-5 asks for\n", ohms(0.8*d.RatedLoad))
	}
	if flat := p.flatDrivers(); len(flat) > 0 {
		fmt.Fprintf(&b, "flat      no fs is given for %s: the level is taken as flat down to 0 Hz\n", strings.Join(flat, ", "))
	}
	return b.String()
}

// noiseText says how much thermal noise there is at the output of a tone network.
func (p *prediction) noiseText() string {
	n := p.noise
	if n == nil || n.Flat == 0 {
		return ""
	}
	micro := func(v float64) string { return figures(1e6*v, 3) + " µV" }
	text := fmt.Sprintf("thermal, 20 Hz to 20 kHz at 20 °C: %s, A-weighted %s, %s below 1 V", micro(n.Flat), micro(n.AWeighted), decibels(-sim.DB(complex(n.AWeighted, 0))))
	if d := p.design.Tone; slices.ContainsFunc(d.Network, func(s xover.Step) bool { return s.Op == xover.OpAmp }) {
		text += "; the amplifier's own is not in it"
	}
	return folded("noise     ", text)
}

// flatDrivers names the drivers of which no more is known than a sensitivity.
func (p *prediction) flatDrivers() []string {
	var names []string
	for _, w := range p.design.Ways {
		for _, name := range w.DriverNames() {
			if x := p.design.Driver(name); x.HasSensitivity && x.ResponseFile == "" && x.Fs == 0 {
				names = append(names, name)
			}
		}
	}
	return names
}

// relativePhase says which of two ways is ahead at their crossing.
func relativePhase(c sim.Crossing) string {
	switch {
	case fixed(c.PhaseDeg, 1) == "0.0":
		return "in phase"
	case c.PhaseDeg < 0:
		return fmt.Sprintf("%s lags by %s", c.High, degrees(-c.PhaseDeg))
	}
	return fmt.Sprintf("%s leads by %s", c.High, degrees(c.PhaseDeg))
}

func orBeyond(f float64, otherwise string) string {
	if f == 0 {
		return otherwise
	}
	return hertz(f)
}

// records returns the answer as CSV has it: a record of names, then one for each frequency.
func (p *prediction) records() [][]string {
	doc := p.document()
	names := []string{"frequency_hz"}
	columns := [][]number{doc.FrequencyHz}
	add := func(name string, column []number) {
		if column != nil {
			names, columns = append(names, name), append(columns, column)
		}
	}
	for _, w := range doc.Ways {
		add(w.Name+"_gain_db", w.GainDB)
		add(w.Name+"_phase_deg", w.PhaseDeg)
		add(w.Name+"_spl_db", w.SPLDB)
		add(w.Name+"_spl_phase_deg", w.SPLPhaseDeg)
	}
	add("sum_spl_db", doc.Sum.SPLDB)
	add("sum_spl_phase_deg", doc.Sum.SPLPhaseDeg)
	add("sum_group_delay_ms", doc.Sum.GroupDelayMS)
	add("input_impedance_ohm", doc.Input.ImpedanceOhm)
	add("input_phase_deg", doc.Input.PhaseDeg)
	add("input_epdr_ohm", doc.Input.EPDROhm)
	return csvRecords(names, columns)
}
