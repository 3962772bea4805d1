package cli

import (
	"fmt"
	"reflect"
	"slices"
	"strings"
	"testing"

	"sixdown/xover"
)

// A helpBase is a right design with a place for a line of one table, and what else that table then needs.
type helpBase struct {
	before, after string
	needs         map[string]string // by key: what must stand with it; "": the lines that must stand with all keys but these
}

const (
	helpDriver = "[driver.x]\n"
	helpWay    = "\n[[way]]\nname = \"w\"\ndriver = \"x\"\nnetwork = []\n"
	helpPlain  = "[driver.x]\nre = \"6 ohm\"\n" + helpWay
)

// helpBases has one for each table of the help, and for its keys what they need.
var helpBases = map[string]helpBase{
	"drive":  {"[drive]\n", helpPlain, nil},
	"listen": {"[listen]\n", helpPlain, nil},
	"air":    {"[air]\n", helpPlain, nil},
	"baffle": {"[baffle]\n", helpPlain, map[string]string{"width": `height = "1 m"`, "height": `width = "1 m"`}},
	"part": {"[parts]\nL2 = \"1.5 mH\"\n[parts.P9]\n", helpPlain, map[string]string{
		"value": "\n", "same": "\n", "esr": `value = "5 uF"`, "taper": `value = "10 kohm"`, "mid": "value = \"10 kohm\"\ntaper = \"log\"", "": `value = "1.5 mH"`,
	}},
	"driver": {"[driver.x]\n", helpWay, map[string]string{
		"re": "\n", "impedance": "\n", "phase": "re = \"6 ohm\"\nresponse = \"a.frd\"", "mic": "re = \"6 ohm\"\nresponse = \"a.frd\"",
		"fs": "re = \"6 ohm\"\nqms = 3\nqes = 1", "qms": "re = \"6 ohm\"\nfs = \"50 Hz\"\nqes = 1", "qes": "re = \"6 ohm\"\nfs = \"50 Hz\"\nqms = 3",
		"box": "re = \"6 ohm\"\nfs = \"50 Hz\"\nqms = 3\nqes = 1\nvas = \"9 l\"", "breakup": "re = \"6 ohm\"\nsensitivity = \"88 dB\"", "": `re = "6 ohm"`,
	}},
	"responses": {helpDriver + "re = \"6 ohm\"\n[driver.x.responses]\n", helpWay, nil},
	"le_loss":   {helpDriver + "re = \"6 ohm\"\n[driver.x.le_loss]\n", helpWay, map[string]string{"r2": `l2 = "1 mH"`, "l2": `r2 = "1 ohm"`}},
	"box": {helpDriver + "re = \"6 ohm\"\nfs = \"50 Hz\"\nqms = 3\nqes = 1\nvas = \"9 l\"\n[driver.x.box]\n", helpWay, map[string]string{
		"kind": `volume = "9 l"`, "volume": `kind = "closed"`, "tuning": "kind = \"vented\"\nvolume = \"9 l\"", "ql": "kind = \"vented\"\nvolume = \"9 l\"\ntuning = \"40 Hz\"",
	}},
	"breakup": {helpDriver + "re = \"6 ohm\"\nsensitivity = \"88 dB\"\n[[driver.x.breakup]]\n", helpWay, map[string]string{
		"at": "q = 4\ngain = \"6 dB\"", "q": "at = \"4 kHz\"\ngain = \"6 dB\"", "gain": "at = \"4 kHz\"\nq = 4",
	}},
	"way": {"[parts]\nL1 = \"1 mH\"\nC1 = \"5 uF\"\n[driver.woofer]\nre = \"6 ohm\"\n[[way]]\n", "", map[string]string{
		"name": "driver = \"woofer\"\nnetwork = [\"series L1\", \"shunt C1\"]", "driver": "name = \"w\"\nnetwork = [\"series L1\", \"shunt C1\"]",
		"network": "name = \"w\"\ndriver = \"woofer\"", "": "name = \"w\"\ndriver = \"woofer\"\nnetwork = [\"series L1\", \"shunt C1\"]",
	}},
	"tone": {"[parts]\nP1 = \"10 kohm\"\n[control.c]\npart = \"P1\"\nat = 0.2\n[tone]\n", "", map[string]string{
		"network": "\n", "": `network = ["P1 from amp to 0 wiper out"]`,
	}},
	"control": {"[parts]\nP1 = \"10 kohm\"\n[tone]\nnetwork = [\"P1 from amp to 0 wiper out\"]\n[control.c]\n", "", map[string]string{
		"part": `at = 0.5`, "at": `part = "P1"`,
	}},
	"tune":    {"[tune]\n", helpPlain, nil},
	"weights": {"[tune.weights]\n", helpPlain, nil},
	"spread":  {"[spread]\n", helpPlain, nil},
	"tol":     {"[spread.tol]\n", helpPlain, nil},
}

