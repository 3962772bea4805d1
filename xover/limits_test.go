package xover

import (
	"errors"
	"fmt"
	"strings"
	"testing"
)

// TestLimits gives Parse a file past each bound, and one at it where that is a design.
func TestLimits(t *testing.T) {
	const driver = "[driver.d]\nimpedance = \"8 ohm\"\n"
	way := func(network string) string {
		return driver + "[[way]]\nname = \"w\"\ndriver = \"d\"\nnetwork = [" + network + "]\n"
	}
	many := func(n int, format string) string {
		var b strings.Builder
		for i := range n {
			fmt.Fprintf(&b, strings.ReplaceAll(format, "#", "%[1]d"), i)
		}
		return b.String()
	}
	tests := []struct {
		name, src string
		want      string // what the first error begins with; "": there is none
	}{
		{"as many bytes as may be", way("") + "#" + strings.Repeat("x", MaxFileBytes-len(way(""))-1), ""},
		{"a byte too many", way("") + "#" + strings.Repeat("x", MaxFileBytes-len(way(""))), "the file is larger than 1048576 bytes"},
		{"only brackets", strings.Repeat("[", MaxFileBytes), "1:65: brackets are nested more than 64 deep"},
		{"only braces", "a=" + strings.Repeat("{a=", MaxFileBytes/4), "1:195: brackets are nested more than 64 deep"},
		{"brackets in comments and strings count for nothing",
			"# " + strings.Repeat("[", 100) + "\ntitle = '" + strings.Repeat("[", 100) + "'\n" + way(""), ""},
		{"a key of many parts", strings.Repeat("a.", MaxFileBytes/2-4) + "a=1", "1:1: the key has more than 64 parts"},
		{"a header of many parts", "[" + strings.Repeat("a.", MaxFileBytes/2-4) + "a]", "1:2: the key has more than 64 parts"},
		{"a huge array", "a = [" + strings.Repeat("1,", MaxFileBytes/2-8) + "]", "the file holds more than 50000 values"},
		{"many keys", many(MaxValues+1, "k#=1\n"), ""}, // the first errors say enough
		{"many tables", many(MaxValues+1, "[t#]\n"), ""},
		{"as many parts as may be", "[parts]\n" + many(MaxParts, "C# = \"1 uF\"\n") + way(""), ""},
		{"a part too many", "[parts]\n" + many(MaxParts+1, "C# = \"1 uF\"\n") + way(""), "1002:1: [parts] has more than 1000 parts"},
		{"a driver too many", many(MaxDrivers+1, "[driver.d#]\nre = \"5 ohm\"\n") + "[tone]\nnetwork = [\"mark out\"]\n", "129:9: there are more than 64 of [driver.NAME]"},
		{"a way too many", many(MaxWays+1, "[driver.d#]\nre = \"5 ohm\"\n[[way]]\nname = \"w#\"\ndriver = \"d#\"\nnetwork = []\n"), "99:3: there are more than 16 of [[way]]"},
		{"a step too many", "[parts]\nC1 = \"1 uF\"\n" + way(strings.Repeat(`"mark a",`, MaxSteps+1)), `8:1: way "w" has more than 500 steps`},
		{"a target too many", way("") + "target = [" + strings.Repeat(`"low-pass butterworth 1 at 1 kHz",`, MaxTargets+1) + "]\n", `7:283: way "w" has more than 8 targets`},
		{"a control too many", "[tone]\nnetwork = [\"mark out\"]\n" + "[parts]\n" + many(MaxControls+1, "P# = \"1 kohm\"\n") + many(MaxControls+1, "[control.c#]\npart=\"P#\"\nat=0\n"),
			"261:10: there are more than 64 of [control.NAME]"},
		{"brackets in a step", "[parts]\nC1 = \"1 uF\"\n" + way(`"series `+strings.Repeat("(", 900)+`"`), "8:84: brackets are nested more than 64 deep"},
	}
	for _, test := range tests {
		t.Run(test.name, func(t *testing.T) {
			_, _, err := Parse("", []byte(test.src))
			all, ok := errors.AsType[Errors](err)
			switch {
			case err != nil && !ok:
				t.Fatalf("error is a %T, want Errors", err)
			case err == nil && test.want != "":
				t.Errorf("no error, want %q", test.want)
			case err != nil && test.want != "" && !strings.HasPrefix(all[0].Error(), test.want):
				t.Errorf("got  %v\nwant %s", all[0], test.want)
			case err != nil && test.want == "" && !strings.HasPrefix(test.name, "many"):
				t.Error(all[0])
			}
			if err != nil {
				checkErrors(t, all, []byte(test.src))
			}
		})
	}
}

// TestManyErrors checks that the list of errors ends at its bound, and that it is the first ones that stay.
func TestManyErrors(t *testing.T) {
	_, _, err := Parse("f", []byte("[parts]\n"+strings.Repeat("C1 = 1\n", 5000)))
	all, ok := errors.AsType[Errors](err)
	if !ok || len(all) != MaxErrors {
		t.Fatalf("%d errors, want %d", len(all), MaxErrors)
	}
	if got := strings.Count(err.Error(), "\n"); got != MaxErrors-1 {
		t.Errorf("%d line ends in the message, want one line an error", got)
	}
	if !errors.Is(err, all[7]) {
		t.Error("the single errors cannot be found by errors.Is")
	}
}
