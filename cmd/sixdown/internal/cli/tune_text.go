package cli

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"sixdown/cmd/sixdown/internal/table"
	"sixdown/sim/tune"
	"sixdown/xover/preferred"
	"sixdown/xover/quantity"
)

// The JSON of tune.
type (
	scoreDocument struct {
		Objective    number `json:"objective"` // dB²
		SumRMSDB     number `json:"sum_rms_db"`
		WayRMSDB     number `json:"way_rms_db"`
		PhaseRMSDeg  number `json:"phase_rms_deg"`
		MinImpedance number `json:"min_impedance_ohm"`
		MinAt        number `json:"min_impedance_hz"`
		LevelDB      number `json:"level_db"`
	}
	adviceDocument struct {
		Part string `json:"part"`
		Say  string `json:"say"`
		How  string `json:"how"` // what takes its place: open or short
	}
	worthDocument struct {
		Part    string `json:"part"`
		Without number `json:"objective_without"` // the others tuned anew; null: it must be there
		How     string `json:"how"`
	}
	bindingDocument struct {
		Part  string `json:"part"`  // "" for the least impedance
		Bound string `json:"bound"` // least or greatest
		Limit number `json:"limit"`
		AtHz  number `json:"at_hz"` // of the least impedance; else null
	}
	itemDocument struct {
		Parts    []string `json:"parts"`
		Values   []number `json:"values"`   // two of a pair
		Joined   string   `json:"joined"`   // series or parallel; "" for one
		Names    []string `json:"names"`    // of those that have one
		Quantity int      `json:"quantity"` // of each
		Price    number   `json:"price"`    // of all; null where one has none
		Tol      number   `json:"tol"`      // a fraction; null: not stated
	}
	changeDocument struct {
		Part   string `json:"part"`
		Before number `json:"before"`
		After  number `json:"after"`
		Way    string `json:"way"`
		FromHz number `json:"from_hz"`
		ToHz   number `json:"to_hz"`
		DB     number `json:"db"`
		Costs  number `json:"undoing_costs_db2"`
	}
	yieldDocument struct {
		Before number            `json:"before"`
		After  number            `json:"after"`
		Sigma  number            `json:"sigma"`
		Score  scoreDocument     `json:"score"`
		Parts  map[string]number `json:"parts"`
	}
	tuneDocument struct {
		Before      scoreDocument     `json:"before"`
		After       scoreDocument     `json:"after"`
		Stock       *scoreDocument    `json:"stock"`
		Rounded     *scoreDocument    `json:"rounded"`
		Parts       map[string]number `json:"parts"`
		Settings    map[string]number `json:"settings,omitempty"` // of controls, with --settings
		StockParts  map[string]number `json:"stock_parts"`
		StockDCR    map[string]number `json:"stock_dcr_ohm"`
		Shopping    []itemDocument    `json:"shopping"`
		Price       *number           `json:"price"`
		Proved      *bool             `json:"stock_proved"`
		Advice      []adviceDocument  `json:"advice"`
		Worth       []worthDocument   `json:"worth"` // of every part, the least first
		Binding     []bindingDocument `json:"binding"`
		Changes     []changeDocument  `json:"changes"`
		Yield       *yieldDocument    `json:"yield"`
		Status      string            `json:"status"`
		Interrupted bool              `json:"interrupted"`
		Met         bool              `json:"min_impedance_met"`
		Evaluations int               `json:"evaluations"`
		Seconds     number            `json:"seconds"`
	}
)

func scored(s tune.Score) scoreDocument {
	return scoreDocument{number(s.Objective), number(s.SumRMSDB), number(s.WayRMSDB), number(s.PhaseRMSDeg), number(s.MinImpedance), number(s.MinImpedanceAt), number(s.LevelDB)}
}

func statusText(s tune.Status) string {
	switch s {
	case tune.Interrupted:
		return "interrupted"
	case tune.Limited:
		return "stopped at the limit of steps"
	}
	return "converged"
}

// byPart returns values by the names of the parts, followers among them.
func (t *tuning) byPart(values []float64) map[string]number {
	m := map[string]number{}
	for v, value := range values {
		if t.vars[v].Control != "" {
			continue
		}
		for _, name := range append([]string{t.vars[v].Part}, t.vars[v].Followers...) {
			m[name] = number(value)
		}
	}
	return m
}

