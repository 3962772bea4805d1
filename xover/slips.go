package xover

import (
	"slices"
	"strings"
)

// A slip is what builders write, one of several names, and what it should be.
type slip struct {
	names string // separated by blanks, in lower case without _ and -
	mend  string // how to mend a key; of a word, the choice that is meant
}

// slips are keys that builders write and no table has, by the kind of table. They come before the nearest name,
// which for "qts" would be "qms".
var slips = map[string][]slip{
	"file": {
		{"name", `write it like title = "Harbour"`},
		{"amp amplifier source level voltage", `the amplifier is in [drive], such as level = "2.83 V"`},
		{"listener listening ear mic distance", `the ear is in [listen], such as distance = "2 m"`},
		{"cabinet box enclosure front", "the front is [baffle] with width and height; what a driver stands in is its own box"},
		{"component components values", `write [parts] and below it a line for each, such as C1 = "4.7 uF"`},
		{"crossover network filter target xover", "these are keys of each way: write [[way]], and below it target and network"},
		{"woofer tweeter midrange mid", "a driver is a table [driver.NAME], such as [driver.woofer]"},
		{"pot potentiometer knob", `write [control.NAME], and below it part = "P1" and at = 0.5`},
		{"tolerance tolerances tol", `write [spread], and below it tol = { R = "5 %", L = "5 %", C = "5 %" }`},
		{"optimize optimise optimizer optimiser goal", "write [tune]"},
		{"temperature speedofsound soundspeed density", "write [air], and below it sound_speed and density"},
	},
	"drive": {
		{"voltage volt volts v u", `write it like level = "2.83 V"`},
		{"power watt watts w", `write it like rated_power = "60 W"`},
		{"impedance load z nominal", `write it like rated_load = "8 ohm"`},
		{"r resistance cable outputimpedance rs", `write it like source = "0.05 ohm", amplifier and cable together`},
		{"sourceimpedance sourceresistance seriesohms", `write it like source = "0.05 ohm", amplifier and cable together`},
	},
	"listen": {
		{"angle angles axis h v horizontal vertical", `the ear is straight ahead of the origin; where else the sum should be even, [tune] says, angles = ["h=30"]`},
		{"at x y z position offset", "give distance, from the origin along +z, and height"},
		{"r range radius", `write it like distance = "2 m"`},
		{"elevation", `write it like height = "0 mm", above the origin`},
	},
	"air": {
		{"c speed velocity speedofsound", `write it like sound_speed = "343 m/s"`},
		{"rho", `write it like density = "1.2 kg/m3"`},
		{"temperature temp t", `give sound_speed: "343 m/s" at 20 °C, and 0.6 m/s more for each degree above`},
	},
	"baffle": {
		{"at x y z position offset center centre origin", "the baffle is centred on the origin; give the drivers' at from its middle"},
		{"depth", "only the front counts; take it out"},
		{"radius edge edges roundover round chamfer", "its edges are taken as sharp; take it out"},
		{"w b", `write it like width = "220 mm"`},
		{"h", `write it like height = "380 mm"`},
	},
	"part": {
		{"r resistance rdc rs re seriesresistance", `write it like dcr = "0.3 ohm" for a coil, esr = "20 mohm" for a capacitor`},
		{"inductance capacitance ohm ohms farad henry l c v", `write it like value = "1.8 mH"`},
		{"tolerance", `write it like tol = "5 %"`},
		{"fix fixed lock locked keep frozen", "write hold = true"},
		{"min max limits bounds least most", `write it like range = ["1 mH", "2.2 mH"]`},
		{"copy like follow follows equal", `write it like same = "L1"`},
		{"curve law", `write it like taper = "log"`},
		{"voltage vmax power watts rating current", "a part's ratings are not kept here; take it out"},
		{"price cost brand maker make", "what parts cost is in a list of parts to buy, not here; take it out"},
	},
	"driver": {
		{"qts qt q", "give qms and qes; with Qts, Qes = Qts·Qms/(Qms − Qts)"},
		{"z zma imp nominal zn rated", `write it like impedance = "FILE.zma", or impedance = "8 ohm"`},
		{"nominalimpedance ratedimpedance load", `write it like impedance = "FILE.zma", or impedance = "8 ohm"`},
		{"frd fr frequencyresponse file", `write it like response = "FILE.frd"`},
		{"spl level efficiency db sens", `write it like sensitivity = "88 dB", at 2.83 V and 1 m; of a table, response = "FILE.frd"`},
		{"freq frequency f f0 fo fres resonance", `write it like fs = "40 Hz", with qms and qes`},
		{"inductance l le1k lvc", `write it like le = "0.5 mH"`},
		{"r rdc dcr resistance rvc ohm ohms", `write it like re = "6 ohm", or impedance = "8 ohm" for a plain resistance`},
		{"r2 l2", `write it like le_loss = { r2 = "3 ohm", l2 = "0.5 mH" }`},
		{"position pos offset xyz x y location place center centre", `write it like at = ["0 mm", "-90 mm", "-22 mm"]: right, up, toward the listener`},
		{"microphone micdistance distance", `write it like mic = ["0 mm", "0 mm", "1 m"], from the origin`},
		{"size cone d dia", `write it like diameter = "130 mm", of what moves`},
		{"area", `write it like sd = "132 cm2"`},
		{"mms mmd cms rms bl n0", "the model takes what they come to: give fs, qms, qes, vas and sd"},
		{"volume vb fb tuning enclosure cabinet closed sealed vented ported kind", `write it like box = { kind = "closed", volume = "12 l" }`},
		{"polarity inverted invert reversed reverse", `polarity is a key of its [[way]]; write it there, polarity = "reversed"`},
		{"excursion travel", `write it like xmax = "4 mm"`},
		{"angles offaxis polar directivity", `write it like responses = { h = { "0" = "w_0.frd", "30" = "w_30.frd" } }`},
		{"peak peaks resonances mode modes", `write it like breakup = [{ at = "4.5 kHz", q = 4, gain = "6 dB" }]`},
		{"power pe watts", "what a driver bears is not kept here; take it out"},
	},
	"le_loss": {
		{"r rp resistance", `write it like r2 = "3 ohm"`},
		{"l lp inductance", `write it like l2 = "0.5 mH"`},
	},
	"box": {
		{"type alignment", "write it like kind = \"closed\""},
		{"v vb vol size litres", `write it like volume = "12 l"`},
		{"f fb freq frequency port vent", `write it like tuning = "45 Hz"`},
		{"q qb leakage losses", "write it like ql = 7"},
	},
	"breakup": {
		{"f fs f0 freq frequency", `write it like at = "4.5 kHz"`},
		{"db level peak height", `write it like gain = "6 dB"`},
		{"width bandwidth bw", "write q, the frequency over the width, such as q = 4"},
	},
	"responses": {
		{"horizontal hor", `write it like h = { "0" = "w_0.frd", "30" = "w_30.frd" }`},
		{"vertical vert", `write it like v = { "0" = "w_0.frd", "30" = "w_30.frd" }`},
	},
	"way": {
		{"inverted invert reversed reverse phase", `write polarity = "reversed"`},
		{"crossover xover freq frequency fc f at alignment shape order", `write it like target = ["low-pass linkwitz-riley 4 at 2.2 kHz"]`},
		{"slope type lowpass highpass goal", `write it like target = ["low-pass linkwitz-riley 4 at 2.2 kHz"]`},
		{"filter components parts part steps circuit series shunt wiring", `write it like network = ["series L1", "shunt C1"]`},
		{"speaker unit units", `write it like driver = "woofer"`},
		{"gain attenuation pad level", `write its resistors as steps of network, such as "series R1" and "shunt R2"`},
		{"delay position offset", "where a driver stands is its own at"},
	},
	"tone": {
		{"rs input impedance r", `write it like source = "1 kohm"`},
		{"rl output", `write it like load = "1 Mohm"`},
		{"filter components parts part steps circuit series shunt", `write it like network = ["series R1", "shunt C1"]`},
	},
	"control": {
		{"pot potentiometer", `write it like part = "P1"`},
		{"value turn set setting position wiper knob level", "write it like at = 0.5"},
	},
	"tune": {
		{"freq frequency range from to limits", `write it like band = ["200 Hz", "20 kHz"]`},
		{"zmin minz impedance minimumimpedance minload", `write it like min_impedance = "3.2 ohm"`},
		{"slope", `write it like tilt = "-0.5 dB", for each octave`},
		{"target response shape", `write it like curve = "house.txt", a table of Hz and dB; what a way should follow is its own target`},
		{"spl sensitivity", `write it like level = "87 dB"`},
		{"fix fixed hold", "it is a key of the part, hold = true; write it there"},
	},
	"spread": {
		{"tolerance tolerances r l c p", `write it like tol = { R = "5 %", L = "5 %", C = "5 %" }`},
		{"within window db yield", `write it like limit = "1 dB"`},
		{"gaussian normal uniform", `write distribution = "normal" or "uniform"`},
		{"pair pairs matching", `write it like match = "0.5 dB"`},
		{"samples seed builds", "it is asked of the command and not kept in the design; take it out"},
	},
	"tol": {
		{"resistor resistors", `write it like R = "5 %"`},
		{"coil coils inductor inductors", `write it like L = "5 %"`},
		{"capacitor capacitors", `write it like C = "5 %"`},
		{"pot pots potentiometer potentiometers taper", `write it like P = "20 %"`},
	},
}

