package chart

import (
	"math"
	"reflect"
	"testing"
)

func TestClipped(t *testing.T) {
	box := rect{0, 0, 10, 10}
	for _, c := range []struct {
		name string
		in   []point
		want [][]point
	}{
		{"inside", []point{{1, 1}, {2, 2}, {3, 1}}, [][]point{{{1, 1}, {2, 2}, {3, 1}}}},
		{"outside", []point{{-5, -5}, {-1, 20}}, nil},
		{"through", []point{{-5, 5}, {15, 5}}, [][]point{{{0, 5}, {10, 5}}}},
		{"out and in again", []point{{5, 5}, {5, 15}, {8, 15}, {8, 5}}, [][]point{{{5, 5}, {5, 10}}, {{8, 10}, {8, 5}}}},
		{"past a corner", []point{{-4, 5}, {5, -4}}, [][]point{{{0, 1}, {1, 0}}}},
		{"one point", []point{{5, 5}}, nil},
	} {
		if got := clipped(c.in, box); !reflect.DeepEqual(got, c.want) {
			t.Errorf("%s: %v, want %v", c.name, got, c.want)
		}
	}
}

// TestThinned: points on straight lines go, corners stay, and nothing moves by more than the slack.
func TestThinned(t *testing.T) {
	var in []point
	for i := range 101 {
		in = append(in, point{float64(i), math.Abs(float64(i) - 50)})
	}
	if got := thinned(in); !reflect.DeepEqual(got, []point{{0, 50}, {50, 0}, {100, 50}}) {
		t.Errorf("a corner becomes %v", got)
	}
	round := circle(point{}, 100)
	kept := thinned(round)
	if kept[0] != round[0] || kept[len(kept)-1] != round[len(round)-1] || len(kept) < 60 {
		t.Errorf("a circle of %d points keeps %d, from %v to %v", len(round), len(kept), kept[0], kept[len(kept)-1])
	}
}

// TestTurned: a phase that falls by 100° from point to point leaves at -180° and comes in at 180° half way, in log
// frequency, between the points at -130° and, a turn on, at 130°.
func TestTurned(t *testing.T) {
	x, y := turned([]float64{100, 200, 400}, []float64{-30, -130, 130})
	edge := 200 * math.Sqrt2
	wantX, wantY := []float64{100, 200, edge, edge, edge, 400}, []float64{-30, -130, -180, math.NaN(), 180, 130}
	for i := range wantX {
		if len(x) != len(wantX) || math.Abs(x[i]-wantX[i]) > 1e-9 || math.Abs(y[i]-wantY[i]) > 1e-9 || math.IsNaN(y[i]) != math.IsNaN(wantY[i]) {
			t.Fatalf("at %v it is %v, want %v at %v", x, y, wantY, wantX)
		}
	}
	if x, _ := turned([]float64{1, 2}, []float64{170, -10}); len(x) != 2 {
		t.Error("half a turn is taken for a whole one")
	}
}

// texts returns what an axis says.
func (a axis) texts() []string {
	var all []string
	for _, t := range a.ticks {
		all = append(all, t.text)
	}
	return all
}

func TestAxes(t *testing.T) {
	write := func(v float64) string { return number(v, 3) }
	for _, c := range []struct {
		name  string
		axis  axis
		texts []string
		minor int
	}{
		// Nominal frequencies of ISO 266; 30, 40, 60 … 90 of each decade are lines alone.
		{"20 Hz to 20 kHz", frequencyAxis(20, 20e3), []string{"20 Hz", "50", "100", "200", "500", "1k", "2k", "5k", "10k", "20 kHz"}, 6 + 6 + 6},
		{"100 Hz to 1 kHz", frequencyAxis(100, 1000), []string{"100 Hz", "200", "500", "1 kHz"}, 6},
		{"from 3 to 50", logAxis(3, 50, false, write), []string{"5", "10", "20", "50"}, 2 + 4 + 2},
		{"over three decades", logAxis(0.01, 10, false, write), []string{"0.01", "0.1", "1", "10"}, 3 * 8},
		{"40 to 85 dB", linearAxis(40, 85, 6, " dB", false), []string{"40", "50", "60", "70", "80 dB"}, 0},
		{"widened", linearAxis(-0.31, 1.02, 5, "", true), []string{"−0.5", "0", "0.5", "1", "1.5"}, 0},
		{"degrees", phaseAxis(180), []string{"−180°", "−90°", "0°", "90°", "180°"}, 4},
	} {
		if got := c.axis.texts(); !reflect.DeepEqual(got, c.texts) || len(c.axis.minor) != c.minor {
			t.Errorf("%s: %q with %d more lines, want %q with %d", c.name, got, len(c.axis.minor), c.texts, c.minor)
		}
	}
	a := frequencyAxis(20, 20e3)
	// lg 20 = 1.30103: 632.456 = 20·√1000 Hz is the middle of three decades.
	if got := a.part(20 * math.Sqrt(1000)); math.Abs(got-0.5) > 1e-12 {
		t.Errorf("the middle of the axis is at %g", got)
	}
	for _, c := range []struct{ v, down, up float64 }{{3.1, 2, 5}, {0.07, 0.05, 0.1}, {99, 50, 200}, {1.5, 1, 2}} {
		if d, u := roundDown(c.v), roundUp(c.v); d != c.down || math.Abs(u/c.up-1) > 1e-12 {
			t.Errorf("%g lies between %g and %g, want %g and %g", c.v, d, u, c.down, c.up)
		}
	}
}

