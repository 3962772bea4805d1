package quantity

import (
	"errors"
	"fmt"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"
)

// Parse reads a number with its unit, "4.7 uF", "0.33mH", "8 Ω", "250 mm", "12 l" or "5 %", and returns the
// value in the unit's SI form (a percentage as a fraction). A bare number has the unit None.
// The number has a decimal point, may have a sign and a power of ten ("1e-6 F"), and must be finite.
// The error, always an *Error, says what to write instead.
func Parse(text string) (float64, Unit, error) {
	return parse(text, `write a number with its unit, such as "4.7 uF"`, `use ohm, H, F, Hz, m, m2, m3, l, s, V, W, dB, %, m/s or kg/m3, with a prefix where it fits, such as "4.7 uF"`, None)
}

// parse does the work of Parse; its errors say form to mend a text that is no number, and units to mend one
// whose unit is not known. want is the unit that is asked for, None for any.
func parse(text, form, units string, want Unit) (float64, Unit, error) {
	trimmed := strings.TrimSpace(text)
	switch {
	case trimmed == "":
		return 0, None, &Error{"the text is empty", form}
	case len(text) > maxText:
		return 0, None, &Error{fmt.Sprintf("the text is %d bytes long", len(text)), form}
	case !utf8.ValidString(text):
		return 0, None, &Error{"the text is not UTF-8", form}
	}
	number, rest := cutNumber(trimmed)
	if number == "" {
		return 0, None, &Error{quote(text) + " does not begin with a number", form}
	}
	if strings.HasPrefix(rest, ",") {
		return 0, None, &Error{quote(text) + " has a comma in the number",
			fmt.Sprintf("write a decimal point (%q) and nothing between the thousands", strings.Replace(trimmed, ",", ".", 1))}
	}
	spelling := strings.TrimLeftFunc(rest, unicode.IsSpace)
	unit, exponent, ok := None, 0, true
	if spelling != "" {
		unit, exponent, ok = lookUp(spelling)
	}
	if !ok {
		if example := prefixAlone(number, spelling, want); example != "" {
			return 0, None, &Error{fmt.Sprintf("%s has the prefix %s and no unit", quote(text), spelling),
				fmt.Sprintf("write the unit too, such as %q", example)}
		}
		mend := units
		if near := nearestSpelling(spelling); near != "" {
			mend = fmt.Sprintf("write %q", number+" "+near)
		}
		return 0, None, &Error{fmt.Sprintf("%s has no unit that is known: %s", quote(text), quote(spelling)), mend}
	}
	v, err := scaled(number, exponent)
	if err != nil {
		return 0, None, &Error{quote(text) + " is out of the range of numbers", "check the power of ten and the prefix"}
	}
	return v, unit, nil
}

// ParseAs reads a text as Parse does and insists on a unit: "8 ohm" for Ohm. For None it takes a bare number.
// The error says what was found, and gives an example of what would be right.
func ParseAs(text string, want Unit) (float64, error) {
	mend := fmt.Sprintf("write %s such as %q", want.Noun(), want.Example())
	v, unit, err := parse(text, mend, mend, want)
	if err != nil {
		return 0, err
	}
	if unit == want {
		return v, nil
	}
	switch {
	case unit == None && (want == Decibel || want == Percent): // which have no prefix to choose
		return 0, &Error{quote(text) + " has no unit", fmt.Sprintf("write %q", strings.TrimSpace(text)+" "+want.Example()[strings.Index(want.Example(), " ")+1:])}
	case unit == None:
		return 0, &Error{quote(text) + " has no unit", mend}
	case want == None:
		return 0, &Error{fmt.Sprintf("%s is %s", quote(text), unit.Noun()), mend}
	}
	return 0, &Error{fmt.Sprintf("%s is %s, not %s", quote(text), unit.Noun(), want.Noun()), mend}
}

// prefixAlone returns an example of what number and spelling may have meant, if spelling is nothing but a
// prefix that the unit which is asked for takes, or without one, that parts have, "4.7k" or "10u"; else "".
func prefixAlone(number, spelling string, want Unit) string {
	if want != None {
		for _, s := range symbols {
			if s.unit == want && utf8.RuneCountInString(spelling) == 1 && strings.Contains(s.prefixes, spelling) {
				return number + " " + spelling + s.text
			}
		}
		return ""
	}
	switch spelling {
	case "k", "K", "M", "G":
		return number + " " + spelling + "ohm"
	case "p", "n", "u", "\u00b5", "\u03bc":
		return number + " " + spelling + "F"
	}
	return ""
}

// cutNumber splits text behind the number with which it begins: a sign, digits with at most one point among
// them, and a power of ten if one follows. number is in the form that strconv reads; it is "" if there is
// no digit.
func cutNumber(text string) (number, rest string) {
	sign := ""
	for _, s := range []string{"+", "-", "\u2212"} { // the last is the minus sign that documents print
		if after, found := strings.CutPrefix(text, s); found {
			text, sign = after, strings.Replace(s, "\u2212", "-", 1)
			break
		}
	}
	end, digits, points := 0, 0, 0
	for ; end < len(text); end++ {
		switch c := text[end]; {
		case isDigit(c):
			digits++
			continue
		case c == '.' && points == 0:
			points++
			continue
		}
		break
	}
	if digits == 0 {
		return "", text
	}
	return sign + text[:end] + text[end:end+powerLength(text[end:])], text[end+powerLength(text[end:]):]
}

// powerLength returns how many bytes of text are a power of ten, "e-6".
func powerLength(text string) int {
	if text == "" || (text[0] != 'e' && text[0] != 'E') {
		return 0
	}
	i := 1
	if i < len(text) && (text[i] == '+' || text[i] == '-') {
		i++
	}
	first := i
	for i < len(text) && isDigit(text[i]) {
		i++
	}
	if i == first {
		return 0
	}
	return i
}

func isDigit(c byte) bool { return c >= '0' && c <= '9' }

// errRange says that a number is no finite float64, or is so small that it would become zero.
var errRange = errors.New("out of range")

// scaled returns number × 10^exponent, rounded once: the powers of ten are added in the text.
func scaled(number string, exponent int) (float64, error) {
	mantissa := number
	if at := strings.IndexAny(number, "eE"); at >= 0 {
		power, err := strconv.Atoi(number[at+1:])
		if err != nil || power > 1000 || power < -1000 {
			return 0, errRange
		}
		mantissa, exponent = number[:at], exponent+power
	}
	v, err := strconv.ParseFloat(mantissa+"e"+strconv.Itoa(exponent), 64)
	if err != nil || (v == 0 && strings.ContainsAny(mantissa, "123456789")) {
		return 0, errRange
	}
	return v, nil
}