func (t *tuning) document() tuneDocument {
	r := t.result
	doc := tuneDocument{
		Before: scored(r.Before), After: scored(r.After), Parts: t.byPart(r.Values), Advice: []adviceDocument{}, Worth: []worthDocument{}, Binding: []bindingDocument{},
		Status: statusText(r.Status), Interrupted: t.interrupted(), Met: !r.Unmet, Evaluations: r.Evaluations, Seconds: number(t.seconds),
	}
	for v, q := range t.vars {
		if q.Control != "" {
			if doc.Settings == nil {
				doc.Settings = map[string]number{}
			}
			doc.Settings[q.Control] = number(r.Values[v])
		}
	}
	for _, w := range t.worths {
		how := "short"
		if w.Open {
			how = "open"
		}
		if w.Useless {
			doc.Advice = append(doc.Advice, adviceDocument{w.Part, leaveOut, how})
		}
		doc.Worth = append(doc.Worth, worthDocument{w.Part, number(w.Without), how})
	}
	for _, b := range r.Binding {
		bound := "least"
		if b.Upper {
			bound = "greatest"
		}
		at := b.At
		if b.Part != "" {
			at = math.NaN()
		}
		doc.Binding = append(doc.Binding, bindingDocument{b.Part, bound, number(b.Limit), number(at)})
	}
	if b := t.bought; b != nil {
		stock, rounded, price := scored(b.Score), scored(b.Rounded), number(math.NaN())
		if b.Price > 0 {
			price = number(b.Price)
		}
		doc.Stock, doc.Rounded, doc.Price, doc.Proved, doc.StockParts = &stock, &rounded, &price, &b.Proved, t.byPart(b.Values)
		doc.StockDCR = map[string]number{}
		for v, ohm := range b.Ohms {
			if ohm > 0 {
				doc.StockDCR[t.vars[v].Part] = number(ohm)
			}
		}
		doc.Met = !b.Unmet
		for v, c := range b.Choices {
			item := itemDocument{Parts: append([]string{c.Part}, t.vars[v].Followers...), Quantity: c.Parts, Values: []number{}, Names: []string{}}
			for _, it := range c.Items {
				item.Values = append(item.Values, number(it.Value))
				if it.Name != "" {
					item.Names = append(item.Names, it.Name)
				}
				if it.Price < 0 {
					it.Price = math.NaN()
				}
				item.Price += number(it.Price * float64(c.Parts))
			}
			if item.Tol = number(c.Tol()); item.Tol < 0 {
				item.Tol = number(math.NaN())
			}
			item.Joined = joined(&c)
			doc.Shopping = append(doc.Shopping, item)
		}
	}
	if c := t.centred; c != nil {
		doc.Yield = &yieldDocument{number(c.Before), number(c.After), number(c.Sigma), scored(c.Score), t.byPart(c.Values)}
	}
	if t.explain != nil {
		for _, c := range t.explain.Changes {
			doc.Changes = append(doc.Changes, changeDocument{c.Part, number(c.Before), number(c.After), c.Way, number(c.From), number(c.To), number(c.DB), number(c.Costs)})
		}
	}
	return doc
}

// joined says how a pair is connected; "" for one part.
func joined(c *tune.Choice) string {
	switch {
	case len(c.Items) < 2:
		return ""
	case c.Parallel:
		return "parallel"
	}
	return "series"
}

const leaveOut = "contributes nothing; leave it out"

// adviceText says of a part that is worth nothing how to leave it out.
func adviceText(w *tune.Worth) string {
	how := "put a wire in its place"
	if w.Open {
		how = "leave its place empty"
	}
	text := w.Part + " " + leaveOut + ": " + how
	if w.Costs > 0 && w.Without > 0 {
		text += fmt.Sprintf(", for an error of %s instead of %s", decibels(rms(w.Without)), decibels(rms(w.Without-w.Costs)))
	}
	return text
}

// text is the answer for people.
func (t *tuning) text() string {
	var b strings.Builder
	r := t.result
	b.WriteString(t.scoresText())
	b.WriteByte('\n')
	b.WriteString(t.partsText())
	if r.Status == tune.Interrupted {
		b.WriteString("interrupted: this is the best so far\n")
	}
	for _, bind := range r.Binding {
		b.WriteString(folded("binds     ", t.bindingText(bind)))
	}
	if t.bought != nil {
		b.WriteString(t.boughtText())
	}
	if c := t.centred; c != nil {
		b.WriteString(folded("yield     ", fmt.Sprintf("%s %% of builds pass when tuned, %s %% when centred (standard error %s points)", fixed(100*c.Before, 1), fixed(100*c.After, 1), fixed(100*c.Sigma, 1))))
	}
	useless := 0
	ideal := ""
	if t.bought != nil {
		ideal = "with ideal values "
	}
	for _, w := range t.worths {
		if w.Useless {
			useless++
			b.WriteString(folded("advice    ", ideal+adviceText(&w)))
		}
	}
	if useless > 1 {
		b.WriteString("          each by itself: tune again after leaving one out\n")
	}
	if t.explain != nil {
		b.WriteByte('\n')
		b.WriteString(t.explainText())
	}
	if t.unmet() {
		b.WriteString(folded("limit     ", fmt.Sprintf("the load falls to %s Ω, below min_impedance, whatever was tried: nothing is written", ohms(t.chosenScore().MinImpedance))))
	} else if t.written != "" {
		b.WriteString("written   " + t.written + "\n")
	} else {
		b.WriteString("nothing is written; --out FILE or --in-place does\n")
	}
	return b.String()
}

