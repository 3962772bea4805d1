package driver

import (
	"errors"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"
)

// MaxTableBytes is the size of the largest table that ReadTable takes. A 1/96-octave table is some 30 kB, one of 65 536
// lines evenly spaced 2 MB.
const MaxTableBytes = 4 << 20

const (
	maxRows   = 100_000
	maxLine   = 4096 // bytes
	closest   = 1e-6 // the least relative distance of two frequencies that count as different
	leastRows = 3
)

// A Row is one line of a table.
type Row struct {
	Frequency float64 // Hz, > 0
	Value     float64 // the second column: Ω, or dB
	PhaseDeg  float64 // the third column; 0 if there is none
	Line      int     // of the file, from 1; of the first, where rows were averaged
}

// A Table is a measurement as it stands in a file, in rising order of frequency.
type Table struct {
	Name     string   // of the file, for messages
	Rows     []Row    // three or more
	HasPhase bool     // every row has a third column
	Notes    []string // what was passed over, in sentences that name the file and line

	names []columnName // as a header above the rows gives them; nil if there is none
}

// A TableError says why a table cannot be read.
type TableError struct {
	File string
	Line int // from 1; 0: the file as a whole
	What string
	Mend string
}

func (e *TableError) Error() string {
	if e.Line == 0 {
		return fmt.Sprintf("%s: %s; %s", e.File, e.What, e.Mend)
	}
	return fmt.Sprintf("%s:%d: %s; %s", e.File, e.Line, e.What, e.Mend)
}

// ReadTable reads a table of two or three columns: frequency in Hz, a value, and the phase in degrees.
//
// The text may be UTF-8, UTF-16 or Latin-1, with a byte-order mark or without, and its lines end in LF, CR LF or CR.
// Columns are parted by semicolons, else by commas, else by spaces and tabs; what follows the third is not looked at.
// Numbers have a decimal point, or a decimal comma in all rows if commas do not part columns; where a comma could be
// either, or part thousands, the table is refused, and so it is for spaces and points that surely do. Numbers may stand
// in quotes. Lines that begin with a letter or with one of * # ; " ' ! % / [, or hold neither letters nor digits, are
// comments, as is any line that is no row of numbers before the first row. The last of them may be a header: one that
// names the columns in another order, or with other units, is refused.
//
// Rows are put in rising order. Those that repeat a frequency are averaged, and a row at 0 Hz is passed over, with a
// note. At least three rows must be left.
//
// The error is a *TableError, or wraps what r returned. name is used in messages only.
func ReadTable(name string, r io.Reader) (*Table, error) {
	src, err := io.ReadAll(io.LimitReader(r, MaxTableBytes+1))
	if err != nil {
		return nil, fmt.Errorf("%s: cannot be read: %w", name, err)
	}
	p := tableParser{name: name}
	if err := p.file(src); err != nil {
		return nil, err
	}
	return p.table()
}

// A tableParser holds what has been read so far.
type tableParser struct {
	name         string
	line         int
	decimalComma bool
	rows         []Row
	phases       int    // rows that have a third column
	columns      int    // of the first row
	spaced       bool   // the columns of this row are parted by spaces
	lastFirst    string // the first field of the last row
	numbers      int    // columns of the first row that are numbers
	bare         int    // line of the first row that has no third one
	dcRow        int    // line of the first row at 0 Hz

	title     error // of the first line before the rows that is a title or a bad row: what is bad about it
	titleLine int
	titleText string

	words     string // the last line of words before the rows, which may be their header
	wordsLine int
	names     []columnName
}

func (p *tableParser) errorf(mend, format string, args ...any) error {
	return &TableError{File: p.name, Line: p.line, What: fmt.Sprintf(format, args...), Mend: mend}
}

// file reads all lines.
func (p *tableParser) file(src []byte) error {
	if len(src) > MaxTableBytes {
		return p.errorf("give a table of measured rows, which is far smaller", "the file is larger than %d MiB", MaxTableBytes>>20)
	}
	text, ok := decode(src)
	if !ok {
		return p.errorf("save it as plain text (UTF-8 or ASCII)", "the file is not plain text")
	}
	if err := p.findCommas(text); err != nil {
		return err
	}
	for no, line := range lines(text) {
		p.line = no
		if len(line) > maxLine {
			return p.errorf("give a table with a row of two or three numbers a line", "the line is longer than %d characters", maxLine)
		}
		if len(p.rows) >= maxRows {
			return p.errorf("thin it out", "the table has more than %d rows", maxRows)
		}
		if !strings.ContainsFunc(line, isLetterOrDigit) {
			continue
		}
		fields := p.split(line)
		if strings.ContainsRune("*#;\"'!%/[", rune(line[0])) || p.isWords(line, fields) {
			if err := p.comment(line); err != nil {
				return err
			}
			continue
		}
		if len(p.rows) == 0 && p.names == nil {
			p.names = columnNames(p.words, p.wordsLine, len(fields))
			if err := p.checkHeader(); err != nil {
				return err
			}
		}
		err := p.row(fields)
		if err != nil && len(p.rows) == 0 && p.dcRow == 0 && !isAllNumbers(line) && !p.areNumbers(fields) {
			// A title that begins with a digit, such as "2 way box"; or else a slip in the first row.
			if p.title == nil {
				p.title, p.titleLine, p.titleText = err, no, line
			}
			continue
		}
		if err != nil {
			return err
		}
	}
	return nil
}

