package chart

import (
	"fmt"
	"image/color"
)

// A Theme is the set of colours that a picture is drawn in.
type Theme uint8

// The themes. An SVG in Auto follows what its reader prefers; PNG and PDF take Auto as Light.
const (
	Auto Theme = iota
	Light
	Dark
)

// ParseTheme returns the theme of that name: auto, light or dark.
func ParseTheme(name string) (Theme, error) {
	for t, n := range []string{"auto", "light", "dark"} {
		if n == name {
			return Theme(t), nil
		}
	}
	return 0, fmt.Errorf("theme: %q is none; give auto, light or dark", name)
}

// An ink is a colour by what it is for.
type ink uint8

const (
	paper ink = iota
	frame     // of a panel
	major     // grid lines with a number, and those between
	minor
	writing // titles
	faint   // numbers at the axes, notes
	aim     // what a way should do
	total   // the sum, and whatever else is one for the whole
	way1
	way2
	way3
	way4
	way5
	way6
	totalPale // the same of another design, or behind something
	way1Pale
	way2Pale
	way3Pale
	way4Pale
	way5Pale
	way6Pale
	totalTint // the same as a ground on which curves are drawn
	way1Tint
	way2Tint
	way3Tint
	way4Tint
	way5Tint
	way6Tint
	heat0 // heatSteps of them follow, from the lowest level to the highest
)

// ways is how many inks there are for ways; after that they begin again.
const ways = 6

// wayInk returns the ink of way i.
func wayInk(i int) ink { return way1 + ink(i%ways) }

// pale returns the paler twin of the ink of the total or a way.
func (i ink) pale() ink {
	if i >= total && i <= way6 {
		return i + totalPale - total
	}
	return i
}

// full returns the ink whose paler twin i is, or i.
func (i ink) full() ink {
	if i >= totalPale && i <= way6Pale {
		return i - totalPale + total
	}
	return i
}

// tint returns the ink of the total or a way as a ground.
func (i ink) tint() ink {
	if i >= total && i <= way6 {
		return i + totalTint - total
	}
	return i
}

// How much of the paper is in a pale ink, and in a tint.
const (
	paleness = 0.45
	tintness = 0.78
)

type rgb = color.RGBA

func opaque(r, g, b uint8) rgb { return rgb{R: r, G: g, B: b, A: 255} }

func hex(v uint32) rgb { return opaque(uint8(v>>16), uint8(v>>8), uint8(v)) }

// colour returns what an ink looks like in a theme.
func (t Theme) colour(i ink) rgb {
	switch {
	case i >= heat0:
		return heat(int(i - heat0))
	case i >= totalTint:
		return mixed(t.colour(i-totalTint+total), t.colour(paper), tintness)
	case i >= totalPale:
		return mixed(t.colour(i-totalPale+total), t.colour(paper), paleness)
	case t == Dark:
		// The darkest colour of Okabe and Ito gives way to their sky blue, and that to their yellow.
		return hex([...]uint32{0x14171b, 0x66707c, 0x2f363e, 0x22272d, 0xe8ebee, 0xa3adb8, 0xb4bcc6, 0xf5f7f9,
			0x56b4e9, 0xe0661a, 0x1fb58a, 0xcc79a7, 0xe69f00, 0xf0e442}[i])
	}
	return hex([...]uint32{0xffffff, 0x808a95, 0xd6dbe0, 0xebeef1, 0x1a1e23, 0x59626d, 0x4a525c, 0x0e1114,
		0x0072b2, 0xd55e00, 0x009e73, 0xcc79a7, 0xe69f00, 0x56b4e9}[i])
}

// mixed returns full with that much of back in it.
func mixed(full, back rgb, much float64) rgb {
	mix := func(a, b uint8) uint8 { return uint8((1-much)*float64(a) + much*float64(b) + 0.5) }
	return opaque(mix(full.R, back.R), mix(full.G, back.G), mix(full.B, back.B))
}

// dashes are the second cue by which ways are told apart. The first way is solid.
func dashes(i int) []float64 {
	return [][]float64{nil, {9, 3}, {9, 3, 2, 3}, {2, 2.5}, {5, 3}, {12, 3, 2, 3, 2, 3}}[i%ways]
}
