package xover

import (
	"fmt"
	"slices"
	"strings"
	"unicode"
	"unicode/utf8"
)

// An Error is one fault of a design file.
type Error struct {
	File string   // as given to Parse; "": none
	Pos  Position // where; the zero Position: the file as a whole
	What string   // what is wrong
	Mend string   // what would be right
}

// Error returns "harbour.toml:12:9: what; mend".
func (e *Error) Error() string { return sentence(e.File, e.Pos, e.What, e.Mend) }

// A Warning is something in a design file that is likely a slip and does no harm by itself.
type Warning struct {
	File string
	Pos  Position
	What string
	Mend string
}

// String returns "harbour.toml:12:9: what; mend".
func (w Warning) String() string { return sentence(w.File, w.Pos, w.What, w.Mend) }

func sentence(file string, pos Position, what, mend string) string {
	where := ""
	if file != "" {
		where = file + ":"
	}
	if pos != (Position{}) {
		where += fmt.Sprintf("%d:%d:", pos.Line, pos.Column)
	}
	if where != "" {
		where += " "
	}
	return where + what + "; " + mend
}

// Errors are the faults of a file in the order of their positions; there is at least one.
type Errors []*Error

// Error returns one line for each fault.
func (e Errors) Error() string {
	lines := make([]string, len(e))
	for i, err := range e {
		lines[i] = err.Error()
	}
	return strings.Join(lines, "\n")
}

// Unwrap returns the faults one by one, for errors.As.
func (e Errors) Unwrap() []error {
	all := make([]error, len(e))
	for i, err := range e {
		all[i] = err
	}
	return all
}

// diagnostics gathers what is found in one file.
type diagnostics struct {
	file     string
	errors   Errors
	warnings []Warning
}

// fail records an error. Those past MaxErrors are dropped.
func (d *diagnostics) fail(pos Position, what, mend string) {
	if !d.full() {
		d.errors = append(d.errors, &Error{d.file, pos, oneLine(what), oneLine(mend)})
	}
}

// warn records a warning. Those past MaxErrors are dropped.
func (d *diagnostics) warn(pos Position, what, mend string) {
	if len(d.warnings) < MaxErrors {
		d.warnings = append(d.warnings, Warning{d.file, pos, oneLine(what), oneLine(mend)})
	}
}

// oneLine replaces control characters, which a quoted key may bring into a message: they would break its line
// or reach the terminal.
func oneLine(text string) string {
	return strings.Map(func(c rune) rune {
		if unicode.IsControl(c) {
			return utf8.RuneError
		}
		return c
	}, text)
}

// full tells that no more errors are taken, so that looking for more is in vain.
func (d *diagnostics) full() bool { return len(d.errors) >= MaxErrors }

// sorted puts all in the order of their positions; what stands at one position keeps its order.
func (d *diagnostics) sorted() {
	slices.SortStableFunc(d.errors, func(a, b *Error) int { return comparePositions(a.Pos, b.Pos) })
	slices.SortStableFunc(d.warnings, func(a, b Warning) int { return comparePositions(a.Pos, b.Pos) })
}

func comparePositions(a, b Position) int {
	if a.Line != b.Line {
		return a.Line - b.Line
	}
	return a.Column - b.Column
}