// comment takes a comment in. If it is the header, and stands below rows, those are none of the table's.
func (p *tableParser) comment(line string) error {
	if !strings.ContainsFunc(line, unicode.IsLetter) {
		return nil
	}
	p.words, p.wordsLine = line, p.line
	if len(p.rows) > 0 && p.names == nil && columnNames(line, p.line, p.columns) != nil {
		p.line = p.rows[0].Line
		return p.errorf("put a * before it if it is a remark", "the row stands above the header in line %d", p.wordsLine)
	}
	return nil
}

func isLetterOrDigit(r rune) bool { return unicode.IsLetter(r) || unicode.IsDigit(r) }

// split parts a line into fields.
func (p *tableParser) split(line string) []string {
	var parter string
	p.spaced = false
	switch {
	case strings.Contains(line, ";"):
		parter = ";"
	case strings.Contains(line, ",") && !p.decimalComma:
		parter = ","
	default:
		p.spaced = true
		return strings.Fields(line)
	}
	fields := strings.Split(line, parter)
	for i, f := range fields {
		fields[i] = strings.TrimSpace(f)
	}
	if n := len(fields); fields[n-1] == "" {
		fields = fields[:n-1]
	}
	return fields
}

// isWords reports whether a line is a comment because it begins with a letter. "NaN" and "Inf" do so too, but are
// numbers of a kind; and what has as many columns as the rows before it, all numbers but the first, is a row with a slip,
// such as "l00 8 0".
func (p *tableParser) isWords(line string, fields []string) bool {
	first, _ := utf8.DecodeRuneInString(line)
	if !unicode.IsLetter(first) {
		return false
	}
	if p.areNumbers(fields[:1]) {
		return false
	}
	return len(p.rows) == 0 || len(fields) != p.columns || !p.areNumbers(fields[1:])
}

// areNumbers reports whether all fields are numbers; NaN and Inf are.
func (p *tableParser) areNumbers(fields []string) bool {
	for _, f := range fields {
		if _, err := p.number(f); err != nil {
			return false
		}
	}
	return true
}

// row reads one row.
func (p *tableParser) row(fields []string) error {
	var v [3]float64
	n := min(len(fields), len(v))
	for i, field := range fields[:n] {
		var err error
		v[i], err = p.number(field)
		switch {
		case field == "":
			return p.errorf("give a number such as 6.25", "column %d is empty", i+1)
		case err != nil:
			return p.errorf("give a number such as 6.25", "column %d is %s, which is no number", i+1, quote(field))
		case math.IsNaN(v[i]) || math.IsInf(v[i], 0):
			return p.errorf("leave the row out", "column %d is %s", i+1, quote(field))
		}
	}
	switch {
	case n < 2:
		return p.errorf("give a frequency in Hz, a value and a phase in degrees", "the row has one column only")
	case v[0] == 0:
		if p.dcRow == 0 {
			p.dcRow = p.line
		}
		return nil
	case v[0] < 0 || v[0] > 1e9:
		return p.errorf("give a frequency in Hz", "the frequency is %g Hz", v[0])
	case math.Abs(v[2]) > 1e7:
		return p.errorf("give a phase in degrees", "the phase is %g degrees", v[2])
	}
	if err := p.checkThousands(fields, v[0]); err != nil {
		return err
	}
	if p.columns == 0 {
		p.columns = len(fields)
	}
	if n == 3 {
		p.phases++
	} else if p.bare == 0 {
		p.bare = p.line
	}
	p.rows = append(p.rows, Row{Frequency: v[0], Value: v[1], PhaseDeg: v[2], Line: p.line})
	return nil
}

var errNotANumber = errors.New("not a number")

// number reads a decimal number. It does not take the hexadecimal numbers and the underscores of Go.
func (p *tableParser) number(field string) (float64, error) {
	if strings.ContainsAny(field, "xXpP_") {
		return 0, errNotANumber
	}
	if p.decimalComma {
		field = strings.Replace(field, ",", ".", 1)
	}
	v, err := strconv.ParseFloat(strings.Replace(field, "\u2212", "-", 2), 64) // U+2212 is the typographer's minus sign
	if err != nil && !errors.Is(err, strconv.ErrRange) {
		return 0, errNotANumber
	}
	return v, nil // beyond the range, v is ±Inf, which the caller refuses
}

