package driver

import (
	"strings"
	"unicode"
)

// What the commas of a table are can be told from its rows together and not from one of them: "20,5" is one number, or
// two. They part columns where they stand alone between numbers or before a space; they are decimal commas where
// semicolons, tabs or spaces part the columns and no row has a decimal point. What may as well be the one as the
// other, or may part thousands, is refused: a level read from the wrong column looks like any other.

// A commaUse gathers what the commas of a file show.
type commaUse struct {
	point   int // line of the first row with a decimal point; 0: none, and so for all lines here
	part    int // of the first row in which commas part columns
	decimal int // of the first row with decimal commas

	many        int  // of the first row whose commas part four columns or more, without a space
	mixed       int  // of the first row in which some commas have a space after them and others do not
	columns     int  // of the first row in which commas part columns
	notThousand bool // a decimal comma cannot part thousands, as in 6,25
	bareSecond  bool // the second column of some row has no decimal comma
}

// isGrouped reports whether the comma of a number may part thousands, as in 1,020.
func isGrouped(number string) bool {
	i := strings.IndexByte(number, ',')
	return i > 0 && len(number) == i+4 && groups(strings.TrimLeft(number, "+-"))
}

// beginsGrouped reports whether the first comma of a row surely parts thousands: nobody writes 20 as 020.
func beginsGrouped(row string) bool {
	i := strings.IndexByte(row, ',')
	return i > 0 && len(row) >= i+4 && row[i+1] == '0' && (len(row) == i+4 || row[i+4] == ',') && groups(row)
}

// groups reports whether text begins with one to three digits, a comma and three digits.
func groups(text string) bool {
	i := strings.IndexByte(text, ',')
	if i < 1 || i > 3 || len(text) < i+4 || text[0] == '0' {
		return false
	}
	for k := range i + 4 {
		if k != i && (text[k] < '0' || text[k] > '9') {
			return false
		}
	}
	return true
}

// findCommas looks at all rows and settles whether commas are decimal commas.
func (p *tableParser) findCommas(text string) error {
	var use commaUse
	for no, line := range lines(text) {
		if !isAllNumbers(line) {
			continue
		}
		p.line = no
		if use.point == 0 && strings.Contains(line, ".") {
			use.point = no
		}
		if !use.row(no, line) {
			return p.refuseComma()
		}
	}
	p.decimalComma = use.decimal > 0
	clash := 0
	switch {
	case use.decimal > 0 && use.point > 0:
		clash = max(use.decimal, use.point)
	case use.decimal > 0 && use.part > 0:
		clash = max(use.decimal, use.part)
	case use.decimal > 0 && !use.notThousand && use.bareSecond:
		clash = use.decimal // "980;6;-3" and "1,020;6;-3"
	case use.point == 0 && use.many > 0:
		clash = use.many // "20,5,6,1,-3,2": six columns, or three
	case use.point == 0 && use.mixed > 0:
		clash = use.mixed // "20,5, 80": three columns, or two
	}
	if clash == 0 {
		return nil
	}
	p.line = clash
	return p.refuseComma()
}

func (p *tableParser) refuseComma() error {
	return p.errorf("write numbers with a decimal point and no thousands comma, 1020.5", "a comma stands inside a number, or looks as if it did")
}

// isAllNumbers reports whether a line holds nothing but numbers and what parts them.
func isAllNumbers(line string) bool {
	digit := false
	for _, r := range line {
		switch {
		case r >= '0' && r <= '9':
			digit = true
		case !strings.ContainsRune("+-.,;eE\u2212", r) && !unicode.IsSpace(r):
			return false
		}
	}
	return digit
}

// row takes a row of numbers in; ok is false if its commas make no sense.
func (u *commaUse) row(no int, line string) (ok bool) {
	first := func(line *int) {
		if *line == 0 {
			*line = no
		}
	}
	semicolons := strings.Contains(line, ";")
	parts := strings.FieldsFunc(line, func(r rune) bool { return r == ';' || unicode.IsSpace(r) })
	if !strings.Contains(line, ",") {
		u.bareSecond = u.bareSecond || len(parts) > 1
		return true
	}
	spaced, tight, grouped := false, false, false // commas with a space before or after them, without, and as in 1,120
	for _, part := range parts {
		inner := strings.Trim(part, ",")
		spaced = spaced || inner != part
		tight = tight || strings.Contains(inner, ",")
		grouped = grouped || isGrouped(inner)
	}
	switch {
	case semicolons && spaced:
		return false
	case semicolons || tight && !spaced && len(parts) > 1:
		first(&u.decimal)
		for i, part := range parts {
			commas := strings.Count(part, ",")
			if commas > 1 || strings.Contains(part, ".") {
				return false
			}
			u.notThousand = u.notThousand || commas == 1 && !isGrouped(part)
			u.bareSecond = u.bareSecond || i == 1 && commas == 0
		}
	default:
		first(&u.part)
		if tight && spaced && len(parts) > 1 {
			first(&u.mixed)
		} else if tight && len(parts) == 1 && strings.Count(strings.TrimRight(line, ","), ",") > 2 {
			first(&u.many)
		}
		columns := strings.Count(strings.TrimRight(line, ","), ",") + 1
		if u.columns == 0 {
			u.columns = columns
		}
		// "1,020, 6.1, -3" after "980, 6.1, -3". Fewer than three columns are missing, and that is said elsewhere.
		odd := columns > u.columns || columns < u.columns && columns > 2
		return !odd && !beginsGrouped(line) && !(spaced && grouped)
	}
	return true
}
