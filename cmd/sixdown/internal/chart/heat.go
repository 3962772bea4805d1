package chart

import "math"

// heatSteps is how many levels a heat map tells apart.
const heatSteps = 12

// heat returns colour i of heatSteps, from dark blue for the lowest to pale yellow for the highest. Lightness
// rises in even steps, so that equal differences of level look alike, in print without colour too, and no hue has
// to be told from another.
//
// The colours are set in the perceptual space Oklab: B. Ottosson, "A perceptual color space for image processing",
// 2020.
func heat(i int) rgb {
	x := float64(i) / (heatSteps - 1)
	lightness := 0.24 + 0.70*x
	hue := (268 - 168*x) * math.Pi / 180
	chroma := 0.095 + 0.035*math.Sin(math.Pi*x)
	return oklab(lightness, chroma*math.Cos(hue), chroma*math.Sin(hue))
}

// oklab returns the sRGB colour of an Oklab one, brought into what a screen can show.
func oklab(l, a, b float64) rgb {
	cube := func(v float64) float64 { return v * v * v }
	lc := cube(l + 0.3963377774*a + 0.2158037573*b)
	mc := cube(l - 0.1055613458*a - 0.0638541728*b)
	sc := cube(l - 0.0894841775*a - 1.2914855480*b)
	return opaque(
		gamma(4.0767416621*lc-3.3077115913*mc+0.2309699292*sc),
		gamma(-1.2684380046*lc+2.6097574011*mc-0.3413193965*sc),
		gamma(-0.0041960863*lc-0.7034186147*mc+1.7076147010*sc),
	)
}

// gamma encodes linear light for an sRGB screen (IEC 61966-2-1).
func gamma(v float64) uint8 {
	v = min(max(v, 0), 1)
	if v <= 0.0031308 {
		v *= 12.92
	} else {
		v = 1.055*math.Pow(v, 1/2.4) - 0.055
	}
	return uint8(255*v + 0.5)
}