// areaOf is the area that loops enclose: loops within others count against them.
func areaOf(loops [][]point) float64 {
	sum := 0.0
	for _, l := range loops {
		for i := range l {
			j := (i + 1) % len(l)
			sum += (l[i].x*l[j].y - l[j].x*l[i].y) / 2
		}
	}
	return math.Abs(sum)
}

// sampled is a field over n × n points from -1 to 1.
func sampled(n int, f func(x, y float64) float64) *field {
	g := &field{}
	for i := range n {
		g.xs = append(g.xs, -1+2*float64(i)/float64(n-1))
	}
	g.ys = g.xs
	for _, y := range g.ys {
		var row []float64
		for _, x := range g.xs {
			row = append(row, f(x, y))
		}
		g.z = append(g.z, row)
	}
	return g
}

func TestContours(t *testing.T) {
	for _, c := range []struct {
		name  string
		f     func(x, y float64) float64
		level float64
		loops int
		area  float64
		tol   float64
	}{
		{"everything", func(x, y float64) float64 { return 1 }, 0, 1, 4, 1e-12},
		{"nothing", func(x, y float64) float64 { return -1 }, 0, 0, 0, 0},
		// A plane is cut straight: exact but for rounding.
		{"half", func(x, y float64) float64 { return x - 0.3 }, 0, 1, 2 * 0.7, 1e-12},
		{"a corner", func(x, y float64) float64 { return x + y }, 1, 1, 0.5, 1e-12},
		// A circle of radius 0.8 as polygons over cells of 0.05: the chords cut off some h²/8r of each unit of length.
		{"a disc", func(x, y float64) float64 { return 0.64 - x*x - y*y }, 0, 1, math.Pi * 0.64, 0.01},
		{"its outside", func(x, y float64) float64 { return x*x + y*y - 0.64 }, 0, 2, 4 - math.Pi*0.64, 0.01},
		{"two hills", func(x, y float64) float64 { return 0.2 - (math.Abs(x)-0.5)*(math.Abs(x)-0.5) - y*y }, 0.1, 2, 2 * math.Pi * 0.1, 0.01},
	} {
		loops := sampled(41, c.f).above(c.level)
		if len(loops) != c.loops || math.Abs(areaOf(loops)-c.area) > c.tol {
			t.Errorf("%s: %d loops with an area of %g, want %d with %g", c.name, len(loops), areaOf(loops), c.loops, c.area)
		}
	}
	// A saddle over one cell: the middle decides whether the two high corners hang together.
	for level, loops := range map[float64]int{0.4: 1, 0.6: 2} {
		f := &field{[]float64{0, 1}, []float64{0, 1}, [][]float64{{1, 0}, {0, 1}}}
		if got := len(f.above(level)); got != loops {
			t.Errorf("a saddle of middle 0.5, cut at %g, has %d parts, want %d", level, got, loops)
		}
	}
	// A null without bottom between two points is a hole and no more.
	f := sampled(3, func(x, y float64) float64 {
		if x == 0 && y == 0 {
			return math.Inf(-1)
		}
		return 0
	})
	if loops := f.above(-3); len(loops) != 2 || math.Abs(areaOf(loops)-(4-0.5)) > 1e-12 {
		t.Errorf("a null leaves an area of %g in %d loops", areaOf(loops), len(loops))
	}
}
