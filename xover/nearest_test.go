package xover

import "testing"

// The distances are counted by hand; "ca" to "abc" is Damerau's case of a swap that is touched once more,
// which costs three here, since no place may be touched twice.
func TestEditDistance(t *testing.T) {
	for _, test := range []struct {
		a, b string
		want int
	}{
		{"", "", 0}, {"", "abc", 3}, {"level", "level", 0}, {"levle", "level", 1}, {"lvel", "level", 1},
		{"leevel", "level", 1}, {"label", "level", 2}, {"ca", "abc", 3}, {"höhe", "hohe", 1},
		{"kitten", "sitting", 3}, // the usual example of the distance without swaps, which need none here
	} {
		if got := editDistance([]rune(test.a), []rune(test.b)); got != test.want {
			t.Errorf("%q to %q is %d, want %d", test.a, test.b, got, test.want)
		}
		if got := editDistance([]rune(test.b), []rune(test.a)); got != test.want {
			t.Errorf("%q to %q is %d, want %d", test.b, test.a, got, test.want)
		}
	}
}

func TestNearest(t *testing.T) {
	known := []string{"L1", "C1", "C2", "level", "source", "rated_power"}
	for name, want := range map[string]string{
		"c1": "C1", "C9": "C1", "L9": "L1", "LEVEL": "level", "levl": "level", "ratedpower": "rated_power",
		"x": "", "volume": "", "": "", "level": "",
	} {
		if got := Nearest(name, known); got != want {
			t.Errorf("nearest to %q is %q, want %q", name, got, want)
		}
	}
}

func TestCheckName(t *testing.T) {
	for name, want := range map[string]string{
		"woofer": "", "tief_2": "", "höhe": "",
		"":     "the name is empty; " + nameMend,
		"my t": "the name has ' ' in it; " + nameMend,
		"8":    "the name begins with '8'; " + nameMend,
	} {
		got := ""
		if err := CheckName(name); err != nil {
			got = err.Error()
		}
		if got != want {
			t.Errorf("of %q: %q, want %q", name, got, want)
		}
	}
}
