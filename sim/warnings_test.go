package sim

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"sixdown/xover"
)

// Two of a kind share their files, and what is odd about a file, and where it ends, is told once; so is where it ends
// when what is asked for goes farther in one answer than in another.
func TestWarningsOfAFileAreToldOnce(t *testing.T) {
	pair := func(name string) xover.Driver {
		return xover.Driver{Name: name, ImpedanceFile: "w.zma", ResponseFile: "w.frd"}
	}
	d := &xover.Design{
		Drive:   xover.Drive{Level: 2.83},
		Drivers: []xover.Driver{pair("a"), pair("b"), pair("c")},
		Ways:    []xover.Way{{Name: "low", Drivers: inParallel("a", "b")}, {Name: "high", Driver: "c"}},
	}
	s, err := New(d, files(map[string]string{
		"w.zma": "0 8 0\n100 8 0\n1000 8 0\n10000 8 0\n",
		"w.frd": "0 0 0\n100 90 0\n1000 90 0\n10000 90 0\n",
	}))
	if err != nil {
		t.Fatal(err)
	}
	if got, want := s.Warnings(), []string{"w.zma:1: the row at 0 Hz was passed over", "w.frd:1: the row at 0 Hz was passed over"}; !slices.Equal(got, want) {
		t.Errorf("got %q, want %q", got, want)
	}
	one, other := mustPredict(t, s, 50).Warnings, mustPredict(t, s, 20).Warnings
	if len(one) != 2 || !slices.Equal(one, other) {
		t.Errorf("to 50 Hz %q, to 20 Hz %q; want two, the same", one, other)
	}
}

// A driver measured at many angles has one line on phases that cannot be followed, the axis and all angles together, and
// one on what all its files have in common; where flight time is in none, nobody is told to take it out.
func TestDoubtsOfADriverAreOneLine(t *testing.T) {
	// Minimum phase of a flat level, so no flight time; jumps at 1 and 2 kHz, where the level is as everywhere.
	var b strings.Builder
	fmt.Fprintln(&b, "0 0 0")
	for i := range 121 {
		f := 200 * math.Pow(50, float64(i)/120)
		phase := 0.0
		if f > 1e3 && f < 2e3 {
			phase = 180
		}
		fmt.Fprintf(&b, "%.9g 90 %g\n", f, phase)
	}
	src := map[string]string{}
	d := xover.Driver{Name: "d", Resistance: 8, ResponseFile: "0.frd"}
	for deg := 0; deg <= 40; deg += 10 {
		name := fmt.Sprintf("%d.frd", deg)
		src[name] = b.String()
		d.Horizontal = append(d.Horizontal, xover.AngledFile{AngleDeg: float64(deg), File: name})
	}
	s, err := New(&xover.Design{Drive: xover.Drive{Level: 2.83}, Drivers: []xover.Driver{d}, Ways: []xover.Way{{Name: "w", Driver: "d"}}}, files(src))
	if err != nil {
		t.Fatal(err)
	}
	// 2 jumps in 5 files; 200·50^(k/120) passes 1 kHz at k = 50, line 52.
	want := []string{
		"0.frd:1: the row at 0 Hz was passed over",
		"10.frd:1: the row at 0 Hz was passed over; so in 3 more file(s)",
		"0.frd:52: the phase turns by more than 135 degrees from one row to the next near 1021 Hz, and in 9 more places of 5 tables, so which way it went is a guess; measure in finer steps",
	}
	got := s.Warnings()
	slices.Sort(got)
	slices.Sort(want)
	if !slices.Equal(got, want) {
		t.Errorf("got  %q\nwant %q", got, want)
	}
}
