package cli

import (
	"fmt"
	"strconv"
	"strings"

	"github.com/spf13/cobra"

	"sixdown/cmd/sixdown/internal/caution"
	"sixdown/cmd/sixdown/internal/chart"
	"sixdown/cmd/sixdown/internal/table"
	"sixdown/sim"
	"sixdown/xover"
)

// familyOptions ask for a tone network over the travel of a control.
type familyOptions struct {
	control string // "": no
	steps   int
}

// mostSteps is how many settings are shown at most.
const mostSteps = 101

func (o *familyOptions) addTo(cmd *cobra.Command) {
	cmd.Flags().StringVar(&o.control, "family", "", "of a tone network: the output over the travel of this `control`, and the reach of all")
	cmd.Flags().IntVar(&o.steps, "steps", 5, "with --family: how many `settings`")
}

func (o *familyOptions) check(cmd *cobra.Command, against string, around *aroundOptions) error {
	switch {
	case o.control == "" && cmd.Flags().Changed("steps"):
		return usageFault("--steps", "it is about a family of curves, and none is asked for", "give --family too, as in --family treble")
	case o.control == "":
		return nil
	case o.steps < 2 || o.steps > mostSteps:
		return usageFault("--steps", fmt.Sprintf("%d settings", o.steps), fmt.Sprintf("give 2 to %d", mostSteps))
	case against != "":
		return usageFault("--family", "two designs are given", "give one; the family is of a single design")
	case around.table() != "" || around.angleText != "":
		return usageFault("--family", "it is of a tone network, which is not heard at angles", "leave one of them out")
	}
	return nil
}

// The JSON of predict --family.
type (
	familyDocument struct {
		Title       string            `json:"title"`
		Control     string            `json:"control"`
		FrequencyHz []number          `json:"frequency_hz"`
		Settings    []settingDocument `json:"settings"`
		Reach       []reachDocument   `json:"reach"`
	}
	settingDocument struct {
		At       number   `json:"at"`
		GainDB   []number `json:"gain_db"`
		PhaseDeg []number `json:"phase_deg"`
		InputOhm []number `json:"input_impedance_ohm"`
	}
	reachDocument struct {
		Control     string `json:"control"`
		FrequencyHz number `json:"frequency_hz"`
		LeastDB     number `json:"least_db"`
		GreatestDB  number `json:"greatest_db"`
		WorthLeast  number `json:"worth_least_db"` // of its travel, over the other controls at ends and middles
		WorthMost   number `json:"worth_most_db"`
		LeastOhm    number `json:"least_input_ohm"`
		LeastOhmAt  number `json:"least_input_at"` // its setting there
	}
)

func runFamily(s *streams, o *predictOptions, d *xover.Design, freqs []float64) error {
	f, err := sim.NewFamily(d, o.family.control, o.family.steps, freqs)
	if err != nil {
		return err
	}
	if o.chart.path != "" {
		fine := gridOptions{from: o.grid.from, to: o.grid.to, perOctave: max(o.grid.perOctave, drawingPerOctave)}
		drawn, err := sim.NewFamily(d, o.family.control, o.family.steps, fine.even())
		if err != nil {
			return err
		}
		page := &chart.Page{Title: d.Title, Caption: reachLines(f, o.family.control), Panels: []chart.Panel{chart.FamilyCurves(drawn, "dB re the open-circuit source; the other controls as the design has them")}}
		if err := o.chart.write(page, o.design.path); err != nil {
			return err
		}
	}
	switch {
	case o.form.json:
		return s.answerJSON(familyAnswer(d, f))
	case o.form.csv:
		return s.answerCSV(familyRecords(f))
	}
	return s.answer(familyText(d, f))
}

func familyAnswer(d *xover.Design, f *sim.Family) familyDocument {
	doc := familyDocument{Title: d.Title, Control: f.Control, FrequencyHz: numbers(f.Responses[0].Freqs)}
	for i, r := range f.Responses {
		doc.Settings = append(doc.Settings, settingDocument{number(f.At[i]), numbers(sim.DBs(r.Ways[0].H)), phases(r.Ways[0].H), numbers(sim.Magnitudes(r.Zin))})
	}
	for _, r := range f.Reaches {
		doc.Reach = append(doc.Reach, reachDocument{r.Control, number(r.Frequency), number(r.LeastDB), number(r.GreatestDB), number(r.LeastAnyDB), number(r.MostAnyDB), number(r.LeastOhms), number(r.LeastOhmsAt)})
	}
	return doc
}

// settingName writes a setting, "0.25".
func settingName(at float64) string { return strconv.FormatFloat(at, 'g', 3, 64) }

func familyRecords(f *sim.Family) [][]string {
	names := []string{"frequency_hz"}
	columns := [][]number{numbers(f.Responses[0].Freqs)}
	for i, r := range f.Responses {
		names, columns = append(names, f.Control+"_"+settingName(f.At[i])+"_gain_db"), append(columns, numbers(sim.DBs(r.Ways[0].H)))
	}
	return csvRecords(names, columns)
}

func familyText(d *xover.Design, f *sim.Family) string {
	var b strings.Builder
	if d.Title != "" {
		fmt.Fprintf(&b, "%s\n", d.Title)
	}
	columns := []table.Column{{Name: "f", Unit: "Hz"}}
	for _, at := range f.At {
		columns = append(columns, table.Column{Group: "output by " + f.Control, Name: settingName(at), Unit: "dB"})
	}
	t := table.New(columns...)
	for k, hz := range f.Responses[0].Freqs {
		row := []string{figures(hz, 5)}
		for _, r := range f.Responses {
			row = append(row, fixed(sim.DB(r.Ways[0].H[k]), 2))
		}
		t.Row(row...)
	}
	b.WriteString("\n" + t.Text(pageWidth) + "\n")
	reach := table.New(table.Column{Name: "reach of", Left: true}, table.Column{Name: "at"}, table.Column{Name: "from", Unit: "dB"}, table.Column{Name: "to", Unit: "dB"},
		table.Column{Group: "worth, the others anywhere", Name: "least", Unit: "dB"}, table.Column{Group: "worth, the others anywhere", Name: "most", Unit: "dB"})
	load, at := f.Reaches[0].LeastOhms, ""
	for _, r := range f.Reaches {
		reach.Row(r.Control, hertz(r.Frequency), fixed(r.LeastDB, 1), fixed(r.GreatestDB, 1), fixed(r.LeastAnyDB, 1), fixed(r.MostAnyDB, 1))
		if r.LeastOhms <= load {
			load, at = r.LeastOhms, fmt.Sprintf("%s at %s", r.Control, settingName(r.LeastOhmsAt))
		}
	}
	b.WriteString(reach.Text(pageWidth))
	fmt.Fprintf(&b, "\nload      lowest |Z| over the travel of each control %s Ω, with %s\n", ohms(load), at)
	b.WriteString("\n" + caution.Text(caution.Valves()))
	return b.String()
}

// reachLines says in a caption how far the control reaches.
func reachLines(f *sim.Family, control string) []string {
	var said []string
	for _, r := range f.Reaches {
		if r.Control == control {
			said = append(said, fmt.Sprintf("%s: %s to %s dB", hertz(r.Frequency), fixed(r.LeastDB, 1), fixed(r.GreatestDB, 1)))
		}
	}
	return []string{strings.ReplaceAll(control+" reaches at "+strings.Join(said, "; "), "-", "−")}
}
