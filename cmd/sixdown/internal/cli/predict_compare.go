package cli

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"github.com/spf13/cobra"

	"sixdown/cmd/sixdown/internal/caution"
	"sixdown/cmd/sixdown/internal/table"
	"sixdown/sim"
)

// A comparison is two predictions over the same frequencies, A and B.
type comparison struct {
	a, b     *prediction
	from, to string // the files' names
	changes  string // what of B is not as its file says; "": nothing
}

// The JSON document of predict with two designs.
type (
	comparisonDocument struct {
		A          predictDocument    `json:"a"`
		B          predictDocument    `json:"b"`
		Difference differenceDocument `json:"difference"` // b less a
	}
	differenceDocument struct {
		SumSPLDB []number                `json:"sum_spl_db"` // null unless both have a sum
		Ways     []wayDifferenceDocument `json:"ways"`       // of the ways that both have by name
	}
	wayDifferenceDocument struct {
		Name   string   `json:"name"`
		GainDB []number `json:"gain_db"`
	}
)

// oneOrTwoDesigns is the Args of a command that works on a design file and may compare it with another.
func oneOrTwoDesigns(cmd *cobra.Command, args []string) error {
	if len(args) < 2 {
		return oneDesign(cmd, args)
	}
	if len(args) > 2 {
		return usageFault(cmd.Name(), fmt.Sprintf("%d arguments are given, %s", len(args), quoted(args)), "give one design file, or two to compare, and quote what has a blank in it")
	}
	if args[0] == "-" && args[1] == "-" {
		return usageFault(cmd.Name(), "both designs are to come from standard input", "give at least one by the name of its file")
	}
	return nil
}

// twoDesignFiles completes the names of one or two design files in a shell.
func twoDesignFiles(cmd *cobra.Command, args []string, word string) ([]string, cobra.ShellCompDirective) {
	if len(args) == 1 {
		args = nil
	}
	return designFiles(cmd, args, word)
}

// runCompare predicts the design of o as B, and the other file, as it is, as A.
func runCompare(s *streams, o *predictOptions) error {
	plain := designOptions{path: o.against}
	da, sa, err := o.around.turned(plain.loadSystem(s))
	if err != nil {
		return err
	}
	db, sb, err := o.around.turned(o.design.loadSystem(s))
	if err != nil {
		return err
	}
	forPeople := !o.form.json && !o.form.csv
	freqs := o.grid.frequencies(da, forPeople)
	if len(o.grid.at) == 0 {
		freqs = slices.Concat(freqs, o.grid.frequencies(db, forPeople)) // each has its own targets among them
		slices.Sort(freqs)
		freqs = slices.Compact(freqs)
	}
	c := &comparison{from: o.against, to: o.design.path, changes: strings.Join(slices.Concat(o.design.set, o.design.turn), ", ")}
	if c.a, err = predictAt(s, da, sa, freqs); err != nil {
		return err
	}
	if c.b, err = predictAt(s, db, sb, freqs); err != nil {
		return err
	}
	if o.chart.path != "" {
		o.chart.changes = c.changes
		if err := o.chart.draw(s, []*prediction{c.a, c.b}, &o.grid, o.against, o.design.path); err != nil {
			return err
		}
	}
	switch {
	case o.form.json:
		return s.answerJSON(comparisonDocument{c.a.document(), c.b.document(), c.difference()})
	case o.form.csv:
		return s.answerCSV(c.records())
	}
	return s.answer(c.text())
}

// difference returns what B has more than A, in dB.
func (c *comparison) difference() differenceDocument {
	d := differenceDocument{Ways: []wayDifferenceDocument{}}
	if c.sums() {
		d.SumSPLDB = numbers(less(sim.SPLs(c.b.Sum), sim.SPLs(c.a.Sum)))
	}
	for _, w := range c.common() {
		d.Ways = append(d.Ways, wayDifferenceDocument{w[0].Name, numbers(less(sim.DBs(w[1].H), sim.DBs(w[0].H)))})
	}
	return d
}

// sums reports whether both have a sum.
func (c *comparison) sums() bool { return c.a.Sum != nil && c.b.Sum != nil }

// common returns the ways that both have by name, A's and B's.
func (c *comparison) common() [][2]*sim.WayResponse {
	var both [][2]*sim.WayResponse
	for i := range c.a.Ways {
		for j := range c.b.Ways {
			if c.a.Ways[i].Name == c.b.Ways[j].Name {
				both = append(both, [2]*sim.WayResponse{&c.a.Ways[i], &c.b.Ways[j]})
			}
		}
	}
	return both
}

// less returns b - a, one by one; not-a-number where both are infinite.
func less(b, a []float64) []float64 {
	d := make([]float64, len(b))
	for i := range b {
		d[i] = b[i] - a[i]
	}
	return d
}

