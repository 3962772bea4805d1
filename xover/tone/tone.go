package tone

import (
	"embed"
	"strings"
)

//go:embed templates/*.toml
var templates embed.FS

// A Kind is what a tone network does, as named on the command line.
type Kind string

// The kinds.
const (
	TrebleCut          Kind = "treble-cut"           // a capacitor behind a variable resistor, across a pickup
	BassTreble         Kind = "bass-treble"          // the passive bridge
	BassTrebleFeedback Kind = "bass-treble-feedback" // the same about an amplifier
	BassMiddleTreble   Kind = "bass-middle-treble"   // three controls in one stack
	Tilt               Kind = "tilt"                 // bass up and treble down, or the other way
	Blend              Kind = "blend"                // from a low-pass to a high-pass
	HighPass           Kind = "high-pass"            // of variable corner
	LowPass            Kind = "low-pass"             // of variable corner
	Loudness           Kind = "loudness"             // a volume that loses less bass than the rest
)

// Kinds returns all, in the order in which they are told.
func Kinds() []Kind {
	return []Kind{TrebleCut, BassTreble, BassTrebleFeedback, BassMiddleTreble, Tilt, Blend, HighPass, LowPass, Loudness}
}

// About says in a line what the kind is: the first line of its template.
func (k Kind) About() string {
	first, _, _ := strings.Cut(k.Text(), "\n")
	return strings.TrimPrefix(first, "# ")
}

// Text returns the design file of the kind; "" if there is none of that name.
func (k Kind) Text() string {
	text, err := templates.ReadFile("templates/" + string(k) + ".toml")
	if err != nil {
		return ""
	}
	return string(text)
}
