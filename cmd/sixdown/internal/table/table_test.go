package table

import (
	"strings"
	"testing"
	"unicode/utf8"
)

func example() *Table {
	t := New(Column{Name: "f", Unit: "Hz"},
		Column{Group: "low", Name: "gain", Unit: "dB"}, Column{Group: "low", Name: "phase", Unit: "deg"},
		Column{Group: "a wide title", Name: "SPL", Unit: "dB"},
		Column{Name: "say", Left: true})
	t.Row("1000", "-3.01", "-45.0", "88", "yes")
	t.Row("20000", "-26.0", "-87", "62", "")
	return t
}

func TestText(t *testing.T) {
	want := `
            low        a wide title
    f    gain  phase            SPL   say
   Hz      dB    deg             dB
 1000   -3.01  -45.0             88   yes
20000   -26.0    -87             62
`
	if got := example().Text(100); got != want[1:] {
		t.Errorf("got\n%swant\n%s", got, want[1:])
	}
}

// TestFold: what does not fit follows under the first column again, and a group is not torn apart.
func TestFold(t *testing.T) {
	want := `
            low
    f    gain  phase
   Hz      dB    deg
 1000   -3.01  -45.0
20000   -26.0    -87

        a wide title
    f            SPL   say
   Hz             dB
 1000             88   yes
20000             62
`
	if got := example().Text(27); got != want[1:] {
		t.Errorf("got\n%swant\n%s", got, want[1:])
	}
}

// TestWidth: no line is wider than asked for, as long as no single group is, and none ends in a blank.
func TestWidth(t *testing.T) {
	// The first column and the widest group: 5 + 3 + 12.
	for width := 20; width < 60; width++ {
		for line := range strings.Lines(example().Text(width)) {
			line = strings.TrimSuffix(line, "\n")
			if n := utf8.RuneCountInString(line); n > width || strings.HasSuffix(line, " ") {
				t.Errorf("width %d: a line of %d: %q", width, n, line)
			}
		}
	}
}

// TestSigns: a sign of two bytes is one character wide.
func TestSigns(t *testing.T) {
	tab := New(Column{Name: "part", Left: true}, Column{Name: "value"})
	tab.Row("C1", "4.7 µF")
	tab.Row("R1", "470 kΩ")
	if got, want := tab.Text(80), "part    value\nC1     4.7 µF\nR1     470 kΩ\n"; got != want {
		t.Errorf("got\n%swant\n%s", got, want)
	}
}

func TestRowOfAnotherLength(t *testing.T) {
	defer func() {
		if recover() == nil {
			t.Error("no panic")
		}
	}()
	example().Row("1")
}
