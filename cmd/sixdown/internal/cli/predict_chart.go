package cli

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"sixdown/cmd/sixdown/internal/chart"
	"sixdown/sim"
)

// chartOptions say what picture is wanted of a prediction and where it goes.
type chartOptions struct {
	pictureOptions
	panels []string

	changes string // what of the second design is not as its file says; "": nothing
}

// panelNames are the panels in the order in which a page shows them.
func panelNames() []string {
	return []string{"response", "phase", "delay", "impedance", "phasor", "null", "step", "polar"}
}

func (o *chartOptions) addTo(cmd *cobra.Command) {
	o.pictureOptions.addTo(cmd)
	cmd.Flags().StringSliceVar(&o.panels, "panels", nil, "draw only these `panels`: "+strings.Join(panelNames(), ","))
	complete(cmd, "panels", panelNames())
}

// check judges the options before anything is computed.
func (o *chartOptions) check(cmd *cobra.Command) error {
	if err := o.pictureOptions.check(cmd, "panels"); err != nil || o.path == "" {
		return err
	}
	for _, p := range o.panels {
		if !slices.Contains(panelNames(), p) {
			return usageFault("--panels", fmt.Sprintf("there is no panel %q", p), didYouMean(p, panelNames(), "the panels are "+strings.Join(panelNames(), ", ")))
		}
	}
	return nil
}

// wants reports whether a panel is to be drawn if there is something to draw.
func (o *chartOptions) wants(panel string) bool {
	return len(o.panels) == 0 || slices.Contains(o.panels, panel)
}

// drawing is how finely curves in a picture are computed: their nulls are narrow.
const drawingPerOctave = 96

// draw writes a page about one or two predictions to the file. inputs must not be overwritten by it.
func (o *chartOptions) draw(s *streams, ps []*prediction, grid *gridOptions, inputs ...string) error {
	page, err := o.page(s, ps, grid)
	if err != nil {
		return err
	}
	return o.write(page, inputs...)
}

// page sets out the panels that are wanted and can be drawn. A panel that was asked for by name and cannot be is an
// error.
func (o *chartOptions) page(s *streams, ps []*prediction, grid *gridOptions) (*chart.Page, error) {
	page := &chart.Page{Title: ps[0].Title}
	var subjects []*chart.Subject
	sums, crosses := true, true
	for _, p := range ps {
		sums = sums && p.Sum != nil
		crosses = crosses && len(p.summary.Crossings) > 0
	}
	for k, p := range ps {
		subject, err := o.subject(p, sums, grid)
		if err != nil {
			return nil, err
		}
		line := p.keyNumbers()
		if len(ps) > 1 {
			subject.Name = string(rune('A' + k))
			line = subject.Name + ": " + line
		}
		subjects = append(subjects, subject)
		page.Caption = append(page.Caption, line)
	}
	if a := angleText(ps[0].Angle); a != "" {
		page.Caption = append(page.Caption, "the ear is turned "+a)
	}
	if len(ps) > 1 {
		page.Title = "A: " + orUntitled(ps[0].Title) + "   B: " + orUntitled(ps[1].Title)
		if o.changes != "" {
			page.Title += " with " + o.changes
		}
	}
	first := ps[0]
	levels, phases := "gain across the drivers, dB re open circuit", "of the gain"
	switch {
	case sums:
		levels = "dB " + splConditions(ps)
		phases = "at the ear, without the flight over the listening distance"
	case first.summary.Tone != nil:
		levels = "output, dB re the open-circuit source"
	}
	one := func(p chart.Panel) ([]chart.Panel, error) { return []chart.Panel{p}, nil }
	each := func(draw func(*chart.Subject) []chart.Panel) ([]chart.Panel, error) {
		var all []chart.Panel
		for _, s := range subjects {
			all = append(all, draw(s)...)
		}
		return all, nil
	}
	for _, c := range []struct {
		name  string
		there bool
		why   string
		draw  func() ([]chart.Panel, error)
	}{
		{"response", true, "", func() ([]chart.Panel, error) { return one(chart.Response(subjects, levels)) }},
		{"phase", true, "", func() ([]chart.Panel, error) { return one(chart.Phase(subjects, phases)) }},
		{"delay", sums, "no sum at the ear", func() ([]chart.Panel, error) {
			return one(chart.GroupDelay(subjects, "of the sum, without the flight over the listening distance"))
		}},
		{"impedance", true, "", func() ([]chart.Panel, error) { return chart.Impedance(subjects, "what the amplifier sees"), nil }},
		{"phasor", sums && crosses, "no sum or no crossing", func() ([]chart.Panel, error) { return each(chart.Phasors) }},
		{"null", sums && crosses, "no sum or no crossing", func() ([]chart.Panel, error) {
			return each(func(s *chart.Subject) []chart.Panel { return []chart.Panel{chart.Null(s)} })
		}},
		{"step", true, "", func() ([]chart.Panel, error) { return one(chart.StepResponse(subjects)) }},
		{"polar", sums, "no sum at the ear", func() ([]chart.Panel, error) {
			var names []string
			for _, s := range subjects {
				names = append(names, s.Name)
			}
			panels, omitted, err := polarPanels(s, ps, names, grid)
			if err == nil && panels == nil && len(o.panels) > 0 {
				return nil, usageFault("--panels polar", "the design sounds alike to all sides, since no driver has a place, a diameter or a baffle", "give these, or leave it out")
			}
			page.Caption = append(page.Caption, omitted...)
			return panels, err
		}},
	} {
		switch {
		case !o.wants(c.name):
		case c.there:
			panels, err := c.draw()
			if err != nil {
				return nil, err
			}
			page.Panels = append(page.Panels, panels...)
		case len(o.panels) > 0:
			return nil, usageFault("--panels "+c.name, "there is "+c.why+" to draw", "leave it out")
		}
	}
	return page, nil
}

