package chart

import (
	"math"
	"testing"
)

// luminance is the relative luminance Y of a colour on an sRGB screen (IEC 61966-2-1).
func luminance(c rgb) float64 {
	lin := func(v uint8) float64 {
		x := float64(v) / 255
		if x <= 0.04045 {
			return x / 12.92
		}
		return math.Pow((x+0.055)/1.055, 2.4)
	}
	return 0.2126*lin(c.R) + 0.7152*lin(c.G) + 0.0722*lin(c.B)
}

// TestHeatIsEven: the lightness L* of CIE 1976 rises from colour to colour in steps that are alike, so the map can be
// read in grey too. Oklab's lightness is not L*; between 20 and 95 the two agree to about a third of a step.
func TestHeatIsEven(t *testing.T) {
	lightness := func(i int) float64 {
		y := luminance(heat(i))
		return 116*math.Cbrt(y) - 16 // y > 0.009 here
	}
	mean := (lightness(heatSteps-1) - lightness(0)) / (heatSteps - 1)
	if mean < 6 {
		t.Errorf("a step is %.1f of 100 only", mean)
	}
	for i := 1; i < heatSteps; i++ {
		if step := lightness(i) - lightness(i-1); math.Abs(step-mean) > mean/2 {
			t.Errorf("from colour %d to the next L* rises by %.1f; the mean is %.1f", i-1, step, mean)
		}
	}
}

// TestOklab: the colours' coordinates of the space's definition: white is (1, 0, 0), and red is (0.628, 0.225,
// 0.126), B. Ottosson, as cited at heat.
func TestOklab(t *testing.T) {
	for _, c := range []struct {
		l, a, b float64
		want    rgb
	}{
		{1, 0, 0, opaque(255, 255, 255)},
		{0, 0, 0, opaque(0, 0, 0)},
		{0.62796, 0.22486, 0.12585, opaque(255, 0, 0)},
	} {
		got := oklab(c.l, c.a, c.b)
		for _, d := range []int{int(got.R) - int(c.want.R), int(got.G) - int(c.want.G), int(got.B) - int(c.want.B)} {
			if d < -2 || d > 2 { // five figures leave that much where a channel is at its end
				t.Errorf("Oklab(%g, %g, %g) is %v, want %v", c.l, c.a, c.b, got, c.want)
			}
		}
	}
}

// TestContrast: the contrast ratio of WCAG 2.1: 4.5 for text (1.4.3), 3 for what must be seen to understand (1.4.11).
// Okabe and Ito's lighter colours, for the fourth way and more, keep to their own palette instead.
func TestContrast(t *testing.T) {
	for _, theme := range []Theme{Light, Dark} {
		back := luminance(theme.colour(paper))
		for i, want := range map[ink]float64{writing: 4.5, faint: 4.5, aim: 4.5, total: 4.5, totalPale: 3, way1: 3, way2: 3, way3: 3} {
			y := luminance(theme.colour(i))
			if ratio := (max(y, back) + 0.05) / (min(y, back) + 0.05); ratio < want {
				t.Errorf("theme %d: ink %d has a contrast of %.2f, want %g", theme, i, ratio, want)
			}
		}
	}
}

// TestOkabeIto: the colours of the ways on white are those of M. Okabe and K. Ito, as cited in the package's comment,
// in sRGB: blue, vermilion, bluish green, reddish purple, orange, sky blue.
func TestOkabeIto(t *testing.T) {
	for i, want := range []rgb{opaque(0, 114, 178), opaque(213, 94, 0), opaque(0, 158, 115), opaque(204, 121, 167), opaque(230, 159, 0), opaque(86, 180, 233)} {
		if got := Light.colour(wayInk(i)); got != want {
			t.Errorf("way %d is drawn in %v, want %v", i, got, want)
		}
	}
}

func TestParseTheme(t *testing.T) {
	for name, want := range map[string]Theme{"auto": Auto, "light": Light, "dark": Dark} {
		if got, err := ParseTheme(name); got != want || err != nil {
			t.Errorf("%q is theme %d, %v", name, got, err)
		}
	}
	if _, err := ParseTheme("sepia"); err == nil {
		t.Error("sepia is a theme")
	}
}
