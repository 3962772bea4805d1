// Package table sets out text in columns for people to read.
package table

import (
	"strings"
	"unicode/utf8"
)

// A Column is a column's heading. Columns of the same Group that stand next to each other share its title and
// are not torn apart.
type Column struct {
	Group string // "": none
	Name  string
	Unit  string // "": none
	Left  bool   // set flush left; numbers stand flush right
}

// A Table is rows of cells under columns. The first column names the rows.
type Table struct {
	columns []Column
	rows    [][]string
	widths  []int // of each column; what Row widens
}

// New makes an empty table with these columns, of which there must be at least one. It keeps the slice.
func New(columns ...Column) *Table {
	t := &Table{columns: columns, widths: make([]int, len(columns))}
	for i, c := range columns {
		t.widths[i] = max(utf8.RuneCountInString(c.Name), utf8.RuneCountInString(c.Unit))
	}
	return t
}

// Row adds a row, a cell for each column. It keeps the slice; a row of another length is a slip of the
// programmer's, and panics.
func (t *Table) Row(cells ...string) {
	if len(cells) != len(t.columns) {
		panic("table: a row has another number of cells than there are columns")
	}
	t.rows = append(t.rows, cells)
	for i, c := range cells {
		t.widths[i] = max(t.widths[i], utf8.RuneCountInString(c))
	}
}

// The gaps between columns and between groups.
const (
	columnGap = 2
	groupGap  = 3
)

// Text returns the table, up to three lines of headings and then its rows, each line ended. Groups that would
// make it wider than width characters follow below, in a block of their own under the first column again. A
// single group wider than that is not broken. No line ends in blanks.
func (t *Table) Text(width int) string {
	var b strings.Builder
	for i, block := range t.blocks(width) {
		if i > 0 {
			b.WriteByte('\n')
		}
		t.writeBlock(&b, block)
	}
	return b.String()
}

// A span is the columns of a group, from up to but not including to.
type span struct{ from, to int }

// spans divides the columns after the first into groups.
func (t *Table) spans() []span {
	var all []span
	for i := 1; i < len(t.columns); i++ {
		if n := len(all); n > 0 && t.columns[i].Group != "" && t.columns[i].Group == t.columns[i-1].Group {
			all[n-1].to = i + 1
			continue
		}
		all = append(all, span{i, i + 1})
	}
	return all
}

// blocks divides the groups into blocks that fit.
func (t *Table) blocks(width int) [][]span {
	blocks := [][]span{nil}
	used := t.columnWidth(0)
	for _, s := range t.spans() {
		last := len(blocks) - 1
		need := groupGap + t.spanWidth(s)
		if len(blocks[last]) > 0 && used+need > width {
			blocks = append(blocks, nil)
			last++
			used = t.columnWidth(0)
		}
		blocks[last] = append(blocks[last], s)
		used += need
	}
	return blocks
}

func (t *Table) columnWidth(i int) int { return t.widths[i] }

// spanWidth is the width of a group: of its columns, or of its title if that is wider.
func (t *Table) spanWidth(s span) int {
	w := -columnGap
	for i := s.from; i < s.to; i++ {
		w += columnGap + t.columnWidth(i)
	}
	return max(w, utf8.RuneCountInString(t.columns[s.from].Group))
}

// writeBlock writes the first column and some groups.
func (t *Table) writeBlock(b *strings.Builder, groups []span) {
	titled, united := false, t.columns[0].Unit != ""
	for _, s := range groups {
		for _, c := range t.columns[s.from:s.to] {
			titled = titled || c.Group != ""
			united = united || c.Unit != ""
		}
	}
	if titled {
		var l line
		l.put(t.columns[0].Group, t.columnWidth(0), false)
		for _, s := range groups {
			l.gap(groupGap)
			l.centre(t.columns[s.from].Group, t.spanWidth(s))
		}
		l.end(b)
	}
	t.writeLine(b, groups, func(i int) string { return t.columns[i].Name })
	if united {
		t.writeLine(b, groups, func(i int) string { return t.columns[i].Unit })
	}
	for _, row := range t.rows {
		t.writeLine(b, groups, func(i int) string { return row[i] })
	}
}

// writeLine writes one line of a block, cell(i) in column i.
func (t *Table) writeLine(b *strings.Builder, groups []span, cell func(i int) string) {
	var l line
	l.put(cell(0), t.columnWidth(0), t.columns[0].Left)
	for _, s := range groups {
		l.gap(groupGap)
		// Where the title is wider than the columns, they stand to its right end.
		columns := -columnGap
		for i := s.from; i < s.to; i++ {
			columns += columnGap + t.columnWidth(i)
		}
		l.gap(t.spanWidth(s) - columns)
		for i := s.from; i < s.to; i++ {
			if i > s.from {
				l.gap(columnGap)
			}
			l.put(cell(i), t.columnWidth(i), t.columns[i].Left)
		}
	}
	l.end(b)
}

// A line is being written. Blanks are held back until something follows them.
type line struct {
	text   strings.Builder
	blanks int
}

func (l *line) gap(n int) { l.blanks += n }

func (l *line) put(cell string, width int, left bool) {
	pad := width - utf8.RuneCountInString(cell)
	if !left {
		l.gap(pad)
		pad = 0
	}
	l.write(cell)
	l.gap(pad)
}

func (l *line) centre(cell string, width int) {
	pad := width - utf8.RuneCountInString(cell)
	l.gap(pad / 2)
	l.write(cell)
	l.gap(pad - pad/2)
}

func (l *line) write(cell string) {
	if cell == "" {
		return
	}
	l.text.WriteString(strings.Repeat(" ", l.blanks))
	l.blanks = 0
	l.text.WriteString(cell)
}

func (l *line) end(b *strings.Builder) {
	b.WriteString(l.text.String())
	b.WriteByte('\n')
}