// subject computes what a picture needs beyond the table: about the sum, or, where one of two designs has none, about
// the gains.
func (o *chartOptions) subject(p *prediction, sum bool, grid *gridOptions) (*chart.Subject, error) {
	fine := gridOptions{from: grid.from, to: grid.to, perOctave: max(grid.perOctave, drawingPerOctave)}
	r, err := p.system.Predict(fine.even())
	if err != nil {
		return nil, err
	}
	s := &chart.Subject{Response: r, Gains: !sum}
	if s.Summary, err = p.system.Summary([2]float64{grid.from, grid.to}); err != nil {
		return nil, err
	}
	if held, ok := p.system.HeldFlight(); ok {
		s.Late = held
	}
	if s.Targets, err = targetLevels(p, r, sum); err != nil {
		return nil, err
	}
	var at []float64
	for _, c := range p.summary.Crossings {
		at = append(at, c.Frequency)
	}
	there, err := p.system.Predict(at)
	if err != nil {
		return nil, err
	}
	for k, c := range p.summary.Crossings {
		x := chart.Crossing{Alignment: sim.Alignment{Crossing: c}}
		if p.alignment != nil {
			x.Alignment = p.alignment[k]
		}
		for _, w := range there.Ways {
			if w.P != nil {
				x.Parts = append(x.Parts, w.P[k])
			}
		}
		s.Crossing = append(s.Crossing, x)
	}
	if o.wants("step") {
		long, err := p.system.Predict(chart.StepFrequencies())
		if err != nil {
			return nil, err
		}
		if !sum {
			long.Sum = nil
		}
		if s.Step, err = chart.StepOf(long, s.Late); err != nil {
			return nil, err
		}
	}
	return s, nil
}

// targetLevels returns the levels in dB that the design's targets ask of each way over r: the product of the way's
// alignments, about the mean level of the sum or, without a sum, about 0 dB.
func targetLevels(p *prediction, r *sim.Response, sum bool) ([][]float64, error) {
	mean := 0.0
	if sum && p.summary.Sum != nil {
		mean = p.summary.Sum.MeanSPL
	}
	if math.IsNaN(mean) || math.IsInf(mean, 0) {
		return nil, nil // there is no level that targets could be about
	}
	levels := make([][]float64, len(r.Ways))
	for i := range p.design.Ways {
		way := &p.design.Ways[i]
		if len(way.Targets) == 0 {
			continue
		}
		var err error
		if levels[i], err = sim.TargetDB(way.Targets, r.Freqs); err != nil {
			return nil, err
		}
		for k := range levels[i] {
			levels[i][k] += mean
		}
	}
	return levels, nil
}

// keyNumbers is the caption of a picture: what a builder looks for first, in one line.
func (p *prediction) keyNumbers() string {
	s := p.summary
	var said []string
	for _, c := range s.Crossings {
		said = append(said, fmt.Sprintf("%s to %s at %s, %s each", c.Low, c.High, roughly(c.Frequency), fixed(c.LevelDB, 1)+" dB"))
	}
	if q := s.Sum; q != nil && !math.IsNaN(q.RippleDB) && !math.IsInf(q.RippleDB, 0) {
		said = append(said, fmt.Sprintf("ripple %s dB from %s to %s", fixed(q.RippleDB, 1), hertz(q.Band[0]), hertz(q.Band[1])))
	}
	if !math.IsInf(s.MinImpedance, 0) {
		said = append(said, fmt.Sprintf("lowest |Z| %s Ω at %s", figures(s.MinImpedance, 3), roughly(s.MinImpedanceAt)))
	}
	return strings.ReplaceAll(strings.Join(said, "; "), "-", "−")
}

func orUntitled(title string) string {
	if title == "" {
		return "untitled"
	}
	return title
}

// roughly writes a frequency with three figures.
func roughly(f float64) string {
	if f >= 999.5 {
		return figures(f/1000, 3) + " kHz"
	}
	return figures(f, 3) + " Hz"
}
