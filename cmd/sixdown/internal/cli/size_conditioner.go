package cli

import (
	"fmt"
	"strings"

	"github.com/spf13/cobra"

	"sixdown/cmd/sixdown/internal/caution"
	"sixdown/cmd/sixdown/internal/table"
	"sixdown/xover/ladder"
	"sixdown/xover/preferred"
	"sixdown/xover/quantity"
)

// A conditioner is a network that tames a driver, sized, with what is said of it.
type conditioner struct {
	title    string
	network  ladder.Network
	facts    []fact
	source   string   // where the formula comes from
	cautions []string // a sentence each
}

// A fact is a number beside the parts.
type fact struct {
	key   string // in JSON, with its unit
	value number
	say   string // for people; "": the fact is in a sentence of another
}

// conditionerOptions are common to the commands that size a conditioner.
type conditionerOptions struct {
	series string
	form   answerForm
}

// newConditionerCmd makes a command of its use, help and example, with the common flags. size makes the network of
// the flags that the caller adds, of which needed must be given.
func newConditionerCmd(s *streams, cmd *cobra.Command, needed []string, size func(series preferred.Series) (*conditioner, error)) *cobra.Command {
	var o conditionerOptions
	cmd.Args = noArguments
	cmd.RunE = func(cmd *cobra.Command, _ []string) error {
		if err := requireFlags(cmd, needed...); err != nil {
			return err
		}
		return runConditioner(s, &o, size)
	}
	addSeries(cmd, &o.series)
	o.form.addTo(cmd)
	return cmd
}

func runConditioner(s *streams, o *conditionerOptions, size func(preferred.Series) (*conditioner, error)) error {
	if err := o.form.check(); err != nil {
		return err
	}
	series, err := readSeries(o.series)
	if err != nil {
		return err
	}
	c, err := size(series)
	if err != nil {
		return err
	}
	a := newConditionerAnswer(c, series)
	switch {
	case o.form.json:
		return s.answerJSON(a.document())
	case o.form.csv:
		return s.answerCSV(a.records())
	}
	return s.answer(a.text())
}

// A conditionerAnswer is a conditioner with its steps and parts named.
type conditionerAnswer struct {
	*conditioner
	series preferred.Series
	steps  []string
	parts  []ladder.NamedPart
}

func newConditionerAnswer(c *conditioner, series preferred.Series) *conditionerAnswer {
	a := &conditionerAnswer{conditioner: c, series: series}
	a.steps, a.parts = c.network.Steps(&ladder.Namer{})
	return a
}

// text returns the answer for people.
func (a *conditionerAnswer) text() string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s\n\n", a.title)
	fmt.Fprintf(&b, "network = %s\n\n", tomlList(a.steps))
	t := table.New(table.Column{Name: "part", Left: true}, table.Column{Name: "value"},
		table.Column{Group: a.series.String(), Name: "below"}, table.Column{Group: a.series.String(), Name: "above"}, table.Column{Group: a.series.String(), Name: "nearest"})
	for _, p := range a.parts {
		below, above := a.series.Neighbours(p.Value)
		row := []string{p.Name, partValue(p.Kind, p.Value, 4)}
		for _, v := range []float64{below, above, a.series.Nearest(p.Value)} {
			row = append(row, preferredValue(p.Kind, v, a.series))
		}
		t.Row(row...)
	}
	b.WriteString(t.Text(pageWidth))
	b.WriteByte('\n')
	for _, f := range a.facts {
		if f.say != "" {
			b.WriteString(folded("", f.say))
		}
	}
	b.WriteString(folded("Source: ", a.source))
	if len(a.cautions) > 0 {
		b.WriteString("\n" + caution.Text(a.cautions))
	}
	return b.String()
}

// The JSON document of a conditioner.
type (
	conditionerDocument struct {
		Network   []string            `json:"network"`
		Parts     partValues          `json:"parts"` // Ω, H or F
		Series    string              `json:"series"`
		Preferred []preferredDocument `json:"preferred"`
		Facts     factsDocument       `json:"facts"`
		Source    string              `json:"source"`
		Cautions  []string            `json:"cautions"`
	}
	preferredDocument struct {
		Part    string `json:"part"`
		Below   number `json:"below"`
		Above   number `json:"above"`
		Nearest number `json:"nearest"`
	}
)

// factsDocument is a JSON object of facts in their order.
type factsDocument []fact

// MarshalJSON implements json.Marshaler.
func (f factsDocument) MarshalJSON() ([]byte, error) {
	b := []byte{'{'}
	for i, fact := range f {
		if i > 0 {
			b = append(b, ',')
		}
		value, err := fact.value.MarshalJSON()
		if err != nil {
			return nil, err
		}
		b = fmt.Appendf(b, "%q:%s", fact.key, value)
	}
	return append(b, '}'), nil
}

func (a *conditionerAnswer) document() conditionerDocument {
	doc := conditionerDocument{
		Network: a.steps, Parts: a.parts, Series: a.series.String(), Preferred: []preferredDocument{},
		Facts: a.facts, Source: a.source, Cautions: append([]string{}, a.cautions...),
	}
	for _, p := range a.parts {
		below, above := a.series.Neighbours(p.Value)
		doc.Preferred = append(doc.Preferred, preferredDocument{p.Name, number(below), number(above), number(a.series.Nearest(p.Value))})
	}
	return doc
}

// records returns the answer as CSV has it, a record for each part. Values are in Ω, H or F.
func (a *conditionerAnswer) records() [][]string {
	records := [][]string{{"part", "unit", "value", "below", "above", "nearest"}}
	for _, p := range a.document().Preferred {
		for _, part := range a.parts {
			if part.Name == p.Part {
				records = append(records, []string{p.Part, partUnit(part.Kind).String(), number(part.Value).csv(), p.Below.csv(), p.Above.csv(), p.Nearest.csv()})
			}
		}
	}
	return records
}

// addQuantity adds a flag with a unit.
func addQuantity(cmd *cobra.Command, value *float64, u quantity.Unit, name, usage string) {
	cmd.Flags().Var(&quantityFlag{unit: u, value: value}, name, usage)
}
