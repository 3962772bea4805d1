package quantity

import (
	"fmt"
	"strconv"
	"strings"
	"unicode/utf8"
)

// ParsePart reads the value of the part called name. It reads what Parse reads, and for a name that begins
// with R or P (resistors, potentiometers) or C (capacitors) also the codes of IEC 60062:2016, in which a
// letter stands where the decimal point would:
//
//	R and P: R (×1), K (×10³), M (×10⁶), G (×10⁹), L (×10⁻³): "R47" is 0.47 Ω, "4K7" is 4.7 kΩ, "1L5" is 1.5 mΩ
//	C:       p, n, µ, m, F: "4n7" is 4.7 nF, "10m" is 10 mF, "1F" is 1 F
//
// The ASCII u for µ and the small k for K are common usage and are read too. The standard does not cover
// inductors, and makers print R there for the point of microhenries, so a code on an inductor is refused.
// The tolerance letter that may follow a code is refused as well, with its meaning, since nothing would
// carry it on. A bare number is refused. The error is always an *Error.
func ParsePart(name, text string) (float64, Unit, error) {
	trimmed := strings.TrimSpace(text)
	c, isCode := cutCode(trimmed)
	if !isCode || len(text) > maxText {
		return parseWithUnit(name, text)
	}
	multipliers, unit := resistorLetters, Ohm
	switch firstLetter(name) {
	case "R", "P":
	case "C":
		multipliers, unit = capacitorLetters, Farad
	default:
		if v, unit, err := parseWithUnit(name, text); err == nil {
			return v, unit, nil
		}
		if firstLetter(name) == "L" {
			return 0, None, &Error{fmt.Sprintf("%s is a code of resistors and capacitors, and %s is an inductor", quote(text), name),
				`write the unit, such as "0.33 mH": makers print R there for the point of ohms as well as of microhenries`}
		}
		return 0, None, &Error{fmt.Sprintf("%s is a code, and %s does not begin with R, P or C", quote(text), name),
			`write the unit, such as "4.7 kohm" or "4.7 uF"`}
	}
	exponent, ok := multipliers[c.letter]
	if !ok {
		if v, unit, err := parseWithUnit(name, text); err == nil {
			return v, unit, nil
		}
		mend := `resistors take R, K, M, G or L for the point, such as "4K7"`
		if unit == Farad {
			mend = `capacitors take p, n, u or µ, m or F for the point, such as "4u7"`
		}
		return 0, None, &Error{fmt.Sprintf("%s is not a code for %s", quote(text), unit.Noun()), mend}
	}
	if c.tolerance == "F" && unit == Farad {
		return 0, None, &Error{quote(text) + " ends in F, which could be farad or the tolerance letter for 1 %",
			fmt.Sprintf("write %q, and the tolerance as tol", strings.TrimSuffix(trimmed, "F"))}
	}
	if c.tolerance != "" {
		if meaning, known := toleranceLetters[c.tolerance]; known {
			return 0, None, &Error{fmt.Sprintf("%s ends in the tolerance letter %s, %s", quote(text), c.tolerance, meaning),
				fmt.Sprintf("write value = %q and tol = %q", strings.TrimSuffix(trimmed, c.tolerance), meaning)}
		}
		return 0, None, &Error{fmt.Sprintf("%s has %s behind the code", quote(text), quote(c.tolerance)),
			fmt.Sprintf("write %q, and the tolerance as tol", strings.TrimSuffix(trimmed, c.tolerance))}
	}
	v, err := scaled(c.whole+"."+c.fraction, exponent)
	if err != nil {
		return 0, None, &Error{quote(text) + " is out of the range of numbers", "check the letter"}
	}
	return v, unit, nil
}

// parseWithUnit reads a text as Parse does and refuses a bare number.
func parseWithUnit(name, text string) (float64, Unit, error) {
	v, unit, err := Parse(text)
	if err == nil && unit == None {
		return 0, None, &Error{quote(text) + " has no unit", "write " + examplesFor(name)}
	}
	return v, unit, err
}

// resistorLetters are the multipliers of IEC 60062 for resistors, as powers of ten; k is common usage.
var resistorLetters = map[string]int{"L": -3, "R": 0, "K": 3, "k": 3, "M": 6, "G": 9}

// capacitorLetters are those for capacitors; u is common usage.
var capacitorLetters = map[string]int{"p": -12, "n": -9, "u": -6, "\u00b5": -6, "\u03bc": -6, "m": -3, "F": 0}

// toleranceLetters are the symmetrical tolerances of IEC 60062 that are one letter.
var toleranceLetters = map[string]string{
	"B": "0.1 %", "C": "0.25 %", "D": "0.5 %", "F": "1 %", "G": "2 %", "J": "5 %", "K": "10 %", "M": "20 %", "N": "30 %",
}

// A code is a text with the shape of IEC 60062: digits around one letter, and a letter behind them.
type code struct {
	whole, letter, fraction string
	tolerance               string
}

// cutCode splits a text of that shape; ok is false for any other text. "4K7J" has a tolerance, "470K" has
// none: the first letter is always the multiplier.
func cutCode(text string) (c code, ok bool) {
	c.whole, text = cutDigits(text)
	c.letter, text = cutRune(text)
	c.fraction, text = cutDigits(text)
	if c.whole+c.fraction == "" || !isLetter(c.letter) {
		return code{}, false
	}
	if c.tolerance, text = cutRune(text); c.tolerance != "" && !isLetter(c.tolerance) {
		return code{}, false
	}
	// "10mH" and "5mm" have a unit and no code: two letters with no digit between them could be either,
	// so only a tolerance letter makes it one.
	if c.tolerance != "" && c.fraction == "" {
		if _, _, isUnit := lookUp(c.letter + c.tolerance); isUnit {
			return code{}, false
		}
	}
	return c, text == ""
}

func cutDigits(text string) (digits, rest string) {
	end := 0
	for end < len(text) && isDigit(text[end]) {
		end++
	}
	return text[:end], text[end:]
}

func cutRune(text string) (first, rest string) {
	_, size := utf8.DecodeRuneInString(text)
	return text[:size], text[size:]
}

func isLetter(s string) bool {
	return len(s) == 1 && (s >= "a" && s <= "z" || s >= "A" && s <= "Z") || s == "\u00b5" || s == "\u03bc"
}

func firstLetter(name string) string {
	first, _ := cutRune(name)
	return strings.ToUpper(first)
}

// examplesFor returns right texts for a part of that name.
func examplesFor(name string) string {
	switch firstLetter(name) {
	case "R", "P":
		return strconv.Quote("4.7 kohm") + " or " + strconv.Quote("4K7")
	case "C":
		return strconv.Quote("4.7 uF") + " or " + strconv.Quote("4u7")
	case "L":
		return strconv.Quote("0.33 mH")
	}
	return `a value with its unit, such as "4.7 uF"`
}