// scoresText sets the scores side by side.
func (t *tuning) scoresText() string {
	columns := []table.Column{{Name: ""}, {Name: "before"}, {Name: "tuned"}}
	scores := []tune.Score{t.result.Before, t.result.After}
	if t.bought != nil {
		columns = append(columns, table.Column{Name: "bought"}, table.Column{Name: "rounded"})
		scores = append(scores, t.bought.Score, t.bought.Rounded)
	}
	if t.centred != nil {
		columns = append(columns, table.Column{Name: "centred"})
		scores = append(scores, t.centred.Score)
	}
	columns[0].Left = true
	tab := table.New(columns...)
	row := func(name string, cell func(s tune.Score) string) {
		cells := []string{name}
		for _, s := range scores {
			cells = append(cells, cell(s))
		}
		tab.Row(cells...)
	}
	row("objective, dB²", func(s tune.Score) string { return objectiveText(s.Objective) })
	if t.design.Tone != nil {
		row("output, dB rms", func(s tune.Score) string { return fixed(s.WayRMSDB, 3) })
		row("its level, dB", func(s tune.Score) string { return fixed(s.LevelDB, 2) })
	} else {
		row("sum, dB rms", func(s tune.Score) string { return fixed(s.SumRMSDB, 3) })
		row("ways, dB rms", func(s tune.Score) string { return fixed(s.WayRMSDB, 3) })
		row("phase, ° rms", func(s tune.Score) string { return fixed(s.PhaseRMSDeg, 1) })
	}
	row("lowest |Z|, Ω", func(s tune.Score) string { return fixed(s.MinImpedance, 2) })
	row("there, Hz", func(s tune.Score) string { return figures(s.MinImpedanceAt, 4) })
	return tab.Text(pageWidth)
}

// objectiveText writes an objective; what is left of one by rounding is nothing.
func objectiveText(f float64) string {
	if f < 1e-9 {
		return "0"
	}
	return figures(f, 4)
}

// partsText is the table of values.
func (t *tuning) partsText() string {
	columns := []table.Column{{Name: "part", Left: true}, {Name: "before"}, {Name: "tuned"}}
	if t.bought != nil {
		columns = append(columns, table.Column{Name: "bought"}, table.Column{Name: "off", Unit: "%"}, table.Column{Name: "dcr", Unit: "Ω"})
	}
	if t.centred != nil {
		columns = append(columns, table.Column{Name: "centred"})
	}
	tab := table.New(columns...)
	for v, q := range t.vars {
		unit := q.Kind.Unit()
		name := strings.Join(append([]string{q.Part}, q.Followers...), ", ")
		if q.Control != "" {
			tab.Row(q.Control, fixed(q.Value, 3), fixed(t.result.Values[v], 3))
			continue
		}
		cells := []string{name, quantity.Round(t.design.Part(q.Part).Value, unit, 4), quantity.Round(t.result.Values[v], unit, 4)}
		if t.bought != nil {
			dcr := ""
			if t.bought.Ohms[v] > 0 {
				dcr = figures(t.bought.Ohms[v], 3)
			}
			cells = append(cells, choiceText(&t.bought.Choices[v], unit), fixed(100*(t.bought.Values[v]/t.result.Values[v]-1), 1), dcr)
		}
		if t.centred != nil {
			cells = append(cells, quantity.Round(t.centred.Values[v], unit, 4))
		}
		tab.Row(cells...)
	}
	return tab.Text(pageWidth)
}

// choiceText says what a part is bought as: "10 µF | 4.7 µF" for two side by side.
func choiceText(c *tune.Choice, unit quantity.Unit) string {
	var values []string
	for _, it := range c.Items {
		values = append(values, quantity.Round(it.Value, unit, 4))
	}
	sign := " + "
	if c.Parallel {
		sign = " | "
	}
	return strings.Join(values, sign)
}

