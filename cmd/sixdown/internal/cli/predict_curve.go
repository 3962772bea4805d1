package cli

import (
	"fmt"
	"io"
	"math"
	"os"
	"strings"
	"unicode/utf8"

	"golang.org/x/term"

	"sixdown/sim"
)

// isTerminal reports whether what is written to w is seen on a terminal, and how many characters wide that is.
func isTerminal(w io.Writer) (width int, ok bool) {
	if a, is := w.(*answerWriter); is {
		w = a.w
	}
	f, is := w.(interface{ Fd() uintptr })
	if !is || !term.IsTerminal(int(f.Fd())) {
		return 0, false
	}
	width, _, err := term.GetSize(int(f.Fd()))
	return width, err == nil
}

// The size of a curve among text: each character is two dots wide and four high.
const (
	curveRows  = 8
	curveWide  = 76 // characters, the levels at the left included
	curveLeast = 30 // characters, below which there is none
	curveRange = 40 // dB from top to bottom
	curveLeft  = 8  // characters for the levels
)

// curve draws the sum, or a tone network's gain, over 20 Hz to 20 kHz in Braille patterns, for a terminal of that
// many characters: "" where there is nothing to draw or no room. With faint, the axes are set in faint.
func (p *prediction) curve(width int, faint bool) (string, error) {
	columns := min(width, curveWide) - curveLeft
	if columns < curveLeast-curveLeft || p.Sum == nil && p.summary.Tone == nil {
		return "", nil
	}
	band := gridOptions{from: 20, to: 20e3}
	freqs := make([]float64, 2*columns)
	for i := range freqs {
		freqs[i] = band.from * math.Pow(band.to/band.from, float64(i)/float64(len(freqs)-1))
	}
	r, err := p.system.Predict(freqs)
	if err != nil {
		return "", err
	}
	levels := sim.DBs(r.Ways[0].H)
	if r.Sum != nil {
		levels = sim.SPLs(r.Sum)
	}
	top := math.Inf(-1)
	for _, l := range levels {
		top = max(top, l)
	}
	if math.IsInf(top, 0) || math.IsNaN(top) {
		return "", nil
	}
	top = 10 * math.Ceil((top+1)/10)
	return "\n" + braille(levels, top, curveRange, func(row int) string {
		if row%2 != 0 {
			return ""
		}
		text := fixed(top-float64(row)*curveRange/curveRows, 0)
		if row == 0 {
			text += " dB"
		}
		return text
	}, band, faint), nil
}

// braille draws levels, two to a character, over span dB from top down. A dot is set for each level, and for those
// between it and the last, so that steep pieces hang together.
func braille(levels []float64, top, span float64, label func(row int) string, band gridOptions, faint bool) string {
	const dots = 4 * curveRows
	cells := make([][curveRows]rune, len(levels)/2)
	last := -1
	for i, l := range levels {
		y := int(math.Floor((top - l) / span * dots))
		if l < top-span || math.IsNaN(l) {
			y = dots // below the frame
		}
		from, to := y, y
		if last >= 0 && last < y-1 {
			from = last + 1
		} else if last > y+1 {
			to = last - 1
		}
		last = y
		for v := max(from, 0); v <= min(to, dots-1); v++ {
			// Dots 1 2 3 7 are the left column from the top, 4 5 6 8 the right one (Unicode 2800 to 28FF).
			cells[i/2][v/4] |= 1 << [2][4]int{{0, 1, 2, 6}, {3, 4, 5, 7}}[i%2][v%4]
		}
	}
	dim := func(s string) string {
		if faint {
			return "\x1b[2m" + s + "\x1b[0m"
		}
		return s
	}
	var b strings.Builder
	for row := range curveRows {
		b.WriteString(dim(fmt.Sprintf("%*s │", curveLeft-2, label(row))))
		var text strings.Builder
		for _, c := range cells {
			if c[row] == 0 {
				text.WriteByte(' ')
			} else {
				text.WriteRune(0x2800 + c[row])
			}
		}
		b.WriteString(strings.TrimRight(text.String(), " ") + "\n")
	}
	axis := []rune(strings.Repeat(" ", curveLeft-2) + " └" + strings.Repeat("─", len(cells)))
	names := []rune(strings.Repeat(" ", len(axis)+6))
	for _, f := range []float64{20, 100, 1000, 10e3, 20e3} {
		at := curveLeft + int(math.Round(math.Log(f/band.from)/math.Log(band.to/band.from)*float64(len(cells)-1)))
		axis[at] = '┴'
		text := strings.ReplaceAll(hertz(f), " ", "")
		from := max(at-utf8.RuneCountInString(text)/2, curveLeft-2)
		if from > curveLeft && names[from-1] != ' ' {
			continue // no room between two
		}
		copy(names[from:], []rune(text))
	}
	b.WriteString(dim(string(axis)+"\n"+strings.TrimRight(string(names), " ")) + "\n")
	return b.String()
}

// colourful reports whether the user's terminal may be given other than plain text (https://no-color.org).
func colourful() bool { return os.Getenv("NO_COLOR") == "" && os.Getenv("TERM") != "dumb" }
