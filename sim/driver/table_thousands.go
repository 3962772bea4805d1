package driver

import (
	"regexp"
	"strconv"
)

// Thousands that commas part are seen by findCommas. What spaces and points part is seen here, from one row to the next.

var (
	wholeHertz    = regexp.MustCompile(`^[1-9]\d{1,2}$`)        // 980, in the row before
	thousandPoint = regexp.MustCompile(`^[1-9]\d{0,2}\.\d{3}$`) // 1.020
	leadingGroup  = regexp.MustCompile(`^[1-9]\d{0,2}$`)        // of 1 020.5
	groupOfZero   = regexp.MustCompile(`^0\d\d([.,]\d*)?$`)     // the rest of it; nobody writes 20.5 as 020.5
)

// checkThousands refuses a row whose frequency, read as hertz, has its thousands parted.
func (p *tableParser) checkThousands(fields []string, hertz float64) error {
	if wholeHertz.MatchString(p.lastFirst) && thousandPoint.MatchString(fields[0]) {
		if last, _ := strconv.ParseFloat(p.lastFirst, 64); hertz < last && last < 1000*hertz {
			return p.errorf("write it without, 1020.5", "a point seems to part thousands in %s, after %s", quote(fields[0]), quote(p.lastFirst))
		}
	}
	p.lastFirst = fields[0]
	numbers := 0
	for numbers < len(fields) && p.areNumbers(fields[numbers:numbers+1]) {
		numbers++
	}
	if len(p.rows) == 0 {
		p.numbers = numbers
	}
	otherNumber := numbers > 2 && p.numbers > 2 && numbers != p.numbers // 1 020.5 after 980.5
	surely := len(fields) > 2 && leadingGroup.MatchString(fields[0]) && groupOfZero.MatchString(fields[1])
	if p.spaced && (otherNumber || surely) {
		return p.errorf("if a space stands inside a number, leave it out, 1020.5", "the row has %d columns, and column 2 is %s; the first row has %d", numbers, quote(fields[1]), p.numbers)
	}
	return nil
}