func (t *tuning) bindingText(b tune.Binding) string {
	if b.Part == "" {
		return fmt.Sprintf("the least impedance, %s, at %s", quantity.Format(b.Limit, quantity.Ohm), hertz(b.At))
	}
	which := "least"
	if b.Upper {
		which = "greatest"
	}
	if t.design.Control(b.Part) != nil {
		return fmt.Sprintf("%s is turned as far as it goes, %s", b.Part, fixed(b.Limit, 3))
	}
	unit := t.design.Part(b.Part).Kind.Unit()
	return fmt.Sprintf("%s is at its %s value, %s", b.Part, which, quantity.Format(b.Limit, unit))
}

// boughtText says how good the set is, and what to buy.
func (t *tuning) boughtText() string {
	b := t.bought
	text := fmt.Sprintf("the set's error is %s against %s of the ideal values", decibels(rms(b.Score.Objective)), decibels(rms(t.result.After.Objective)))
	if gain := improvement(b.Rounded.Objective, b.Score.Objective); gain > 0.5 {
		text += fmt.Sprintf("; its objective is %s %% below that of the nearest values", figures(gain, 3))
	}
	switch {
	case b.Unmet:
		text += "; of the sets that were tried it comes nearest to the limit"
	case b.Proved:
		text += "; no other set is better, as far as re-tuning tells"
	case b.Status == tune.Interrupted:
		text += "; the search was interrupted, so that a better one may exist"
	default:
		text += fmt.Sprintf("; the search stopped after %d places, so that a better one may exist", b.Nodes)
	}
	out := folded("bought    ", text)
	type line struct {
		item  preferred.Item
		count int
		parts []string
	}
	var lines []*line
	for v, c := range b.Choices {
		names := append([]string{c.Part}, t.vars[v].Followers...)
		for _, it := range c.Items {
			var found *line
			for _, l := range lines {
				if l.item == it {
					found = l
				}
			}
			if found == nil {
				found = &line{item: it}
				lines = append(lines, found)
			}
			found.count += c.Parts
			found.parts = append(found.parts, names...)
		}
	}
	if slices.ContainsFunc(lines, func(l *line) bool { return l.item.Price >= 0 || l.item.Count >= 0 || l.item.Name != "" }) {
		for _, l := range lines {
			name := l.item.Name
			if name != "" {
				name += ", "
			}
			unit := t.design.Part(l.parts[0]).Kind.Unit()
			price := ""
			if l.item.Price >= 0 {
				price = fmt.Sprintf(", %s each", fixed(l.item.Price, 2))
			}
			out += folded("          ", fmt.Sprintf("%d × %s%s%s for %s", l.count, name, quantity.Round(l.item.Value, unit, 4), price, strings.Join(l.parts, ", ")))
		}
	}
	if b.Price > 0 {
		out += fmt.Sprintf("          in all %s, as far as prices are stated\n", fixed(b.Price, 2))
	}
	return out
}

// explainText says what changed and what it did.
func (t *tuning) explainText() string {
	var b strings.Builder
	for _, c := range t.explain.Scaled {
		b.WriteString(folded("together  ", fmt.Sprintf("the parts of %s became those for about %s times the impedance, so that what one of them does by itself says little", c.Way, figures(c.Factor, 2))))
	}
	for _, c := range t.explain.Changes {
		written := func(v float64) string { return quantity.Round(v, t.design.Part(c.Part).Kind.Unit(), 3) }
		if t.design.Control(c.Part) != nil {
			written = func(v float64) string { return fixed(v, 3) }
		}
		raises, by := "raises", c.DB
		if by < 0 {
			raises, by = "lowers", -by
		}
		text := fmt.Sprintf("from %s to %s", written(c.Before), written(c.After))
		if c.Way != "" {
			text += fmt.Sprintf(" %s %s by %s from %s to %s", raises, c.Way, decibels(by), roughly(c.From), roughly(c.To))
		}
		switch {
		case c.Costs > 0.005*t.result.Before.Objective:
			text += fmt.Sprintf("; undone alone, the error would be %s", decibels(rms(c.Costs+t.chosenScore().Objective)))
		default:
			text += "; undone alone, it would hardly matter"
		}
		b.WriteString(folded(fmt.Sprintf("%-10s", c.Part), text))
	}
	for _, o := range t.explain.Octaves {
		if math.Abs(o.Before-o.After) < 0.1 {
			continue
		}
		what := o.Way
		if what == "" {
			what = "the sum"
		}
		better := "nearer"
		if o.After > o.Before {
			better = "farther off"
		}
		fmt.Fprintf(&b, "%s from %s to %s: off by %s before, %s now, %s\n", what, roughly(o.From), roughly(o.To), decibels(o.Before), decibels(o.After), better)
	}
	return b.String()
}

func (t *tuning) chosenScore() tune.Score {
	switch {
	case t.bought != nil:
		return t.bought.Score
	case t.centred != nil:
		return t.centred.Score
	}
	return t.result.After
}