// quote returns the text as a message shows it: short, and with nothing unprintable.
func quote(text string) string {
	const most = 24
	if r := []rune(text); len(r) > most {
		text = string(r[:most]) + "…"
	}
	return strconv.Quote(text)
}

// table sorts the rows and averages those that repeat a frequency.
func (p *tableParser) table() (*Table, error) {
	switch {
	case len(p.rows) == 0 && p.title != nil:
		return nil, p.title
	case len(p.rows) == 0:
		p.line = 0
		return nil, p.errorf("give rows of a frequency in Hz, a value and a phase in degrees", "there are no rows of numbers in the file")
	case p.phases > 0 && p.bare > 0:
		p.line = p.bare
		return nil, p.errorf("give a phase in every row or in none", "the row has no phase, and others have one")
	}
	t := &Table{Name: p.name, HasPhase: p.bare == 0, names: p.names}
	if p.title != nil {
		t.Notes = append(t.Notes, fmt.Sprintf("%s:%d: %s is no row of numbers and was taken for a title", p.name, p.titleLine, quote(p.titleText)))
	}
	if p.dcRow > 0 {
		t.Notes = append(t.Notes, fmt.Sprintf("%s:%d: the row at 0 Hz was passed over", p.name, p.dcRow))
	}
	last := p.rows[len(p.rows)-1].Line
	back, over, turns := goesBack(p.rows)
	noted := len(t.Notes)
	if err := p.merge(t); err != nil {
		return nil, err
	}
	if turns && len(t.Notes) == noted { // rows that repeat are told of already
		what := "the rows were put in order"
		if over {
			what = "it runs over rows that are there already; all were put in order, as of one measurement; if they are of two, keep one"
		}
		t.Notes = append(t.Notes, fmt.Sprintf("%s:%d: the frequency turns back to %s Hz; %s", p.name, back.Line, hertz(back.Frequency), what))
	}
	if len(t.Rows) < leastRows {
		p.line = last
		return nil, p.errorf("give three or more; ten an octave make a good one", "the table ends after %d row(s) of different frequency", len(t.Rows))
	}
	t.Notes = append(t.Notes, t.gap()...)
	return t, nil
}

// merge puts the rows into t in rising order, one for each frequency. Rows of the same frequency, as programs write that
// round it, are averaged; the phases over the shorter way round, which must be clear.
func (p *tableParser) merge(t *Table) error {
	rising(p.rows)
	repeats, first, most, at := 0, 0, 0.0, 0.0
	for i := 0; i < len(p.rows); {
		r, n := p.rows[i], 1
		same := p.rows[i:]
		for n < len(same) && same[n].Frequency-r.Frequency <= closest*r.Frequency {
			n++
		}
		var value, turned float64 // sums of what the others are away from the first
		for _, o := range same[1:n] {
			d, angle := o.Value-r.Value, math.Remainder(o.PhaseDeg-r.PhaseDeg, 360)
			if math.Abs(angle) > 90 {
				p.line = o.Line
				return p.errorf("leave one of them out", "the phase is %.0f degrees from that of another row at %s Hz", math.Abs(angle), hertz(r.Frequency))
			}
			if repeats++; repeats == 1 {
				first = o.Line
			}
			if math.Abs(d) > most {
				most, at = math.Abs(d), r.Frequency
			}
			value += d
			turned += angle
		}
		r.Value += value / float64(n)
		r.PhaseDeg += turned / float64(n)
		t.Rows = append(t.Rows, r)
		i += n
	}
	switch {
	case repeats > 0 && most > 0:
		t.Notes = append(t.Notes, fmt.Sprintf("%s:%d: %d row(s) repeat a frequency and were averaged; they differ by up to %.3g, at %s Hz", p.name, first, repeats, most, hertz(at)))
	case repeats > 0:
		t.Notes = append(t.Notes, fmt.Sprintf("%s:%d: %d row(s) repeat another and were passed over", p.name, first, repeats))
	}
	return nil
}

// columns returns the frequencies, values and phases of the rows.
func (t *Table) columns() (freqs, values, deg []float64) {
	for _, r := range t.Rows {
		freqs = append(freqs, r.Frequency)
		values = append(values, r.Value)
		deg = append(deg, r.PhaseDeg)
	}
	return freqs, values, deg
}

// hertz writes a frequency in Hz, or another number, for a message, to about four figures and without an exponent.
func hertz(f float64) string {
	if f >= 1000 {
		return strconv.FormatFloat(f, 'f', 0, 64)
	}
	return strconv.FormatFloat(f, 'g', 4, 64)
}
