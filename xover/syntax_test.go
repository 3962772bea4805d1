package xover

import (
	"errors"
	"slices"
	"strings"
	"testing"
)

// TestSyntaxCorners reads one line or two of TOML and looks for one error among those that are said. What
// TOML 1.0.0 allows and forbids is by its specification, sections "Table", "Inline Table" and "Array of
// Tables" (https://toml.io/en/v1.0.0).
func TestSyntaxCorners(t *testing.T) {
	const way = "\n[driver.d]\nimpedance = \"8 ohm\"\n[[way]]\nname = \"w\"\ndriver = \"d\"\nnetwork = []\n"
	for _, test := range []struct{ name, src, want string }{
		{"true for a quantity", "drive = { level = true }", `1:19: level is true or false; write a voltage in quotes, such as "2.83 V"`},
		{"a date for a quantity", "drive = { level = 1970-01-01 }", `1:19: level is a date; write a voltage in quotes, such as "2.83 V"`},
		{"a list for a quantity", "drive = { level = [] }", `1:11: level is an array; write a voltage in quotes, such as "2.83 V"`},
		{"a number for a word", "driver.d.phase = 1", `1:18: phase is a number; write one of "measured", "minimum"`},
		{"hexadecimal", "control.c = { at = 0x10 }", `1:20: at is 0x10; write a number from 0 to 1`},
		{"an integer out of range", "control.c = { at = 0x1FFFFFFFFFFFFFFFF }", `1:20: at is 0x1FFFFFFFFFFFFFFFF; write a number from 0 to 1`},
		{"a float out of range", "control.c = { at = 1e999 }", `1:20: at is 1e999; write a number from 0 to 1`},
		{"a header into an inline table", "driver = { e = { re = \"8 ohm\" } }\n[driver.d]", `2:2: "driver" is defined twice, first in line 1; keep one of them, or give one another name`},
		{"a dotted key into an inline table", "air = {}\nair.density = \"1 kg/m3\"", `2:1: "air" is defined twice, first in line 1; keep one of them, or give one another name`},
		{"a header for an inline table", "air = {}\n[air]", `2:2: "air" is defined twice, first in line 1; keep one of them, or give one another name`},
		{"a table added to an inline array", "way = [ {} ]\n[[way]]", `2:3: "way" is defined twice, first in line 1; keep one of them, or give one another name`},
		{"an array of tables over a table", "[air]\n[[air]]", `2:3: "air" is defined twice, first in line 1; keep one of them, or give one another name`},
		{"a key twice in an inline table", "air = { density = \"1 kg/m3\", density = \"1 kg/m3\" }", `1:30: "density" is defined twice, first in line 1; keep one of them, or give one another name`},
		{"a long name", "air." + strings.Repeat("x", 50) + " = 1", `1:5: [air] has no key "` + strings.Repeat("x", 40) + `…"; its keys are sound_speed, density`},
		{"a line end in a name", "[driver.\"a\\nb\"]\nre = 5", "1:9: [driver.a\ufffdb]: the name has '\\n' in it; " + nameMend},
		{"a line end in the name of a part", "[parts]\n\"a\\u001bb\" = \"1\"", `2:14: a` + "\ufffd" + `b: "1" has no unit; write a value with its unit, such as "4.7 uF"`},
		{"a table in a table that comes later", "[driver.d.box]\nkind = \"open\"\n[driver.d]\nre = \"8 ohm\"\n[[way]]\nname = \"w\"\ndriver = \"d\"\nnetwork = []", ""},
		{"a long string with quotes and brackets in it", "title = \"\"\"" + strings.Repeat("[\\\"\"", 99) + "\\\"\"\"\"" + way, ""},
		{"a string that escapes its quote", "title = \"" + strings.Repeat("\\\"[", 99) + "\"" + way, ""},
		{"a literal string that ends in a backslash", "title = '" + strings.Repeat("[", 99) + "\\'" + way, ""},
		{"a string that does not end", "title = \"\"\"[[[", "1:14: this is not TOML: multiline basic string not terminated by \"\"\"; " + syntaxMend},
		{"a string that does not end on its line", "title = '[[[", "1:12: this is not TOML: unterminated literal string; " + syntaxMend},
	} {
		t.Run(test.name, func(t *testing.T) {
			_, _, err := Parse("", []byte(test.src))
			if test.want == "" {
				if err != nil {
					t.Error(err)
				}
				return
			}
			all, _ := errors.AsType[Errors](err)
			if !slices.ContainsFunc(all, func(e *Error) bool { return e.Error() == test.want }) {
				t.Errorf("got  %v\nwant %s", err, test.want)
			}
		})
	}
}

// TestPosition counts lines and columns by hand, forward, backward and outside the text.
func TestPosition(t *testing.T) {
	l := newLocator([]byte("aµb\r\n\nΩ"))
	for _, test := range []struct {
		offset int
		want   Position
	}{
		{0, Position{1, 1}}, {1, Position{1, 2}}, {3, Position{1, 3}}, {1, Position{1, 2}}, {6, Position{2, 1}},
		{7, Position{3, 1}}, {9, Position{3, 2}}, {3, Position{1, 3}}, {99, Position{3, 2}}, {-1, Position{1, 1}},
	} {
		if got := l.position(test.offset); got != test.want {
			t.Errorf("offset %d is at %v, want %v", test.offset, got, test.want)
		}
	}
}
