package driver

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"
)

// MaxTableBytes is the size of the largest table that ReadTable takes. A 1/96-octave table is some 30 kB.
const MaxTableBytes = 16 << 20

// closest is the least relative distance of two frequencies that count as different.
const closest = 1e-6

// A Row is one line of a table.
type Row struct {
	Frequency float64 // Hz, > 0
	Value     float64 // the second column: Ω, or dB
	PhaseDeg  float64 // the third column; 0 if there is none
	Line      int     // of the file, from 1
}

// A Table is a measurement as it stands in a file, in rising order of frequency.
type Table struct {
	Name     string   // of the file, for messages
	Rows     []Row    // one or more
	HasPhase bool     // every row has a third column
	Notes    []string // what was passed over, in sentences that name the file and line
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
// Columns are parted by spaces, tabs, commas or semicolons; what follows the third is not looked at. Lines that
// begin with a letter or with one of * # ; " ' ! % / [ are comments, as is any line without numbers before the
// first row. Line ends may be LF, CR LF or CR; a byte-order mark is passed over. Numbers have a decimal point:
// a decimal comma is refused, since 20,5 might as well be two columns. Rows are put in rising order; a row that
// repeats a frequency, and one at 0 Hz, is passed over with a note.
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
	name    string
	line    int
	rows    []Row
	phases  int // rows that have a third column
	columns int // of the first row
	bare    int // line of the first row that has none
	dcRow   int // line of the first row at 0 Hz
}

func (p *tableParser) errorf(mend, format string, args ...any) error {
	return &TableError{File: p.name, Line: p.line, What: fmt.Sprintf(format, args...), Mend: mend}
}

// file reads all lines.
func (p *tableParser) file(src []byte) error {
	if len(src) > MaxTableBytes {
		return p.errorf("give a table of measured rows, which is far smaller", "the file is larger than %d MiB", MaxTableBytes>>20)
	}
	if bytes.HasPrefix(src, []byte{0xFF, 0xFE}) || bytes.HasPrefix(src, []byte{0xFE, 0xFF}) || bytes.IndexByte(src, 0) >= 0 {
		return p.errorf("save it as plain text (UTF-8 or ASCII)", "the file is not plain text")
	}
	src = bytes.TrimPrefix(src, []byte("\uFEFF"))
	for len(src) > 0 {
		p.line++
		text := src
		if i := bytes.IndexAny(src, "\r\n"); i < 0 {
			src = nil
		} else {
			text = src[:i]
			if src[i] == '\r' && i+1 < len(src) && src[i+1] == '\n' {
				i++
			}
			src = src[i+1:]
		}
		if err := p.row(string(bytes.TrimSpace(text))); err != nil {
			return err
		}
	}
	return nil
}

// isComment reports whether a line, trimmed and not empty, holds words rather than numbers.
func isComment(line string) bool {
	if strings.ContainsRune("*#;\"'!%/[", rune(line[0])) {
		return true
	}
	first, _ := utf8.DecodeRuneInString(line)
	if !unicode.IsLetter(first) {
		return false
	}
	// "NaN" and "Inf" begin with a letter but are a row, and a bad one.
	field, _, _ := strings.Cut(strings.Map(separatorToSpace, line), " ")
	_, err := strconv.ParseFloat(field, 64)
	return err != nil
}

func separatorToSpace(r rune) rune {
	if r == ',' || r == ';' || r == '\t' {
		return ' '
	}
	return r
}

