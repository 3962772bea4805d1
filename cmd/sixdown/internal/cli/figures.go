package cli

import (
	"fmt"
	"math"
	"math/cmplx"
	"strconv"
	"strings"
	"unicode/utf8"
)

// none stands in a table where there is no number.
const none = "none"

// fixed writes v with that many decimals; never a zero with a minus sign.
func fixed(v float64, decimals int) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return none
	}
	text := strconv.FormatFloat(v, 'f', decimals, 64)
	if strings.Trim(text, "-0.") == "" {
		text = strings.TrimPrefix(text, "-")
	}
	return text
}

// figures writes v with that many significant figures and no power of ten; zeros that follow the decimal point
// and end the number are left out.
func figures(v float64, n int) string {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return none
	}
	rounded, _ := strconv.ParseFloat(strconv.FormatFloat(v, 'e', n-1, 64), 64) // its own text always parses
	return strconv.FormatFloat(rounded, 'f', -1, 64)
}

// hertz writes a frequency for a sentence: "2.2 kHz".
func hertz(f float64) string {
	if f >= 1000 {
		return figures(f/1000, 4) + " kHz"
	}
	return figures(f, 4) + " Hz"
}

// ohms writes a resistance or an impedance for a table: two decimals, but no more than four figures of a large one.
func ohms(z float64) string {
	if z >= 100 {
		return figures(z, 4)
	}
	return fixed(z, 2)
}

// degrees writes an angle for a sentence: "-12.3°".
func degrees(d float64) string { return fixed(d, 1) + "°" }

// decibels writes a level for a sentence: "-6.02 dB".
func decibels(l float64) string { return fixed(l, 2) + " dB" }

// signed writes a change in dB with its sign: "+0.12".
func signed(v float64) string {
	if text := fixed(v, 2); strings.HasPrefix(text, "-") || text == none {
		return text
	}
	return fmt.Sprintf("+%s", fixed(v, 2))
}

// hasPhase reports whether z, neither 0 nor infinite, points anywhere.
func hasPhase(z complex128) bool { return z != 0 && !cmplx.IsInf(z) && !cmplx.IsNaN(z) }

// folded writes a text under a label, broken at blanks where a line would be wider than pageWidth, and set in
// under the label from the second line on.
func folded(label, text string) string {
	var b strings.Builder
	indent := strings.Repeat(" ", utf8.RuneCountInString(label))
	b.WriteString(label)
	column := len(indent)
	for i, word := range strings.Fields(text) {
		width := utf8.RuneCountInString(word)
		switch {
		case i == 0:
		case column+1+width > pageWidth:
			b.WriteString("\n" + indent)
			column = len(indent)
		default:
			b.WriteByte(' ')
			column++
		}
		b.WriteString(word)
		column += width
	}
	b.WriteByte('\n')
	return b.String()
}

// counted returns "1 driver is" or "3 drivers are".
func counted(n int, noun string) string {
	if n == 1 {
		return "1 " + noun + " is"
	}
	return fmt.Sprintf("%d %ss are", n, noun)
}
