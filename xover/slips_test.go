package xover

import (
	"fmt"
	"regexp"
	"slices"
	"strings"
	"testing"
)

// slipTables are right design files with a mark at which a key of a table of each kind may stand. All that the keys
// proposed need beside them is there.
var slipTables = map[string]string{
	"file":      "MARK\n[driver.w]\nimpedance = \"8 ohm\"\n[[way]]\nname = \"w\"\ndriver = \"w\"\nnetwork = []\n",
	"drive":     "[drive]\nMARK\n",
	"listen":    "[listen]\nMARK\n",
	"air":       "[air]\nMARK\n",
	"baffle":    "[baffle]\nwidth = \"2 m\"\nheight = \"2 m\"\nMARK\n",
	"part":      "[parts.L1]\nvalue = \"1.5 mH\"\nMARK\n",
	"pot":       "[parts.P1]\nvalue = \"10 kohm\"\nMARK\n",
	"driver":    "[driver.x]\nre = \"6 ohm\"\nMARK\n",
	"le_loss":   "[driver.x]\nre = \"6 ohm\"\n[driver.x.le_loss]\nr2 = \"3 ohm\"\nl2 = \"0.5 mH\"\nMARK\n",
	"box":       "[driver.x]\nre = \"6 ohm\"\n[driver.x.box]\nkind = \"vented\"\nMARK\n",
	"breakup":   "[driver.x]\nre = \"6 ohm\"\n[[driver.x.breakup]]\nat = \"1 kHz\"\nq = 1\ngain = \"1 dB\"\nMARK\n",
	"responses": "[driver.x]\nre = \"6 ohm\"\n[driver.x.responses]\nMARK\n",
	"way":       "[[way]]\nname = \"x\"\nMARK\n",
	"tone":      "[tone]\nMARK\n",
	"control":   "[control.x]\nMARK\n",
	"tune":      "[tune]\nMARK\n",
	"spread":    "[spread]\nMARK\n",
	"tol":       "[spread.tol]\nMARK\n",
}

// errorsAt returns what is said of the line that stands for MARK in the table of a kind.
func errorsAt(t *testing.T, kind, line string) (at []*Error) {
	t.Helper()
	key, _, _ := strings.Cut(line, " ")
	table := regexp.MustCompile(`(?m)^`+key+` = .*\n`).ReplaceAllString(slipTables[kind], "") // not twice
	before, after, found := strings.Cut(table, "MARK")
	if !found {
		t.Fatalf("no table of kind %q", kind)
	}
	_, _, err := Parse("", []byte(before+line+after))
	all, _ := err.(Errors)
	for _, e := range all {
		if e.Pos.Line == strings.Count(before, "\n")+1 {
			at = append(at, e)
		}
	}
	return at
}

// TestSlips: each slip is an unknown key, none is told in two ways, and a line that is proposed instead is one that
// the table takes.
func TestSlips(t *testing.T) {
	proposal := regexp.MustCompile(`(\w+) = ("[^"]*"|\[\{.*\}\]|\[[^\]]*\]|\{.*\}|true|[0-9.]+)`)
	for kind, all := range slips {
		var seen []string
		for _, s := range all {
			for name := range strings.FieldsSeq(s.names) {
				if slices.Contains(seen, name) || plainKey(name) != name {
					t.Errorf("%s: %q stands twice, or is not in lower case", kind, name)
				}
				seen = append(seen, name)
				if es := errorsAt(t, kind, name+` = "1"`); len(es) != 1 || es[0].Mend != s.mend || !strings.HasSuffix(es[0].What, `has no key "`+name+`"`) {
					t.Errorf("%s: %s: got %v, want it mended by %q", kind, name, es, s.mend)
				}
			}
		}
		for _, s := range all {
			if !strings.HasPrefix(s.mend, "write ") || kind == "file" { // what is to be written elsewhere
				continue
			}
			for _, found := range proposal.FindAllStringSubmatch(s.mend, -1) {
				line, key := found[0], found[1]
				for _, e := range errorsAt(t, kind, line) {
					if strings.Contains(e.What, "has no key") || strings.HasPrefix(e.What, key+": ") || strings.HasPrefix(e.What, key+" is") {
						t.Errorf("%s: what is proposed is refused: %s: %v", kind, line, e)
					}
				}
			}
		}
	}
}

// TestUnknownKeysListAll: a key like no other is told with every key of its table, however many.
func TestUnknownKeysListAll(t *testing.T) {
	for kind, want := range map[string]string{
		"driver": "impedance, response, responses, phase, at, mic, re, le, le_loss, fs, qms, qes, vas, sd, diameter, sensitivity, xmax, box, breakup",
		"part":   "value, same, tol, hold, dcr, esr, range, taper, mid",
		"tune":   "band, level, min_impedance, tilt, curve, weights, angles",
	} {
		es := errorsAt(t, kind, "nonsensical = 1")
		if len(es) != 1 || es[0].Mend != "its keys are "+want {
			t.Errorf("%s: %v, want all of %s", kind, es, want)
		}
	}
	es := errorsAt(t, "driver", `diametre = "26 mm"`)
	if len(es) != 1 || !strings.HasPrefix(es[0].Mend, `did you mean "diameter"? its keys are impedance, `) {
		t.Errorf("got %v, want the nearest key and all others", es)
	}
}

