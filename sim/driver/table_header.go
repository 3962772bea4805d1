package driver

import (
	"fmt"
	"regexp"
	"strings"
	"unicode"
)

// A columnKind is what a column holds by its name.
type columnKind int

const (
	unknownColumn columnKind = iota
	frequencyColumn
	valueColumn // a magnitude or a level
	phaseColumn
	otherColumn // what is never read
)

// A columnName is the name of a column as the header of a file gives it.
type columnName struct {
	text string // "SPL (dB)"
	line int
	kind columnKind
	unit string // "" if none is known, else one of the units below
}

// columnWords are words, or their beginnings where a star ends them, that tell what a column holds: common practice, no
// source. In a name, the first that is found counts.
var columnWords = []struct {
	kind  columnKind
	words string
}{
	{otherColumn, "real imag imaginary coh* noise thd* snr distortion delay gd index no nr row sample time"},
	{phaseColumn, "phas* fase* winkel* ang* deg degree* degré* grad arg rad radian*"},
	{frequencyColumn, "freq* frek* frec* fréq* hertz hz khz mhz f"},
	{valueColumn, "ohm* kohm* mohm* kω ω z imp* spl db* level* mag* amp* pegel betrag modulus"},
	{otherColumn, "min max"}, // of several sweeps; "min. phase" is a phase
}

// columnUnits are the units that a name may give, and what they are units of.
var columnUnits = []struct{ unit, words string }{
	{"kHz", "khz"}, {"MHz", "mhz"}, {"Hz", "hz"}, {"rad", "rad radian*"}, {"deg", "deg degree* grad"},
	{"kohm", "kohm* kω"}, {"ohm", "ohm* ω"}, {"dB", "db*"},
}

// hasWord reports whether a word is one of words, parted by spaces; a star stands for any end.
func hasWord(words, word string) bool {
	for _, w := range strings.Fields(words) {
		stem, open := strings.CutSuffix(w, "*")
		if word == stem || open && strings.HasPrefix(word, stem) {
			return true
		}
	}
	return false
}

// nameOf tells what a name says.
func nameOf(text string, line int) columnName {
	c := columnName{text: strings.TrimSpace(text), line: line}
	words := strings.FieldsFunc(strings.ToLower(text), func(r rune) bool { return !unicode.IsLetter(r) })
	if len(words) > 0 && hasWord("re im", words[0]) { // Re(Z), but not dB re 20 µPa
		c.kind = otherColumn
	}
	for _, k := range columnWords {
		for _, w := range words {
			if c.kind == unknownColumn && hasWord(k.words, w) {
				c.kind = k.kind
			}
		}
	}
	for _, u := range columnUnits {
		for _, w := range words {
			if c.unit == "" && hasWord(u.words, w) {
				c.unit = u.unit
			}
		}
	}
	if strings.Trim(text, " ()[]") == "°" {
		c.kind, c.unit = phaseColumn, "deg"
	}
	return c
}

var (
	spacesBeforeBracket = regexp.MustCompile(`\s+([(\[])`)
	wideSpaces          = regexp.MustCompile(`\s{2,}|\t`)
)

// columnNames returns the names of n columns that a line of words gives; nil if it is something else. No name may begin
// with a digit, and two must be known, that of the frequency among them: a title has as many words now and then.
func columnNames(line string, no, n int) []columnName {
	text := strings.TrimLeft(line, "*#;!%/ \t")
	text = spacesBeforeBracket.ReplaceAllString(text, "$1") // Freq (Hz)
	splits := [][]string{strings.Split(text, "\t"), strings.Split(text, ";"), strings.Split(text, ","), wideSpaces.Split(text, -1), strings.Fields(text)}
	if outside, ok := outsideQuotes(text); ok && outside != text {
		splits = [][]string{splitOutsideQuotes(text, func(r rune) bool {
			return strings.ContainsRune(",;", r) || unicode.IsSpace(r) && !strings.ContainsAny(outside, ",;")
		})}
	}
	for _, split := range splits {
		if n < 2 || len(split) != n {
			continue
		}
		names := make([]columnName, n)
		known, ofFrequency, numbers := 0, false, false
		for i, s := range split {
			names[i] = nameOf(s, no)
			numbers = numbers || strings.IndexAny(names[i].text, "0123456789") == 0
			ofFrequency = ofFrequency || names[i].kind == frequencyColumn
			if names[i].kind != unknownColumn {
				known++
			}
		}
		if known >= 2 && ofFrequency && !numbers {
			return names
		}
	}
	return nil
}

// checkHeader refuses a table whose header names the columns in another order than they are read, or with other units.
func (p *tableParser) checkHeader() error {
	for i, c := range p.names {
		if i == 3 {
			break
		}
		want := [...]columnKind{frequencyColumn, valueColumn, phaseColumn}[i]
		mend := ""
		switch {
		case c.kind != unknownColumn && c.kind != want:
			mend = "put the columns in the order frequency in Hz, value, phase in degrees, and no other before them"
		case i == 0 && (c.unit == "kHz" || c.unit == "MHz"):
			mend = "give Hz"
		case i == 1 && c.unit == "kohm":
			mend = "give ohm"
		case i == 2 && c.unit == "rad":
			mend = "give degrees"
		default:
			continue
		}
		return columnError(p.name, i, c, mend)
	}
	return nil
}

func columnError(file string, i int, c columnName, mend string) error {
	return &TableError{File: file, Line: c.line, What: fmt.Sprintf("the header has %s for column %d", quote(c.text), i+1), Mend: mend}
}

// checkUnit refuses a table whose header gives the unit of another quantity for the values.
func (t *Table) checkUnit(other, mend string) error {
	if len(t.names) > 1 && t.names[1].unit == other {
		return columnError(t.Name, 1, t.names[1], mend)
	}
	return nil
}
