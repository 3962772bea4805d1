package driver

import (
	"errors"
	"strconv"
	"strings"
	"unicode"
)

// unquoted returns a row whose numbers stand in quotes, "20.5","6.1","-3", without them. Its columns are then parted by
// semicolons, so that a comma within quotes is seen to stand inside a number. Any other line is returned as it is: above
// all one whose first quotes hold no number, which is a comment.
func unquoted(line string) string {
	if !strings.ContainsAny(line, `"'`) {
		return line
	}
	outside, ok := outsideQuotes(line)
	if !ok {
		// A quote too few, around what may be a row: it must not pass as a comment.
		if first, _, closed := strings.Cut(line[1:], line[:1]); closed && isNumberLike(first) {
			return line[1:]
		}
		return line
	}
	parts := unicode.IsSpace
	for _, parter := range ",;" { // a semicolon before a comma
		if strings.ContainsRune(outside, parter) {
			parts = func(r rune) bool { return r == parter }
		}
	}
	fields := splitOutsideQuotes(line, parts)
	if !isNumberLike(fields[0]) {
		return line
	}
	if strings.ContainsAny(outside, ",;") {
		return strings.Join(fields, ";")
	}
	for _, f := range fields {
		if !isNumberLike(f) { // "8" woofer
			return line
		}
	}
	return strings.Join(fields, ";")
}

// outsideQuotes returns what of a line is not in quotes; ok is false if they are not around whole columns.
func outsideQuotes(line string) (outside string, ok bool) {
	var b strings.Builder
	quote, before := rune(0), ' '
	for _, r := range line {
		isQuote := r == '"' || r == '\''
		switch {
		case quote != 0 && r == quote:
			quote = 0
		case quote != 0:
		case isQuote && (unicode.IsSpace(before) || before == ',' || before == ';'):
			quote = r
		case isQuote:
			return "", false
		default:
			b.WriteRune(r)
		}
		before = r
	}
	return b.String(), quote == 0
}

// splitOutsideQuotes parts a line where parts says so outside quotes, and takes those off. Spaces part as many columns as
// stand between them.
func splitOutsideQuotes(line string, parts func(rune) bool) []string {
	var fields []string
	var field strings.Builder
	quote, quoted := rune(0), false
	end := func() {
		f := strings.TrimSpace(field.String())
		if f != "" || quoted || !parts(' ') {
			fields = append(fields, f)
		}
		field.Reset()
		quoted = false
	}
	for _, r := range line {
		switch {
		case quote == 0 && (r == '"' || r == '\''):
			quote, quoted = r, true
		case quote != 0 && r == quote:
			quote = 0
		case quote == 0 && parts(r):
			end()
		default:
			field.WriteRune(r)
		}
	}
	end()
	return fields
}

// isNumberLike reports whether a field is made of what numbers are made of, or is a word that stands for one, NaN or Inf.
func isNumberLike(field string) bool {
	if isAllNumbers(field) {
		return true
	}
	_, err := strconv.ParseFloat(field, 64)
	return err == nil || errors.Is(err, strconv.ErrRange)
}
