package cli

import (
	"fmt"
	"strings"

	"sixdown/cmd/sixdown/internal/table"
	"sixdown/xover/ladder"
	"sixdown/xover/preferred"
	"sixdown/xover/quantity"
)

// text returns the answer for people.
func (s *sizing) text() string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s\n\n", s.title)
	for _, w := range s.sections {
		fmt.Fprintf(&b, "%-5s into %s: %s\n", w.name, quantity.Round(w.load, quantity.Ohm, 3), strings.Join(w.steps, ", "))
	}
	fmt.Fprintf(&b, "\n%s\n", s.table().Text(pageWidth))
	fmt.Fprintf(&b, "* the nearer. at fc: change of the way's level where it crosses; worst: its largest change within\n  two octaves of there; both if this part alone is changed.\n\n")
	b.WriteString(s.facts())
	return b.String()
}

func (s *sizing) table() *table.Table {
	below, above := s.series.String()+" below", s.series.String()+" above"
	columns := []table.Column{{Name: "way", Left: true}, {Name: "part", Left: true}, {Name: "value"}}
	for _, group := range []string{below, above} {
		columns = append(columns,
			table.Column{Group: group, Name: "value"},
			table.Column{Group: group, Name: "off", Unit: "%"},
			table.Column{Group: group, Name: "at fc", Unit: "dB"},
			table.Column{Group: group, Name: "worst", Unit: "dB"})
	}
	t := table.New(columns...)
	for i, w := range s.sections {
		name := w.name
		for _, ch := range s.ways[i].choices {
			row := []string{name, ch.part.Name, partValue(ch.part.Kind, ch.part.Value, 4)}
			name = ""
			for _, o := range []option{ch.below, ch.above} {
				mark := " "
				if o.value == ch.nearest {
					mark = "*"
				}
				row = append(row, preferredValue(ch.part.Kind, o.value, s.series)+mark, signed(100*o.off), signed(o.CrossingDB), signed(o.WorstDB))
			}
			t.Row(row...)
		}
	}
	return t
}

// facts says how the ways add up, a line each.
func (s *sizing) facts() string {
	var b strings.Builder
	for i, w := range s.sections[1:] {
		low, high := s.ways[i], s.ways[i+1]
		fmt.Fprintf(&b, "crossover  %s: %s at %s, %s at %s\n", hertz(w.crossings[0]), s.sections[i].name, decibels(low.levelDB[len(low.levelDB)-1]), w.name, decibels(high.levelDB[0]))
	}
	if len(s.sections) == 3 && s.midReversed == nil {
		b.WriteString("           the mid is off: its two sections are each sized as if alone, and load one another\n")
	}
	fmt.Fprintf(&b, "polarity   %s: %s\n", s.polarities(), s.sum)
	if x := s.midExcessDB; x > 0 {
		fmt.Fprintf(&b, "           when the mid is brought down by %s: with a pad, or a less sensitive driver\n", decibels(x))
	} else if x < 0 {
		fmt.Fprintf(&b, "           when low and high are brought down by %s: with pads, or less sensitive drivers\n", decibels(-x))
	}
	fmt.Fprintf(&b, "rounded    every part at its nearest %s value:\n", s.series)
	for i, w := range s.sections {
		e := s.ways[i].together
		fmt.Fprintf(&b, "           %s %s dB at the crossover, at worst %s dB at %s\n", w.name, signed(e.CrossingDB), signed(e.WorstDB), hertz(e.WorstHz))
	}
	fmt.Fprintf(&b, "           %s\n", s.roundSum)
	b.WriteString("\nThis is for resistances and drivers that are equally sensitive, at one place. Predict shows real ones.\n")
	return b.String()
}

// polarities says which ways are to be reversed.
func (s *sizing) polarities() string {
	var names []string
	for i, r := range s.sum.Reversed {
		if r {
			names = append(names, s.sections[i].name)
		}
	}
	if len(names) == 0 {
		return "all ways normal"
	}
	return strings.Join(names, " and ") + " reversed"
}

// partValue writes a part's value for people.
func partValue(k ladder.Kind, v float64, digits int) string {
	return quantity.Round(v, partUnit(k), digits)
}

// preferredValue writes a value of a series for people, with the digits that the series has.
func preferredValue(k ladder.Kind, v float64, s preferred.Series) string {
	digits := 2
	if s > preferred.E24 {
		digits = 3
	}
	return partValue(k, v, digits)
}

// String says between which levels the sum lies.
func (s sumShape) String() string {
	low, high := signed(s.LowestDB), signed(s.HighestDB)
	if low == "+0.00" && high == low {
		return "the sum is flat"
	}
	return fmt.Sprintf("the sum lies from %s to %s dB", low, high)
}
