package cli

import (
	"context"
	"errors"
	"fmt"
	"math"
	"strings"

	"github.com/spf13/cobra"

	"sixdown/cmd/sixdown/internal/chart"
	"sixdown/cmd/sixdown/internal/table"
	"sixdown/sim/spread"
	"sixdown/xover"
)

// spreadOptions are what spread is asked.
type spreadOptions struct {
	design  designOptions
	form    answerForm
	set     spread.Settings
	tighten bool
	picture pictureOptions
}

func newSpreadCmd(s *streams) *cobra.Command {
	var o spreadOptions
	cmd := &cobra.Command{
		Use:   "spread DESIGN",
		Short: "Show what the parts' tolerances do to it",
		Long: `Spread builds the design many times over, each part off by a chance amount within its
tolerance (tol of the part, else [spread] tol; uniform, or normal with the tolerance at three
standard deviations where [spread] has distribution = "normal"), and tells between which
levels 90 % of the builds lie, how many stay within the limit of [spread] of the nominal
sum over the band of [tune] (about = "level": of the level that is aimed at), which parts
the sum depends on most and where, and with match how well two loudspeakers agree. The
same seed gives the same answer.`,
		Example: `  sixdown spread harbour.toml
  sixdown spread harbour.toml --samples 50000 --seed 7 --tighten`,
		Args:              oneDesign,
		ValidArgsFunction: designFiles,
		RunE: func(cmd *cobra.Command, args []string) error {
			o.design.path = args[0]
			if err := o.picture.check(cmd); err != nil {
				return err
			}
			return runSpread(cmd.Context(), s, &o)
		},
	}
	f := cmd.Flags()
	f.IntVar(&o.set.Samples, "samples", 20000, "builds")
	f.Uint64Var(&o.set.Seed, "seed", 1, "of the builds")
	f.IntVar(&o.set.PerOctave, "per-octave", 12, "frequencies an octave, from 20 Hz to 20 kHz")
	f.BoolVar(&o.tighten, "tighten", false, "say which one part, bought at half its tolerance, helps most")
	o.design.addTo(cmd)
	o.form.addTo(cmd)
	o.picture.addTo(cmd)
	return cmd
}

// A spreading is the answer of spread.
type spreading struct {
	design    *xover.Design
	result    *spread.Result
	tightened []spread.Tightened // nil unless asked for
	yield     float64            // that these are compared with
}

func runSpread(ctx context.Context, s *streams, o *spreadOptions) error {
	if err := o.form.check(); err != nil {
		return err
	}
	switch {
	case o.set.Samples < 2 || o.set.Samples > spread.MaxSamples:
		return usageFault("--samples", fmt.Sprintf("%d builds", o.set.Samples), fmt.Sprintf("give 2 to %d", spread.MaxSamples))
	case o.set.PerOctave < 1 || o.set.PerOctave > 96:
		return usageFault("--per-octave", fmt.Sprintf("%d frequencies", o.set.PerOctave), "give 1 to 96")
	}
	d, sys, err := o.design.loadSystem(s)
	if err != nil {
		return err
	}
	p, err := spread.New(d, sys, tablesIn(o.design.folder()))
	if err != nil {
		return err
	}
	a := &spreading{design: d}
	bar := newProgress(s, "building")
	set := o.set
	set.Progress = bar.at
	a.result, err = p.Run(ctx, set)
	bar.done()
	if err != nil {
		return err
	}
	if a.result.Interrupted {
		s.warn(fmt.Sprintf("interrupted: this is of %d builds", a.result.Samples))
	} else if o.tighten {
		bar := newProgress(s, "tightening")
		set.Samples, set.Progress = min(o.set.Samples, 8000), bar.at
		a.yield, a.tightened, err = p.Tighten(ctx, set, 0.5)
		bar.done()
		if err != nil && !errors.Is(err, context.Canceled) {
			return err
		}
	}
	if o.picture.path != "" {
		inputs := []string{o.design.path}
		if o.design.path == "-" {
			inputs = nil
		}
		if err := o.picture.write(a.page(), inputs...); err != nil {
			return err
		}
	}
	switch {
	case o.form.json:
		err = s.answerJSON(a.document())
	case o.form.csv:
		err = s.answerCSV(a.records())
	default:
		err = s.answer(a.text())
	}
	return unlessInterrupted(a.result.Interrupted, err)
}

