package chart

import (
	"math"
	"slices"
	"strings"
	"testing"
)

// drawn returns what is written in a panel drawn alone, and its marks.
func drawn(t *testing.T, p Panel) (texts []string, marks []mark) {
	t.Helper()
	s := emptyScene(t)
	p.draw(s, rect{10, 10, 700, p.height()})
	for _, m := range s.marks {
		if w, ok := m.(text); ok {
			texts = append(texts, w.text)
		}
	}
	return texts, s.marks
}

// flatMap is as loud at all angles as it is ahead, but for one angle on one frequency.
func flatMap(title string, loudest float64) *PolarMap {
	m := &PolarMap{Title: title, Freqs: []float64{1000, 2000}, AngleDeg: []float64{-90, 0, 90}, LevelDB: [][]float64{{0, 0}, {0, 0}, {0, 0}}}
	m.LevelDB[2][1] = loudest
	return m
}

// TestPolarScale: the topmost colour, 3 dB wide, is that of the loudest level, and 0 dB at the least; the key writes 0 dB.
func TestPolarScale(t *testing.T) {
	for _, c := range []struct {
		loudest, top float64
		key          []string // its numbers from the top, where 0 dB has one and every other colour
	}{
		{-3, 0, []string{"0 dB", "−6", "−12", "−18", "−24", "−30"}},
		{1.4, 0, []string{"0 dB", "−6", "−12", "−18", "−24", "−30"}},
		{1.6, 3, []string{"0 dB", "−6", "−12", "−18", "−24"}},
		{9.5, 9, []string{"6 dB", "0", "−6", "−12", "−18"}},
		{11.8, 12, []string{"12 dB", "6", "0", "−6", "−12", "−18"}},
		{math.Inf(1), 0, []string{"0 dB", "−6", "−12", "−18", "−24", "−30"}}, // re silence: there is no scale
	} {
		panels, err := Polar(flatMap("Horizontal", -1), flatMap("Vertical", c.loudest))
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range panels { // both are on one scale
			if p.(*polarPanel).level(heatSteps-1) != c.top {
				t.Errorf("%g dB: the topmost colour is %g dB, want %g", c.loudest, p.(*polarPanel).level(heatSteps-1), c.top)
			}
			texts, _ := drawn(t, p)
			slices.Reverse(c.key)
			for i, want := range c.key {
				if got := texts[len(texts)-1-i]; got != want {
					t.Errorf("%g dB: the key has %q, want %q", c.loudest, got, want)
				}
			}
			slices.Reverse(c.key)
		}
	}
}

// TestPolarCurvesAreWhole: the rim is at a ring, 5 dB at the least, above the loudest of all curves, so that none is cut.
func TestPolarCurvesAreWhole(t *testing.T) {
	for _, c := range []struct{ loudest, rim float64 }{{-6, 5}, {5, 5}, {5.1, 10}, {9.5, 10}, {11.8, 15}, {41, 45}} {
		panels, err := PolarCurves(flatMap("Horizontal", -1), flatMap("Vertical", c.loudest))
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range panels {
			if rim := p.(*polarCurves).rim; rim != c.rim {
				t.Errorf("%g dB: the rim is %g dB, want %g", c.loudest, rim, c.rim)
			}
		}
		// The loudest is at 90°, level with the middle, which is at 0°'s x: as far out as its level says.
		_, marks := drawn(t, panels[1])
		var curves []line
		for _, m := range marks {
			if l, ok := m.(line); ok && l.pen.width == wayWidth && len(l.points) == 3 {
				curves = append(curves, l)
			}
		}
		if len(curves) != 2 {
			t.Fatalf("%d curves are drawn, want 2", len(curves))
		}
		radius := 212 - 42 - (headingSpace + 16.0) // the panel's height less what is above and below the dial
		far := curves[1].points[2].x - curves[1].points[1].x
		if want := radius * (c.loudest - c.rim + 30) / 30; math.Abs(far-want) > 1e-9 {
			t.Errorf("%g dB: the curve goes %g out, want %g", c.loudest, far, want)
		}
	}
}

// TestPolarMapRefusals: maps that are no grid.
func TestPolarMapRefusals(t *testing.T) {
	for name, m := range map[string]*PolarMap{
		"nothing":           {},
		"a row is missing":  {Freqs: []float64{1, 2}, AngleDeg: []float64{0, 10}, LevelDB: [][]float64{{0, 0}}},
		"a row is short":    {Freqs: []float64{1, 2}, AngleDeg: []float64{0, 10}, LevelDB: [][]float64{{0, 0}, {0}}},
		"angles fall":       {Freqs: []float64{1, 2}, AngleDeg: []float64{10, 0}, LevelDB: [][]float64{{0, 0}, {0, 0}}},
		"frequency of zero": {Freqs: []float64{0, 2}, AngleDeg: []float64{0, 10}, LevelDB: [][]float64{{0, 0}, {0, 0}}},
	} {
		if _, err := Polar(m); err == nil {
			t.Errorf("%s: a map is drawn", name)
		}
		if _, err := PolarCurves(m); err == nil {
			t.Errorf("%s: curves are drawn", name)
		}
	}
	one := &PolarMap{Title: "One", Freqs: []float64{1}, AngleDeg: []float64{0, 10}, LevelDB: [][]float64{{0}, {0}}}
	if _, err := Polar(one); err == nil || !strings.Contains(err.Error(), "2 or more frequencies") {
		t.Errorf("a map of one frequency is drawn, or %v", err)
	}
	if _, err := PolarCurves(one); err != nil {
		t.Errorf("one curve is not drawn: %v", err)
	}
}