// row reads one line.
func (p *tableParser) row(line string) error {
	if line == "" || isComment(line) {
		return nil
	}
	fields, err := p.split(line)
	if err != nil {
		return err
	}
	var v [3]float64
	n := min(len(fields), len(v))
	for i, field := range fields[:n] {
		v[i], err = number(field)
		if err != nil {
			if len(p.rows) == 0 && p.dcRow == 0 {
				return nil // a title that begins with a digit, such as "2 way box"
			}
			return p.errorf("give a number such as 6.25", "column %d is %s, which is no number", i+1, quote(field))
		}
		if math.IsNaN(v[i]) || math.IsInf(v[i], 0) {
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

// split parts a line into fields, and refuses those in which a comma may be a decimal comma or may part
// thousands.
func (p *tableParser) split(line string) ([]string, error) {
	fields := strings.FieldsFunc(line, func(r rune) bool {
		return r == ',' || r == ';' || unicode.IsSpace(r)
	})
	commas := strings.Count(line, ",")
	if commas == 0 {
		return fields, nil
	}
	refused := p.errorf("write numbers with a decimal point and no thousands comma, 1020.5", "a comma stands inside a number, or looks as if it did")
	inside := false // a comma between two digits, which columns may have too
	for i := 1; i+1 < len(line); i++ {
		inside = inside || line[i] == ',' && isDigit(line[i-1]) && isDigit(line[i+1])
	}
	points := strings.Contains(line, ".")
	switch others := strings.ContainsFunc(line, func(r rune) bool { return r == ';' || unicode.IsSpace(r) }); {
	case inside && others && (!points || commas != len(fields)-1):
		// "20,5 6,1 -3", "20,5;6,1;-3", "1,020 6.1 -3"; but "20,6.1, -3" is columns.
		return nil, refused
	case !others && !points && len(fields) >= 4 && len(fields)%2 == 0:
		// "20,5,6,1,-3,2": six columns, or three.
		return nil, refused
	case p.columns != 0 && len(fields) != p.columns:
		// "1,020, 6.1, -3" after "980, 6.1, -3".
		return nil, refused
	}
	return fields, nil
}

func isDigit(b byte) bool { return b >= '0' && b <= '9' }

var errNotANumber = errors.New("not a number")

// number reads a decimal number. It does not take the hexadecimal numbers and the underscores of Go.
func number(field string) (float64, error) {
	if strings.ContainsAny(field, "xXpP_") {
		return 0, errNotANumber
	}
	v, err := strconv.ParseFloat(field, 64)
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

// table sorts the rows and drops those that repeat a frequency.
func (p *tableParser) table() (*Table, error) {
	if len(p.rows) == 0 {
		p.line = 0
		return nil, p.errorf("give rows of a frequency in Hz, a value and a phase in degrees", "there are no rows of numbers in the file")
	}
	t := &Table{Name: p.name, HasPhase: p.bare == 0}
	if p.phases > 0 && p.bare > 0 {
		p.line = p.bare
		return nil, p.errorf("give a phase in every row or in none", "the row has no phase, and others have one")
	}
	if p.dcRow > 0 {
		t.Notes = append(t.Notes, fmt.Sprintf("%s:%d: the row at 0 Hz was passed over", p.name, p.dcRow))
	}
	rising(p.rows)
	t.Rows = p.rows[:1]
	repeats, first := 0, 0
	for _, r := range p.rows[1:] {
		if last := t.Rows[len(t.Rows)-1]; r.Frequency-last.Frequency <= closest*last.Frequency {
			if repeats == 0 {
				first = r.Line
			}
			repeats++
			continue
		}
		t.Rows = append(t.Rows, r)
	}
	if repeats > 0 {
		t.Notes = append(t.Notes, fmt.Sprintf("%s:%d: %d row(s) repeat a frequency and were passed over", p.name, first, repeats))
	}
	return t, nil
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

// doubts returns a note about rows between which the phase turns too far to be followed.
func (t *Table) doubts(rows []int) []string {
	if len(rows) == 0 {
		return nil
	}
	r := t.Rows[rows[0]]
	return []string{fmt.Sprintf("%s:%d: the phase turns by more than 135 degrees from one row to the next near %s Hz, so which way it went is a guess; take the flight time out, or measure in finer steps", t.Name, r.Line, hertz(r.Frequency))}
}

// hertz writes a frequency in Hz for a message, to about four figures and without an exponent.
func hertz(f float64) string {
	if f >= 1000 {
		return strconv.FormatFloat(f, 'f', 0, 64)
	}
	return strconv.FormatFloat(f, 'g', 4, 64)
}
