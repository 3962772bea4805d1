// Package caution holds the short warnings that go with whatever can hurt ears, drivers or hands.
package caution

import "strings"

// hearing goes with every file to be played. The exposure figures are those of NIOSH, "Criteria for a Recommended
// Standard: Occupational Noise Exposure", publication 98-126, 1998.
const hearing = "Hearing: start with the volume at nothing and bring it up slowly. NIOSH allows 85 dBA for 8 hours, and half the time for every 3 dB more."

// Sound are the cautions that go with every file to be played through a loudspeaker.
func Sound() []string {
	return []string{
		hearing,
		"Tones and sweeps put all their power into one driver: keep the level low, and put a capacitor in series with a tweeter while you test.",
		"Channel 1 is the amplifier's output and the others are what the network makes of it: play channel 1 into a network, or the others into drivers without one.",
	}
}

// Tone are the cautions that go with a file to be played through a tone network, which may stand in a valve circuit.
func Tone() []string { return append([]string{hearing}, Valves()...) }

// Valves are the cautions that go with a network that may stand in a valve circuit.
func Valves() []string {
	return []string{
		"Valve circuits carry lethal voltages, and capacitors keep them after the circuit is switched off and unplugged.",
		"Leave work on them to licensed or trained persons; local electrical codes come first.",
	}
}

// Resistors are the cautions that go with resistors that take power, such as those of a pad.
func Resistors() []string {
	return []string{
		"These resistors get hot: choose a rating of at least twice the power that they take, and keep them clear of wood, foam and capacitors.",
		"How much power arrives is for the amplifier and the music to say; the part maker's data decide what a resistor stands.",
	}
}

// Text sets cautions for people, a line each.
func Text(cautions []string) string {
	return "Caution\n  " + strings.Join(cautions, "\n  ") + "\n"
}