// meant returns what the first of the slips with that name says, "" if there is none.
func meant(all []slip, name string) string {
	for _, s := range all {
		if slices.Contains(strings.Fields(s.names), name) {
			return s.mend
		}
	}
	return ""
}

// plainKey is a key in lower case without _ and -.
func plainKey(key string) string {
	return strings.NewReplacer("_", "", "-", "").Replace(strings.ToLower(key))
}

// keyMend says how to mend a key that a table of some kind does not have.
func keyMend(kind, key string, known []string) string {
	if mend := meant(slips[kind], plainKey(key)); mend != "" {
		return mend
	}
	if _, isAngle := angleOf(key); isAngle && kind == "responses" {
		return `write the angles within h or v, such as h = { "0" = "w_0.frd", "30" = "w_30.frd" }`
	}
	keys := "its keys are " + strings.Join(known, ", ")
	if near := Nearest(key, known); near != "" {
		return didYouMean(key, known, "") + " " + keys
	}
	return keys
}

// otherWords are those that builders write for one of a key's choices.
var otherWords = map[string][]slip{
	"polarity": {
		{"inverted invert inv reverse rev negative neg minus 180 outofphase antiphase", "reversed"},
		{"positive pos plus + 0 inphase noninverted", "normal"},
	},
	"kind": {
		{"sealed acousticsuspension airsuspension cb", "closed"},
		{"ported reflex bassreflex port br", "vented"},
		{"none infinite infinitebaffle dipole openbaffle ob", "open"},
	},
	"taper": {
		{"lin", "linear"},
		{"logarithmic audio", "log"},
		{"antilog reverse inverselog revlog", "reverse-log"},
	},
	"phase": {
		{"min minimal derived", "minimum"},
		{"file meas table", "measured"},
	},
	"distribution": {
		{"gauss gaussian", "normal"},
		{"flat even", "uniform"},
	},
}

// wordMend says how to mend a word that is none of a key's choices.
func wordMend(key, word string, choices []string, fallback string) string {
	plain := plainKey(strings.ReplaceAll(word, " ", ""))
	if word == "-" {
		plain = "minus"
	}
	if choice := meant(otherWords[key], plain); choice != "" {
		return "write " + key + ` = "` + choice + `"`
	}
	return didYouMean(word, choices, fallback)
}
