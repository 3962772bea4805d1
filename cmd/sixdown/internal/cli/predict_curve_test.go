package cli

import (
	"bytes"
	"math"
	"strings"
	"testing"
	"unicode/utf8"
)

// dots returns where braille has set a dot: column and row, the topmost row 0.
func dots(t *testing.T, drawn string, left int) map[[2]int]bool {
	t.Helper()
	set := map[[2]int]bool{}
	for row, line := range strings.Split(drawn, "\n")[:curveRows] {
		for column, r := range []rune(line)[left:] {
			if r == ' ' {
				continue
			}
			if r < 0x2800 || r > 0x28ff {
				t.Fatalf("%q is no Braille pattern", r)
			}
			// Unicode, chapter 21.1: dots 1 to 3 run down the left, 4 to 6 the right, 7 and 8 are the feet.
			for dot, at := range [8][2]int{{0, 0}, {0, 1}, {0, 2}, {1, 0}, {1, 1}, {1, 2}, {0, 3}, {1, 3}} {
				if r>>dot&1 == 1 {
					set[[2]int{2*column + at[0], 4*row + at[1]}] = true
				}
			}
		}
	}
	return set
}

func TestBraille(t *testing.T) {
	none := func(int) string { return "" }
	band := gridOptions{from: 20, to: 20e3}
	// A line that falls from top to foot by a row a column sets one dot in each.
	levels := make([]float64, 4*curveRows)
	for i := range levels {
		levels[i] = -float64(i) - 0.5
	}
	set := dots(t, braille(levels, 0, 4*curveRows, none, band, false), curveLeft)
	for i := range levels {
		if !set[[2]int{i, i}] {
			t.Errorf("dot %d, %d is not set", i, i)
		}
	}
	if len(set) != len(levels) {
		t.Errorf("%d dots are set, want %d", len(set), len(levels))
	}
	// A jump is drawn as an upright line, and what is above or below is left out.
	set = dots(t, braille([]float64{-0.5, -31.5, math.Inf(-1), 5, math.NaN(), -0.5}, 0, 4*curveRows, none, band, false), curveLeft)
	for row := range 4 * curveRows {
		if !set[[2]int{0, row}] && !set[[2]int{1, row}] {
			t.Errorf("the jump has a gap in row %d", row)
		}
	}
	if !set[[2]int{5, 0}] {
		t.Error("after a gap there is nothing")
	}
}

// TestCurveOfAPrediction: a flat pair at 88 dB under a top of 90 dB is one straight line, two fortieths down.
func TestCurveOfAPrediction(t *testing.T) {
	o := predictOptions{design: designOptions{path: writeFile(t, "pair.toml", lr4Pair())}}
	s := &streams{out: &bytes.Buffer{}, err: &bytes.Buffer{}}
	d, sys, err := o.design.loadSystem(s)
	if err != nil {
		t.Fatal(err)
	}
	p, err := predictAt(s, d, sys, []float64{1000})
	if err != nil {
		t.Fatal(err)
	}
	for _, width := range []int{curveLeast, 60, 200} {
		drawn, err := p.curve(width, false)
		if err != nil {
			t.Fatal(err)
		}
		lines := strings.Split(strings.TrimPrefix(drawn, "\n"), "\n")
		for _, l := range lines {
			if n := utf8.RuneCountInString(l); n > width {
				t.Errorf("a line is %d wide on a terminal of %d", n, width)
			}
		}
		set := dots(t, strings.TrimPrefix(drawn, "\n"), curveLeft)
		want := 2 * (min(width, curveWide) - curveLeft)
		for at := range set {
			if at[1] != 1 {
				t.Errorf("a dot is in row %d", at[1])
			}
		}
		if len(set) != want {
			t.Errorf("%d dots on a terminal of %d, want %d", len(set), width, want)
		}
		if !strings.HasPrefix(lines[0], " 90 dB │") || !strings.HasPrefix(lines[2], "    80 │") {
			t.Errorf("the levels are %q and %q", lines[0], lines[2])
		}
		if !strings.Contains(lines[curveRows+1], "20Hz ") || !strings.Contains(lines[curveRows+1], " 1kHz ") {
			t.Errorf("the frequencies are %q", lines[curveRows+1])
		}
		if strings.Contains(drawn, "\x1b") {
			t.Error("it has escapes that were not asked for")
		}
	}
	if drawn, err := p.curve(curveLeast-1, false); drawn != "" || err != nil {
		t.Errorf("on a narrow terminal it draws %q, %v", drawn, err)
	}
	if drawn, err := p.curve(80, true); !strings.Contains(drawn, "\x1b[2m") || err != nil {
		t.Error("the axes are not faint")
	}
}

// TestNoCurveInAPipe: what is no terminal gets the text alone.
func TestNoCurveInAPipe(t *testing.T) {
	stdout, _, code := run("", "predict", writeFile(t, "pair.toml", lr4Pair()), "--at", "1kHz")
	if code != exitDone || strings.ContainsAny(stdout, "│⠉⣀") {
		t.Errorf("exit code %d, %s", code, stdout)
	}
}
