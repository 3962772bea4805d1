package xover

import (
	"slices"
	"testing"
)

func TestWarnings(t *testing.T) {
	const drivers = "[driver.d]\nimpedance = \"8 ohm\"\n"
	way := func(network string) string {
		return "[[way]]\nname = \"w\"\ndriver = \"d\"\nnetwork = " + network + "\n"
	}
	tests := []struct {
		name, src string
		want      []string
	}{
		{"part not used", "[parts]\nC1 = \"1 uF\"\nC2 = \"1 uF\"\n" + drivers + way(`["series C1"]`),
			[]string{"f:3:1: C2 is defined and not used; use it in a network, or take it out"}},
		{"driver not used", "[driver.e]\nre = \"5 ohm\"\n" + drivers + way(`[]`),
			[]string{`f:1:9: driver "e" is defined and not used; give it a [[way]], or take it out`}},
		{"potentiometer without control", "[parts]\nP1 = \"50 ohm\"\n" + drivers + way(`["series P1"]`),
			[]string{`f:2:1: P1 is a potentiometer that no control turns; it stands at 0.5; add a table [control.NAME] with part = "P1" and at`}},
		{"name and unit differ", "[parts]\nL1 = \"1 uF\"\n" + drivers + way(`["series L1"]`),
			[]string{"f:2:6: L1 is a capacitor by its unit, though it is called like an inductor; check the unit, or give it another name"}},
		{"milli where micro is meant, of a coil's name", "[parts]\nL1 = \"1.8 mF\"\n" + drivers + way(`["series L1"]`),
			[]string{"f:2:6: L1 is a capacitor by its unit, though it is called like an inductor; check the unit, or give it another name"}},
		{"parts that no loudspeaker has", "[parts]\nL1 = \"0.5 H\"\nC1 = \"10 pF\"\nR1 = \"5 mohm\"\nP1 = \"1 Mohm\"\n" + drivers + way(`["series L1 + C1 + R1 + P1"]`) + "[control.c]\npart = \"P1\"\nat = 0\n",
			[]string{"f:2:1: L1 is 500 mH; parts of a loudspeaker lie between 1 uH and 200 mH; check the unit's prefix",
				"f:3:1: C1 is 10 pF; parts of a loudspeaker lie between 1 nF and 5000 uF; check the unit's prefix",
				"f:4:1: R1 is 5 mohm; parts of a loudspeaker lie between 0.01 ohm and 10 kohm; check the unit's prefix",
				"f:5:1: P1 is 1 Mohm; parts of a loudspeaker lie between 0.01 ohm and 10 kohm; check the unit's prefix"}},
		{"the ends are a loudspeaker's still; of followers the leader is told", "[parts]\nL1 = \"0.2 H\"\nL2 = \"1 uH\"\nC1 = \"1 nF\"\nC2 = \"5 mF\"\nR1 = \"0.01 ohm\"\nR2 = \"10 kohm\"\nR3 = \"20 kohm\"\nR4 = { same = \"R3\" }\n" + drivers + way(`["series L1 + L2 + C1 + C2 + R1 + R2 + R3 + R4"]`),
			[]string{"f:8:1: R3 is 20 kohm; parts of a loudspeaker lie between 0.01 ohm and 10 kohm; check the unit's prefix"}},
		{"a tone network has other parts", "[parts]\nR1 = \"1 Mohm\"\nC1 = \"100 pF\"\n[tone]\nsource = \"1 kohm\"\nnetwork = [\"series R1\", \"shunt C1\", \"mark out\"]\n", nil},
		{"a longer name says nothing", "[parts]\nCoil = \"1 mH\"\n" + drivers + way(`["series Coil"]`), nil},
		{"range leaves the value out", "[parts]\nC1 = { value = \"1 uF\", range = [\"2 uF\", \"3 uF\"] }\n" + drivers + way(`["series C1"]`),
			[]string{"f:2:24: C1 is 1 uF, which its range leaves out; widen the range, or change the value"}},
		{"mid of a linear taper", "[parts]\nP1 = { value = \"1 kohm\", mid = 0.2 }\n" + drivers + way(`["series P1"]`) + "[control.c]\npart = \"P1\"\nat = 0\n",
			[]string{`f:2:26: P1 has a linear taper, for which mid means nothing; take mid out, or write taper = "log"`}},
		{"phase and mic without response", "[driver.d]\nimpedance = \"8 ohm\"\nphase = \"measured\"\nmic = [\"0 m\", \"0 m\", \"1 m\"]\n" + way(`[]`),
			[]string{"f:3:1: [driver.d] has phase and no response; give the response file, or take it out",
				"f:4:1: [driver.d] has mic and no response; give the response file, or take it out"}},
		{"sensitivity and response", "[driver.d]\nimpedance = \"8 ohm\"\nresponse = \"d.frd\"\nsensitivity = \"87 dB\"\n" + way(`[]`),
			[]string{"f:4:1: [driver.d] has a response file, whose level counts, and a sensitivity; take one of them out"}},
		{"breakup and response", "[driver.d]\nimpedance = \"8 ohm\"\nresponse = \"d.frd\"\nbreakup = [{ at = \"4 kHz\", q = 4, gain = \"6 dB\" }]\n" + way(`[]`),
			[]string{"f:4:1: [driver.d] has a response file, which has the breakup in it, and breakup; take one of them out"}},
		{"breakup without sensitivity", "[driver.d]\nimpedance = \"8 ohm\"\nbreakup = [{ at = \"4 kHz\", q = 4, gain = \"6 dB\" }]\n" + way(`[]`),
			[]string{"f:3:1: [driver.d] has breakup and no sensitivity, so it makes no sound; give the sensitivity, or take breakup out"}},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			_, warnings, err := Parse("f", []byte(test.src))
			if err != nil {
				t.Fatal(err)
			}
			var got []string
			for _, w := range warnings {
				got = append(got, w.String())
			}
			if !slices.Equal(got, test.want) {
				t.Errorf("got %q\nwant %q", got, test.want)
			}
		})
	}
}
