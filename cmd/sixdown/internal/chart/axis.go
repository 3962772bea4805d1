package chart

import (
	"math"
	"strconv"
	"strings"
)

// An axis maps values to a length and says where its lines are.
type axis struct {
	lo, hi float64
	log    bool
	ticks  []tick
	minor  []float64 // lines without a number
}

// A tick is a line with a number.
type tick struct {
	at   float64
	text string
}

// part returns where v lies, 0 at lo and 1 at hi.
func (a *axis) part(v float64) float64 {
	if a.log {
		return math.Log(v/a.lo) / math.Log(a.hi/a.lo)
	}
	return (v - a.lo) / (a.hi - a.lo)
}

// frequencyAxis goes from lo to hi in Hz: a line for each step of one figure, a number at 1, 2 and 5 of each decade
// (the preferred frequencies of ISO 266, one in three), and the unit at the first and the last.
func frequencyAxis(lo, hi float64) axis {
	a := logAxis(lo, hi, true, func(v float64) string {
		if v >= 1000 {
			return number(v/1000, 3) + "k"
		}
		return number(v, 3)
	})
	if n := len(a.ticks); n > 0 {
		a.ticks[0].text, a.ticks[n-1].text = hertz(a.ticks[0].at), hertz(a.ticks[n-1].at)
	}
	return a
}

// logAxis has a line at each step of one figure and a number at 1, 2 and 5 of each decade; over more than two and a half
// decades at 1 alone, unless roomy.
func logAxis(lo, hi float64, roomy bool, write func(float64) string) axis {
	a := axis{lo: lo, hi: hi, log: true}
	const slack = 1e-9 // an end that is a line is on it
	sparse := hi > 300*lo && !roomy
	for decade := math.Floor(math.Log10(lo)); decade <= math.Ceil(math.Log10(hi)); decade++ {
		for step := 1; step < 10; step++ {
			v, err := strconv.ParseFloat(strconv.Itoa(step)+"e"+strconv.Itoa(int(decade)), 64)
			switch {
			case err != nil || v < lo*(1-slack) || v > hi*(1+slack):
			case step == 1 || !sparse && (step == 2 || step == 5):
				a.ticks = append(a.ticks, tick{v, write(v)})
			default:
				a.minor = append(a.minor, v)
			}
		}
	}
	return a
}

// linearAxis goes from lo to hi, widened to whole steps if snap, with about n numbered lines, the topmost with the
// unit.
func linearAxis(lo, hi float64, n int, unit string, snap bool) axis {
	step := niceStep((hi - lo) / float64(n))
	if snap {
		lo, hi = math.Floor(lo/step+1e-9)*step, math.Ceil(hi/step-1e-9)*step
	}
	a := axis{lo: lo, hi: hi}
	for k := math.Ceil(lo/step - 1e-9); k*step <= hi+1e-9*step; k++ {
		a.ticks = append(a.ticks, tick{k * step, number(k*step, 6)})
	}
	if len(a.ticks) > 0 {
		a.ticks[len(a.ticks)-1].text += unit
	}
	return a
}

// niceStep returns the least of 1, 2 and 5 times a power of ten that is at least step.
func niceStep(step float64) float64 {
	decade := math.Pow(10, math.Floor(math.Log10(step)))
	for _, m := range []float64{1, 2, 5} {
		if m*decade >= step*(1-1e-9) {
			return m * decade
		}
	}
	return 10 * decade
}

// number writes v with n significant figures at most and no power of ten, with a true minus sign.
func number(v float64, n int) string {
	rounded, err := strconv.ParseFloat(strconv.FormatFloat(v, 'e', n-1, 64), 64)
	if err != nil {
		return "–"
	}
	return minus(strconv.FormatFloat(rounded+0, 'f', -1, 64))
}

// decimals writes v with n decimals, with a true minus sign, and none before a zero.
func decimals(v float64, n int) string {
	s := strconv.FormatFloat(v, 'f', n, 64)
	if strings.Trim(s, "-0.") == "" {
		s = strings.TrimPrefix(s, "-")
	}
	return minus(s)
}

func minus(s string) string { return strings.ReplaceAll(s, "-", "−") }

// hertz writes a frequency with three figures and its unit.
func hertz(f float64) string {
	if f >= 999.5 {
		return number(f/1000, 3) + " kHz"
	}
	return number(f, 3) + " Hz"
}
