package xover

import (
	"fmt"
	"strconv"
	"strings"
	"unicode"

	"sixdown/xover/quantity"
)

// passes and shapeNames are what builders call the two kinds of target and the alignments, in lower case.
var (
	passes = []slip{
		{"low-pass lowpass lp lpf low", "low-pass"},
		{"high-pass highpass hp hpf high", "high-pass"},
	}
	shapeNames = []slip{
		{"linkwitz-riley linkwitz linkwitzriley lr l-r", "linkwitz-riley"},
		{"butterworth butter bw b", "butterworth"},
		{"bessel bes be", "bessel"},
	}
)

// targetMend returns the target that a text most likely means, "low-pass linkwitz-riley 4 at 2.2 kHz" for "LP LR4
// 2200 Hz" or "lowpass LR24 @ 2.2k", and "" where any of its pieces is not certain. A slope in dB an octave is six times
// the order.
func targetMend(text string) string {
	words := targetWords(text)
	next := func(names []slip) (found string) {
		if len(words) > 0 {
			if found = meant(names, words[0]); found != "" {
				words = words[1:]
			}
		}
		return found
	}
	skip := func(fillers ...string) {
		for len(words) > 0 && strings.Contains(" "+strings.Join(fillers, " ")+" ", " "+words[0]+" ") {
			words = words[1:]
		}
	}
	pass := next(passes)
	skip("pass")
	shape := next(shapeNames)
	skip("riley", "-")
	if pass == "" || shape == "" || len(words) < 2 {
		return ""
	}
	order, err := strconv.Atoi(words[0])
	if order > 8 || strings.HasPrefix(words[1], "db") {
		if order%6 != 0 {
			return ""
		}
		order /= 6
	}
	words = words[1:]
	if err != nil || order < 1 || order > 8 || shape == "linkwitz-riley" && order%2 != 0 {
		return ""
	}
	skip("db", "db/oct", "db/octave", "order", "st", "nd", "rd", "th", "at", "@", "fc")
	frequency, err := targetFrequency(strings.Join(words, ""))
	if err != nil || !(frequency >= 10 && frequency <= 100e3) { // "2.2" has lost its k
		return ""
	}
	return fmt.Sprintf("%s %s %d at %s", pass, shape, order, quantity.Format(frequency, quantity.Hertz))
}

// targetWords cuts a text at blanks and between letters and digits, "lr4" into "lr" and "4", in lower case.
func targetWords(text string) []string {
	var b strings.Builder
	var last rune
	for _, c := range strings.ToLower(text) {
		if c == '@' || unicode.IsLetter(last) && unicode.IsDigit(c) || unicode.IsDigit(last) && unicode.IsLetter(c) {
			b.WriteByte(' ')
		}
		b.WriteRune(c)
		last = c
	}
	return strings.Fields(strings.ReplaceAll(b.String(), "@", "@ "))
}

// targetFrequency reads a frequency in lower case and without blanks, in Hz; of a bare number or one with a k, too.
func targetFrequency(text string) (float64, error) {
	number := strings.TrimSuffix(text, "hz")
	if kilo, ok := strings.CutSuffix(number, "k"); ok {
		return quantity.ParseAs(kilo+" kHz", quantity.Hertz)
	}
	return quantity.ParseAs(number+" Hz", quantity.Hertz)
}