// The JSON of spread.
type (
	fanDocument struct {
		Name    string   `json:"name,omitempty"`
		Nominal []number `json:"nominal"`
		P05     []number `json:"p05"`
		P25     []number `json:"p25"`
		P50     []number `json:"p50"`
		P75     []number `json:"p75"`
		P95     []number `json:"p95"`
	}
	sensitivityDocument struct {
		Part         string `json:"part"`
		Way          string `json:"way,omitempty"` // without a sum: whose
		DBPerPercent number `json:"db_per_percent"`
		AtHz         number `json:"at_hz"`
	}
	matchDocument struct {
		LimitDB number `json:"limit_db"`
		Share   number `json:"share"`
		P95DB   number `json:"p95_db"`
	}
	tightenedDocument struct {
		Part  string `json:"part"`
		Tol   number `json:"tol"`
		Yield number `json:"yield"`
	}
	spreadDocument struct {
		FrequencyHz []number              `json:"frequency_hz"`
		Sum         *fanDocument          `json:"sum_db"`
		Ways        []fanDocument         `json:"ways_db"`
		Yield       number                `json:"yield"`
		YieldSigma  number                `json:"yield_sigma"`
		LimitDB     number                `json:"limit_db"`
		BandHz      []number              `json:"band_hz"`
		WorstHz     *number               `json:"worst_hz"`
		Sensitivity []sensitivityDocument `json:"sensitivity"`
		Match       *matchDocument        `json:"match"`
		Tightened   []tightenedDocument   `json:"tightened"`
		Samples     int                   `json:"samples"`
	}
)

func fanned(f *spread.Fan) fanDocument {
	return fanDocument{f.Name, numbers(f.Nominal), numbers(f.P05), numbers(f.P25), numbers(f.P50), numbers(f.P75), numbers(f.P95)}
}

func (a *spreading) document() spreadDocument {
	r := a.result
	doc := spreadDocument{
		FrequencyHz: numbers(r.Freqs), Ways: []fanDocument{}, Yield: number(r.Yield), YieldSigma: number(r.YieldSigma), LimitDB: number(r.LimitDB),
		BandHz: numbers(r.Band[:]), Sensitivity: []sensitivityDocument{}, Samples: r.Samples,
	}
	if r.Sum != nil {
		sum := fanned(r.Sum)
		sum.Name = ""
		doc.Sum = &sum
	}
	for i := range r.Ways {
		doc.Ways = append(doc.Ways, fanned(&r.Ways[i]))
	}
	if r.WorstAt > 0 {
		at := number(r.WorstAt)
		doc.WorstHz = &at
	}
	for _, s := range r.Sensitivities {
		doc.Sensitivity = append(doc.Sensitivity, sensitivityDocument{s.Part, s.Way, number(s.DBPerPercent), number(s.AtHz)})
	}
	if m := r.Match; m != nil {
		doc.Match = &matchDocument{number(m.LimitDB), number(m.Share), number(m.P95DB)}
	}
	for _, t := range a.tightened {
		doc.Tightened = append(doc.Tightened, tightenedDocument{t.Part, number(t.Tol), number(t.Yield)})
	}
	return doc
}

// records is the table of the fans.
func (a *spreading) records() [][]string {
	r := a.result
	names, columns := []string{"frequency_hz"}, [][]number{numbers(r.Freqs)}
	add := func(f *spread.Fan) {
		for _, q := range []struct {
			name   string
			values []float64
		}{{"nominal", f.Nominal}, {"p05", f.P05}, {"p25", f.P25}, {"p50", f.P50}, {"p75", f.P75}, {"p95", f.P95}} {
			names, columns = append(names, f.Name+"_"+q.name+"_db"), append(columns, numbers(q.values))
		}
	}
	if r.Sum != nil {
		add(r.Sum)
	}
	for i := range r.Ways {
		add(&r.Ways[i])
	}
	return csvRecords(names, columns)
}