// TestWordSlips: words that builders write for a choice are mended by the choice, in whatever case.
func TestWordSlips(t *testing.T) {
	for _, test := range []struct{ kind, line, mend string }{
		{"way", `polarity = "inverted"`, `write polarity = "reversed"`},
		{"way", `polarity = "Invert"`, `write polarity = "reversed"`},
		{"way", `polarity = "-"`, `write polarity = "reversed"`},
		{"way", `polarity = "out of phase"`, `write polarity = "reversed"`},
		{"way", `polarity = "+"`, `write polarity = "normal"`},
		{"way", `polarity = "in-phase"`, `write polarity = "normal"`},
		{"way", `polarity = "revresed"`, `did you mean "reversed"?`},
		{"way", `polarity = "sideways"`, `write one of "normal", "reversed"`},
		{"driver", `box = { kind = "Sealed" }`, `write kind = "closed"`},
		{"driver", `box = { kind = "bass-reflex" }`, `write kind = "vented"`},
		{"driver", `phase = "min"`, `write phase = "minimum"`},
		{"spread", `distribution = "gaussian"`, `write distribution = "normal"`},
		{"pot", `taper = "audio"`, `write taper = "log"`},
	} {
		mends := ""
		for _, e := range errorsAt(t, test.kind, test.line) {
			mends += e.Mend + "\n"
		}
		if !strings.Contains(mends, test.mend) {
			t.Errorf("%s: got %q, want it mended by %q", test.line, mends, test.mend)
		}
	}
	for key, all := range otherWords {
		var seen []string
		for _, s := range all {
			for name := range strings.FieldsSeq(s.names) {
				if slices.Contains(seen, name) {
					t.Errorf("%s: %q stands twice", key, name)
				}
				seen = append(seen, name)
			}
		}
	}
}

// TestTargetMends: what a slip means is worked out by hand. The mended text must be a target itself; where a piece is
// not certain there is none.
func TestTargetMends(t *testing.T) {
	for text, want := range map[string]string{
		"low-pass LR4 at 2.2 kHz":                   "low-pass linkwitz-riley 4 at 2.2 kHz",
		"LP LR4 2200 Hz":                            "low-pass linkwitz-riley 4 at 2.2 kHz",
		"lowpass LR24 @ 2.2k":                       "low-pass linkwitz-riley 4 at 2.2 kHz", // 24 dB an octave
		"high-pass LR24@3kHz":                       "high-pass linkwitz-riley 4 at 3 kHz",
		"low pass Linkwitz Riley 2 at 350":          "low-pass linkwitz-riley 2 at 350 Hz",
		"highpass L-R 48 dB/oct at 2.5KHZ":          "high-pass linkwitz-riley 8 at 2.5 kHz",
		"hp bw3 at 2.2 kHz":                         "high-pass butterworth 3 at 2.2 kHz",
		"low-pass butterworth 18 dB at 400 Hz":      "low-pass butterworth 3 at 400 Hz",
		"low-pass B1 at 400 Hz":                     "low-pass butterworth 1 at 400 Hz",
		"low-pass butterworth 6 dB at 400 Hz":       "low-pass butterworth 1 at 400 Hz",
		"low-pass bessel 4 at 2.2k":                 "low-pass bessel 4 at 2.2 kHz",
		"low-pass linkwitz-riley 4 2.2 kHz":         "low-pass linkwitz-riley 4 at 2.2 kHz",
		"low-pass linkwitz-riley 4 at 2200":         "low-pass linkwitz-riley 4 at 2.2 kHz",
		"low-pass linkwitz-riley 4th order 2.2 kHz": "low-pass linkwitz-riley 4 at 2.2 kHz",
		"LR4 at 2.2 kHz":                            "", // which way does it go?
		"band-pass LR4 at 2.2 kHz":                  "",
		"low-pass LR at 2.2 kHz":                    "",
		"low-pass LR3 at 2.2 kHz":                   "", // there is none
		"low-pass LR4 at 2.2":                       "", // Hz or kHz?
		"low-pass LR4":                              "",
		"low-pass chebyshev 3 at 2.2 kHz":           "", // of what ripple?
		"low-pass BW8 dB at 1 kHz":                  "",
		"low-pass bessel 4 reference phase 2.2 kHz": "",
	} {
		es := errorsAt(t, "way", fmt.Sprintf("target = [%q]", text))
		if len(es) != 1 {
			t.Errorf("%s: %d errors, want 1", text, len(es))
			continue
		}
		if got := targetMend(text); got != want {
			t.Errorf("%s: mended to %q, want %q", text, got, want)
		}
		if want == "" {
			continue
		}
		if mend := fmt.Sprintf("write %q", want); es[0].Mend != mend {
			t.Errorf("%s: got %q, want %q", text, es[0].Mend, mend)
		}
		if es := errorsAt(t, "way", fmt.Sprintf("target = [%q]", want)); len(es) > 0 {
			t.Errorf("%s is no target: %v", want, es)
		}
	}
}
