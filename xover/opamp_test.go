package xover

import (
	"strings"
	"testing"
)

func toneWith(network string) string {
	return `[parts]
R1 = "10 kohm"
R2 = "10 kohm"
[tone]
source = "1 kohm"
load = "100 kohm"
network = ["series R1", "mark in", "R2 from in to out", ` + network + `]
`
}

// An amplifier reads back as it is written, and makes none of its nodes hang loose.
func TestOpAmp(t *testing.T) {
	d, warnings, err := Parse("t.toml", []byte(toneWith(`"opamp A1 plus 0 minus in out out"`)))
	if err != nil || len(warnings) > 0 {
		t.Fatal(err, warnings)
	}
	step := d.Tone.Network[3]
	if step.Op != OpAmp || step.Name != "A1" || step.Plus != "0" || step.Minus != "in" || step.Out != "out" {
		t.Errorf("got %+v", step)
	}
	if text := step.String(); text != "opamp A1 plus 0 minus in out out" {
		t.Errorf("written as %q", text)
	}
}

func TestOpAmpSlips(t *testing.T) {
	for network, want := range map[string]string{
		`"opamp A1 plus 0 minus in"`:           `"out" is missing before the end; write "opamp A1 plus x minus y out z"`,
		`"opamp plus 0 minus in out out"`:      `the name of the operational amplifier is missing before "plus"`,
		`"opamp A1 plus in minus in out out"`:  `both inputs of A1 are at "in"; name two nodes`,
		`"opamp A1 plus out minus in out out"`: `the output of A1 goes straight to its plus input, which makes it latch; feed back to minus`,
		`"opamp A1 plus 0 minus in out amp"`:   `its output is at amp, which another source holds; name another node`,
	} {
		if _, _, err := Parse("t.toml", []byte(toneWith(network))); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: got %v, want %q", network, err, want)
		}
	}
	way := `[parts]
C1 = "10 uF"
[driver.d]
impedance = "8 ohm"
[[way]]
name = "low"
driver = "d"
network = ["series C1", "opamp A1 plus 0 minus x out y"]
`
	if _, _, err := Parse("t.toml", []byte(way)); err == nil || !strings.Contains(err.Error(), "a way has no operational amplifier") {
		t.Errorf("in a way: %v", err)
	}
}