// text returns the comparison for people: a table, then what is looked for first in each.
func (c *comparison) text() string {
	var b strings.Builder
	fmt.Fprintf(&b, "A  %s\nB  %s", titled(c.a, c.from), titled(c.b, c.to))
	if c.changes != "" {
		fmt.Fprintf(&b, " with %s", c.changes)
	}
	b.WriteByte('\n')
	if c.sums() {
		b.WriteString(c.conditions() + "\n")
	}
	if a := angleText(c.a.Angle); a != "" {
		fmt.Fprintf(&b, "The ear is turned %s\n", a)
	}
	b.WriteByte('\n')
	b.WriteString(c.table().Text(pageWidth))
	for _, p := range []struct {
		name string
		*prediction
	}{{"A", c.a}, {"B", c.b}} {
		b.WriteByte('\n')
		for line := range strings.Lines(p.summaryText()) {
			b.WriteString(p.name + "  " + line)
		}
	}
	if at, most, ok := c.furthest(); ok {
		fmt.Fprintf(&b, "\nB less A  the sums differ most at %s, by %s dB, of the frequencies above\n", hertz(at), signed(most))
	}
	if c.a.design.Tone != nil || c.b.design.Tone != nil {
		b.WriteString("\n" + caution.Text(caution.Valves()))
	}
	return b.String()
}

// conditions says at what distance and for what voltage the SPL of the two is.
func (c *comparison) conditions() string { return splConditions([]*prediction{c.a, c.b}) }

// titled returns a design's title with its file.
func titled(p *prediction, file string) string {
	if p.Title == "" {
		return file
	}
	return p.Title + " (" + file + ")"
}

// furthest returns where in the table the sums differ most, and by how much; false if there are none.
func (c *comparison) furthest() (at, most float64, ok bool) {
	if !c.sums() {
		return 0, 0, false
	}
	for k, d := range less(sim.SPLs(c.b.Sum), sim.SPLs(c.a.Sum)) {
		if math.Abs(d) > math.Abs(most) || k == 0 {
			at, most, ok = c.a.Freqs[k], d, true
		}
	}
	return at, most, ok
}

func (c *comparison) table() *table.Table {
	columns := []table.Column{{Name: "f", Unit: "Hz"}}
	three := func(group string) {
		columns = append(columns, table.Column{Group: group, Name: "A", Unit: "dB"}, table.Column{Group: group, Name: "B", Unit: "dB"}, table.Column{Group: group, Name: "B less A", Unit: "dB"})
	}
	if c.sums() {
		three("SPL of the sum")
	}
	for _, w := range c.common() {
		if c.sums() {
			columns = append(columns, table.Column{Group: "gain, B less A", Name: w[0].Name, Unit: "dB"})
		} else {
			three("gain of " + w[0].Name)
		}
	}
	columns = append(columns, table.Column{Group: "load |Z|", Name: "A", Unit: "Ω"}, table.Column{Group: "load |Z|", Name: "B", Unit: "Ω"})
	t := table.New(columns...)
	for k, f := range c.a.Freqs {
		row := []string{figures(f, 5)}
		pair := func(a, b float64) { row = append(row, fixed(a, 2), fixed(b, 2), signed(b-a)) }
		if c.sums() {
			pair(sim.SPL(c.a.Sum[k]), sim.SPL(c.b.Sum[k]))
		}
		for _, w := range c.common() {
			if a, b := sim.DB(w[0].H[k]), sim.DB(w[1].H[k]); c.sums() {
				row = append(row, signed(b-a))
			} else {
				pair(a, b)
			}
		}
		t.Row(append(row, ohms(sim.Magnitudes(c.a.Zin[k : k+1])[0]), ohms(sim.Magnitudes(c.b.Zin[k : k+1])[0]))...)
	}
	return t
}

// records returns the comparison as CSV has it: A's columns, B's, and the differences.
func (c *comparison) records() [][]string {
	all := c.a.records()
	for i := range all[0][1:] {
		all[0][i+1] = "a_" + all[0][i+1]
	}
	for k, record := range c.b.records() {
		record = record[1:]
		if k == 0 {
			for i := range record {
				record[i] = "b_" + record[i]
			}
		}
		all[k] = append(all[k], record...)
	}
	d := c.difference()
	add := func(name string, column []number) {
		all[0] = append(all[0], name)
		for k, n := range column {
			all[k+1] = append(all[k+1], n.csv())
		}
	}
	if d.SumSPLDB != nil {
		add("difference_sum_spl_db", d.SumSPLDB)
	}
	for _, w := range d.Ways {
		add("difference_"+w.Name+"_gain_db", w.GainDB)
	}
	return all
}