// design reads the base with a line in its table; the line is for the key.
func (b helpBase) design(key, line string) (*xover.Design, error) {
	more, ok := b.needs[key]
	if !ok {
		more = b.needs[""]
	}
	d, warnings, err := xover.Parse("", []byte(b.before+line+"\n"+more+"\n"+b.after))
	if err == nil && strings.Contains(fmt.Sprint(warnings), "no response") {
		err = fmt.Errorf("%v", warnings)
	}
	return d, err
}

// keysIn returns the keys that the reader of design files says a table has, when it is given one that is not among them.
func keysIn(src string) []string {
	_, _, err := xover.Parse("", []byte(src))
	_, list, _ := strings.Cut(fmt.Sprint(err), `has no key "nonsensical"; its keys are `)
	list, _, _ = strings.Cut(list, "\n")
	return strings.Split(list, ", ")
}

// TestDesignHelpIsWhole: each table of the help has the keys that the reader knows, all of them and no other, in its
// order; and the help has every table there is, also those within others.
func TestDesignHelpIsWhole(t *testing.T) {
	var names []string
	var inner []string
	for _, table := range helpTables() {
		names = append(names, table.name)
		base, ok := helpBases[table.name]
		if !ok {
			t.Errorf("%s: the test has no design for it", table.name)
			continue
		}
		var told []string
		for _, k := range table.keys {
			told = append(told, k.name)
			if strings.Contains(k.example, "{") && k.name != "h" && k.name != "v" { // which have angles for keys
				inner = append(inner, k.name)
			}
		}
		if known := keysIn(base.before + "nonsensical = 1\n" + base.after); !slices.Equal(told, known) {
			t.Errorf("%s: the help tells\n%v, the reader knows\n%v", table.head, told, known)
		}
	}
	for _, name := range inner {
		if !slices.Contains(names, name) {
			t.Errorf("%s is a table, and the help has none of it", name)
		}
	}
	for _, name := range keysIn("nonsensical = 1\n" + helpPlain) {
		switch name {
		case "title":
		case "parts": // of whose entries each is a table or a value
			name = "part"
			fallthrough
		default:
			if !slices.Contains(names, name) {
				t.Errorf("the file may have %s, and the help has nothing of it", name)
			}
		}
	}
	if !strings.Contains(designHelp(), "title = ") {
		t.Error("the help does not tell title")
	}
}

// TestDesignHelpExamples: each example is right where it stands and does something, and each default, written out, is the
// same as nothing. Without a key that is needed, and without no other, the design is wrong.
func TestDesignHelpExamples(t *testing.T) {
	for _, table := range helpTables() {
		base := helpBases[table.name]
		for _, k := range table.keys {
			name := table.head + " " + k.name
			with, err := base.design(k.name, k.name+" = "+k.example)
			if err != nil {
				t.Errorf("%s = %s: %v", name, k.example, err)
				continue
			}
			without, err := base.design(k.name, "")
			if needed := strings.Contains(k.about, "needed") || strings.Contains(k.about, "goes with"); needed != (err != nil) {
				t.Errorf("%s: the help says that it is needed: %v; without it: %v", name, needed, err)
			}
			if err != nil {
				continue
			}
			if k.example != k.preset && reflect.DeepEqual(with, without) {
				t.Errorf("%s = %s: the design is the same as without it", name, k.example)
			}
			if k.preset == "" {
				continue
			}
			preset, err := base.design(k.name, k.name+" = "+k.preset)
			if err != nil || !reflect.DeepEqual(preset, without) {
				t.Errorf("%s: its default is not %s (%v)", name, k.preset, err)
			}
		}
	}
}

// TestDesignHelpText: what the help shows beside the keys is right too, and no line is too wide for a terminal of 90.
func TestDesignHelpText(t *testing.T) {
	text := designHelp()
	for line := range strings.Lines(text) {
		if n := len([]rune(strings.TrimRight(line, "\n"))); n > 90 {
			t.Errorf("%d characters: %s", n, line)
		}
		if strings.Contains(line, "~") {
			t.Errorf("a mark is left: %s", line)
		}
	}
	_, whole, _ := strings.Cut(text, "This is a whole design:\n")
	whole, _, _ = strings.Cut(whole, "Every table and key")
	if _, warnings, err := xover.Parse("", []byte(whole)); err != nil || len(warnings) > 0 {
		t.Errorf("the design that the help shows: %v, %v", err, warnings)
	}
	targets := 0
	for line := range strings.Lines(designHelpTail) {
		target, _, _ := strings.Cut(strings.TrimSpace(line), "   ")
		if !strings.HasPrefix(target, "low-pass ") {
			continue
		}
		targets++
		if _, err := helpBases["way"].design("target", fmt.Sprintf("target = [%q]", target)); err != nil {
			t.Errorf("%s: %v", target, err)
		}
	}
	if targets < 5 {
		t.Errorf("%d targets are shown, want all five forms", targets)
	}
}
