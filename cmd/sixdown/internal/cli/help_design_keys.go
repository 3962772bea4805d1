package cli

// A helpKey is what the help tells of one key of the design file.
type helpKey struct {
	name    string
	example string // as TOML
	preset  string // the default, as TOML; "": none, or about says it
	about   string
}

// A helpTable is a table of the design file. Its keys stand in the order in which the reader of design files knows them.
type helpTable struct {
	name  string // of the key, "drive" or "box"
	head  string // as it is written, "[drive]"
	about string
	keys  []helpKey
}

// helpTables are all tables of the design file, each behind the one that holds it.
func helpTables() []helpTable {
	return []helpTable{
		{"drive", "[drive]", "The amplifier.", []helpKey{
			{"level", `"2.83 V"`, `"2.83 V"`, "its voltage, rms, open circuit; every SPL is for it"},
			{"source", `"0.05 ohm"`, `"0 ohm"`, "its own resistance and the cable's"},
			{"rated_power", `"60 W"`, "", "into rated_load; with it, predict tells a load that falls too low, and scout how far diaphragms move"},
			{"rated_load", `"8 ohm"`, `"8 ohm"`, "the impedance that the loudspeaker is rated at"},
		}},
		{"listen", "[listen]", "The ear. It is straight ahead; predict --angle turns it.", []helpKey{
			{"distance", `"2 m"`, `"1 m"`, "from the origin, along +z"},
			{"height", `"100 mm"`, `"0 mm"`, "of the ear above the origin"},
		}},
		{"air", "[air]", "What the sound travels in, at 20 °C if nothing is said.", []helpKey{
			{"sound_speed", `"343 m/s"`, `"343 m/s"`, "0.6 m/s more for each degree above 20 °C"},
			{"density", `"1.2 kg/m3"`, `"1.2 kg/m3"`, "for how far diaphragms move"},
		}},
		{"baffle", "[baffle]", `The front of the cabinet, for drivers without a response file: a measurement has its
edges in it. It is flat, sharp-edged, in the plane z = 0 and centred on the origin; no
key moves it, so each driver's at is counted from its middle. Without it, no edges.`, []helpKey{
			{"width", `"220 mm"`, "", "needed"},
			{"height", `"380 mm"`, "", "needed"},
		}},
		{"part", "[parts]", `A line for each part, NAME = VALUE. The unit tells the kind: ohm a resistor, H a coil,
F a capacitor. For R, P and C a code of IEC 60062 does too, "4K7" or "4u7".
  R1 = "6.2 ohm"
  L1 = { value = "1.8 mH", dcr = "0.35 ohm" }
The long form, in braces, has these keys:`, []helpKey{
			{"value", `"1.8 mH"`, "", "needed, or same"},
			{"same", `"L2"`, "", "needed, or value: the part whose value it follows"},
			{"tol", `"5 %"`, "", "tolerance, for spread; default that of [spread]"},
			{"hold", `true`, "false", "tune leaves it alone"},
			{"dcr", `"0.35 ohm"`, `"0 ohm"`, "of a coil: the resistance of its winding"},
			{"esr", `"20 mohm"`, `"0 ohm"`, "of a capacitor: its series resistance"},
			{"range", `["1 mH", "2.2 mH"]`, "", "the least and the greatest value that tune may choose; default 0.1-100~ohm, 0.02-15~mH, 0.1-470~uF"},
			{"taper", `"log"`, `"linear"`, `of a potentiometer, or "reverse-log"; a part in ohm is one if it has a taper or its name begins with P`},
			{"mid", `0.15`, `0.1`, "of a taper that is not linear: the fraction of the track at half turn"},
		}},
		{"driver", "[driver.NAME]", `A table for each driver: measured, from its data sheet, or a mixture. It needs
impedance, which counts if both are given, or re. Without response(s) and without
sensitivity it makes no sound, and the electrical answers are all there is. Files are
looked for beside the design.`, []helpKey{
			{"impedance", `"woofer.zma"`, "", `needed, or re: a table of Hz, ohm, degrees, or "8~ohm", a plain resistance`},
			{"response", `"woofer.frd"`, "", "a table of Hz, dB SPL at 2.83 V, degrees"},
			{"responses", `{ h = { "0" = "w_0.frd", "30" = "w_30.frd" } }`, "", "instead of response: such tables at angles"},
			{"phase", `"minimum"`, `"measured"`, "of the response: measured, or minimum, derived from its magnitude"},
			{"at", `["0 mm", "-90 mm", "-22 mm"]`, `["0 mm", "0 mm", "0 mm"]`, "its acoustic centre from the origin: right, up, toward the listener"},
			{"mic", `["0 mm", "0 mm", "2 m"]`, "", "where the response was measured; default 1 m ahead of the origin, or of the driver if its phase is minimum"},
			{"re", `"5.4 ohm"`, "", "needed, or impedance: resistance of the voice coil"},
			{"le", `"0.04 mH"`, `"0 mH"`, "its inductance"},
			{"le_loss", `{ r2 = "3 ohm", l2 = "0.5 mH" }`, "", "a further inductance with losses, in series with re and le"},
			{"fs", `"850 Hz"`, "", "resonance in free air; goes with qms and qes. Without it the level is flat"},
			{"qms", `3.1`, "", "mechanical Q at fs; goes with it"},
			{"qes", `1.2`, "", "electrical Q at fs; goes with it. From qts, qes = qts·qms/(qms~-~qts)"},
			{"vas", `"12 l"`, "", "compliance as a volume of air; for a box"},
			{"sd", `"132 cm2"`, "", "area of the diaphragm; for how far it moves and, without diameter, for its directivity"},
			{"diameter", `"26 mm"`, "", "of what moves, for its directivity; without it and sd it radiates to all sides alike"},
			{"sensitivity", `"91 dB"`, "", "SPL at 2.83 V and 1 m"},
			{"xmax", `"4 mm"`, "", "how far it may move to one side, peak; scout looks at it"},
			{"box", `{ kind = "closed", volume = "12 l" }`, "", "what it stands in"},
			{"breakup", `[{ at = "4.5 kHz", q = 4, gain = "6 dB" }]`, "", "resonances of the diaphragm on the data sheet's response"},
		}},
		{"responses", "responses, of a driver", `Each plane has an angle in degrees, -180 to 180, in quotes, and its file; one at "0"
there must be.`, []helpKey{
			{"h", `{ "0" = "w_0.frd", "30" = "w_30.frd" }`, "", "needed, or v: horizontal, positive to the right"},
			{"v", `{ "0" = "w_0.frd", "-20" = "w_d20.frd" }`, "", "needed, or h: vertical, positive up"},
		}},
		{"le_loss", "le_loss, of a driver", "A resistance and an inductance in parallel.", []helpKey{
			{"r2", `"3 ohm"`, "", "needed"},
			{"l2", `"0.5 mH"`, "", "needed"},
		}},
		{"box", "box, of a driver", "For the model of the data sheet; it takes fs, qms, qes and vas.", []helpKey{
			{"kind", `"closed"`, "", `needed: "open", "closed" or "vented"; no box is as open`},
			{"volume", `"12 l"`, "", "net; of a closed or vented box, needed there"},
			{"tuning", `"45 Hz"`, "", "of a vented box, needed there: the resonance of vent and volume"},
			{"ql", `10`, `7`, "of a vented box: the Q of its leaks"},
		}},
		{"breakup", "breakup, of a driver", "In square brackets, one pair of braces for each resonance.", []helpKey{
			{"at", `"4.5 kHz"`, "", "needed: its frequency"},
			{"q", `4`, "", "needed: the frequency over the width"},
			{"gain", `"6 dB"`, "", "needed: how far it stands out there, negative for a dip"},
		}},
		{"way", "[[way]]", "One branch, from the amplifier to its driver; write it again for each.", []helpKey{
			{"name", `"low"`, "", "needed"},
			{"driver", `"woofer"`, "", `needed; several are joined by | or +, see below`},
			{"polarity", `"reversed"`, `"normal"`, "of all its drivers"},
			{"target", `["low-pass linkwitz-riley 4 at 2.2 kHz"]`, "", "what the way should do, driver included, for tune and the charts; a band-pass is two"},
			{"network", `["series L1", "shunt C1"]`, "", "needed: its steps, see below; [] is a plain wire"},
		}},
		{"tone", "[tone]", "A tone network, instead of ways.", []helpKey{
			{"source", `"1 kohm"`, `"0 ohm"`, "resistance of what drives it"},
			{"load", `"1 Mohm"`, "", "resistance across the node out; default none"},
			{"network", `["P1 from amp to 0 wiper out"]`, "", "needed: its steps; out is the node that is heard"},
		}},
		{"control", "[control.NAME]", "How far a potentiometer is turned; one that no control turns stands at 0.5.", []helpKey{
			{"part", `"P1"`, "", "needed: the potentiometer"},
			{"at", `0.5`, "", "needed: 0 to 1, from the end that from names to the one that to names"},
		}},
		{"tune", "[tune]", "What tune aims at, and predict and spread judge by.", []helpKey{
			{"band", `["300 Hz", "15 kHz"]`, `["200 Hz", "20 kHz"]`, "where the sum counts"},
			{"level", `"87 dB"`, "", "that the sum should have; default whatever it comes to"},
			{"min_impedance", `"3.2 ohm"`, "", "that the load may not fall below, 20 Hz to 20 kHz; default none"},
			{"tilt", `"-0.5 dB"`, `"0 dB"`, "for each octave: how the sum should rise or fall, about 1~kHz"},
			{"curve", `"house.txt"`, "", "a table of Hz, dB: the shape that the sum should have besides; default flat"},
			{"weights", `{ sum = 1, ways = 1, phase = 0.2, angles = 1 }`, "", "what each aim counts for"},
			{"angles", `["h=30", "h=-15,v=10"]`, "", "other places of the ear, degrees right and up, where the sum should be even"},
		}},
		{"weights", "weights, of [tune]", "", []helpKey{
			{"sum", `2`, `1`, "of the sum"},
			{"ways", `0.5`, `1`, "of each way about its target"},
			{"phase", `0.2`, `0`, "of neighbouring ways being in step where they cross"},
			{"angles", `0.5`, `1`, "of the sum at each of angles"},
		}},
		{"spread", "[spread]", "What spread assumes.", []helpKey{
			{"tol", `{ R = "2 %", L = "3 %", C = "10 %" }`, "", "tolerances of parts that state none, by kind"},
			{"limit", `"0.5 dB"`, `"1 dB"`, "a build passes if its sum stays within it over the band of [tune]"},
			{"distribution", `"normal"`, `"uniform"`, "of values within the tolerance; for normal it is three sigma"},
			{"about", `"level"`, `"nominal"`, "what the limit is about: the nominal sum, or the level that is aimed at"},
			{"match", `"0.5 dB"`, "", "how near a left and a right loudspeaker should be; default not asked"},
		}},
		{"tol", "tol, of [spread]", "", []helpKey{
			{"R", `"2 %"`, `"5 %"`, "of resistors"},
			{"L", `"3 %"`, `"5 %"`, "of coils"},
			{"C", `"10 %"`, `"5 %"`, "of capacitors"},
			{"P", `"10 %"`, `"20 %"`, "of potentiometers"},
		}},
	}
}