// text is the answer for people.
func (a *spreading) text() string {
	r := a.result
	var b strings.Builder
	b.WriteString(a.fanTable().Text(pageWidth))
	b.WriteByte('\n')
	about := "the nominal sum"
	switch {
	case r.Sum == nil:
		about = "the nominal gains"
	case a.design.Spread.AboutLevel:
		about = "the level that is aimed at"
	}
	text := fmt.Sprintf("%s %% of %d builds stay within %s of %s from %s to %s", fixed(100*r.Yield, 1), r.Samples, decibels(r.LimitDB), about, roughly(r.Band[0]), roughly(r.Band[1]))
	if r.WorstAt > 0 {
		text += "; the others leave it most about " + roughly(r.WorstAt)
	}
	b.WriteString(folded("yield     ", text))
	if m := r.Match; m != nil {
		b.WriteString(folded("match     ", fmt.Sprintf("%s %% of pairs are within %s of each other; 95 %% within %s", fixed(100*m.Share, 1), decibels(m.LimitDB), decibels(m.P95DB))))
	}
	label := "parts     "
	for i, s := range r.Sensitivities {
		if i == mostParts {
			fmt.Fprintf(&b, "          and %d that matter less\n", len(r.Sensitivities)-i)
			break
		}
		of := ""
		if s.Way != "" {
			of = " of " + s.Way
		}
		fmt.Fprintf(&b, "%s%-6s %s dB for 1 %%%s at %s\n", label, s.Part, signed3(s.DBPerPercent), of, roughly(s.AtHz))
		label = "          "
	}
	label = "tighten   "
	for i, t := range a.tightened {
		if i == mostParts {
			break
		}
		fmt.Fprintf(&b, "%s%-6s at %s %%: %s %% pass instead of %s %%\n", label, t.Part, figures(100*t.Tol, 3), fixed(100*t.Yield, 1), fixed(100*a.yield, 1))
		label = "          "
	}
	return b.String()
}

// mostParts is how many parts are listed.
const mostParts = 12

// signed3 writes a change in dB with its sign and three decimals.
func signed3(v float64) string {
	if text := fixed(v, 3); strings.HasPrefix(text, "-") {
		return text
	}
	return "+" + fixed(v, 3)
}

// page is the answer as a picture.
func (a *spreading) page() *chart.Page {
	r := a.result
	page := &chart.Page{Title: a.design.Title, Caption: []string{fmt.Sprintf("%s %% of %d builds stay within %s from %s to %s", fixed(100*r.Yield, 1), r.Samples, decibels(r.LimitDB), roughly(r.Band[0]), roughly(r.Band[1]))}}
	var fans []chart.Fan
	add := func(f *spread.Fan) {
		fans = append(fans, chart.Fan{Name: f.Name, Freqs: r.Freqs, Nominal: f.Nominal, Low: f.P05, InnerLow: f.P25, InnerTop: f.P75, Top: f.P95})
	}
	if r.Sum != nil {
		add(r.Sum)
	}
	for i := range r.Ways {
		add(&r.Ways[i])
	}
	limit := r.LimitDB
	if a.design.Spread.AboutLevel {
		limit = 0 // it is not about the nominal sum
	}
	page.Panels = append(page.Panels, chart.Fans(fans, r.Sum != nil, limit, r.Band, "tints: half of the builds, and 90 % of them"))
	if r.Sum != nil {
		page.Panels = append(page.Panels, chart.FanDeviation(&fans[0], limit, r.Band))
	}
	var bars []chart.Bar
	for i, x := range r.Sensitivities {
		if i < mostParts {
			bars = append(bars, chart.Bar{Name: x.Part, Value: math.Abs(x.DBPerPercent), Remark: signed3(x.DBPerPercent) + " dB at " + roughly(x.AtHz)})
		}
	}
	page.Panels = append(page.Panels, chart.Bars("Sensitivity", "dB for 1 % more, and where it is greatest", " dB", bars))
	return page
}

// fanTable is the fan of the sum, or of the ways where there is none, in about third-octaves.
func (a *spreading) fanTable() *table.Table {
	r := a.result
	fans := r.Ways
	if r.Sum != nil {
		fans = []spread.Fan{*r.Sum}
	}
	columns := []table.Column{{Name: "f", Unit: "Hz"}}
	for _, f := range fans {
		for _, name := range []string{"nominal", "5 %", "50 %", "95 %"} {
			columns = append(columns, table.Column{Group: f.Name, Name: name, Unit: "dB"})
		}
	}
	t := table.New(columns...)
	octaves := math.Log2(r.Freqs[len(r.Freqs)-1] / r.Freqs[0])
	step := max(1, int(math.Round(float64(len(r.Freqs)-1)/octaves/3)))
	for k := 0; k < len(r.Freqs); k += step {
		cells := []string{figures(r.Freqs[k], 4)}
		for _, f := range fans {
			cells = append(cells, fixed(f.Nominal[k], 2), fixed(f.P05[k], 2), fixed(f.P50[k], 2), fixed(f.P95[k], 2))
		}
		t.Row(cells...)
	}
	return t
}
