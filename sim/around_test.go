package sim

import (
	"fmt"
	"math"
	"math/cmplx"
	"strings"
	"testing"

	"sixdown/sim/field"
	"sixdown/xover"
)

// fileOf writes what a microphone records of a source at at, which radiates gain(angle) into the angle: 90 dB at 1 m,
// the flight to the microphone at mic in the phase at 343 m/s.
func fileOf(gain float64, at, mic field.Point) string {
	var b strings.Builder
	r := at.Distance(mic)
	for i := range 61 {
		f := 200 * math.Pow(50, float64(i)/60)
		phase := math.Remainder(-360*f*r/343, 360)
		if gain < 0 {
			phase = math.Remainder(phase+180, 360)
		}
		fmt.Fprintf(&b, "%.12g %.12g %.12g\n", f, 90+20*math.Log10(math.Abs(gain)/r), phase)
	}
	return b.String()
}

// turnedMic is where the microphone is, 1 m from the origin, when the cabinet is turned the other way.
func turnedMic(a field.Angle) field.Point { return field.Listener{Distance: 1, Angle: a}.Ear() }

// measuredAround is a driver beside the origin, its files from microphones at ±20° and 40° horizontally and 30°
// vertically; its strength at them is as in gains.
func measuredAround(at field.Point, gains map[float64]float64, up float64) (*xover.Design, map[string]string) {
	d := xover.Driver{Name: "d", Resistance: 8, At: at, ResponseFile: "0"}
	src := map[string]string{"0": fileOf(1, at, turnedMic(field.Angle{}))}
	for _, deg := range []float64{-20, 0, 20, 40} {
		name := fmt.Sprint(deg)
		d.Horizontal = append(d.Horizontal, xover.AngledFile{AngleDeg: deg, File: name})
		if deg != 0 {
			src[name] = fileOf(gains[deg], at, turnedMic(field.Angle{HorizontalDeg: deg}))
		}
	}
	d.Vertical = []xover.AngledFile{{AngleDeg: 0, File: "0"}, {AngleDeg: 30, File: "up"}}
	src["up"] = fileOf(up, at, turnedMic(field.Angle{VerticalDeg: 30}))
	return &xover.Design{Drive: xover.Drive{Level: 2.83}, Listen: xover.Listen{Distance: 1}, Drivers: []xover.Driver{d}, Ways: []xover.Way{{Name: "w", Driver: "d"}}}, src
}

// TestMeasuredAround: where the microphone was, the ear hears what was measured, flight included; elsewhere on the
// sphere the flight is that from the driver's place, which for a source alike to all sides is the whole truth.
func TestMeasuredAround(t *testing.T) {
	at := field.Point{0.05, -0.15, -0.02}
	freqs := []float64{200, 431, 1000, 3500, 10000}
	for _, c := range []struct {
		name  string
		gains map[float64]float64
		up    float64
		angle field.Angle
		far   float64 // m
		want  float64 // strength
	}{
		{"on the axis", map[float64]float64{-20: 0.8, 20: 0.5, 40: 0.25}, 0.5, field.Angle{}, 1, 1},
		{"at 20°", map[float64]float64{-20: 0.8, 20: 0.5, 40: 0.25}, 0.5, field.Angle{HorizontalDeg: 20}, 1, 0.5},
		{"at -20°", map[float64]float64{-20: 0.8, 20: 0.5, 40: 0.25}, 0.5, field.Angle{HorizontalDeg: -20}, 1, 0.8},
		{"up", map[float64]float64{-20: 0.8, 20: 0.5, 40: 0.25}, 0.3, field.Angle{VerticalDeg: 30}, 1, 0.3},
		{"at 30°: the mean in dB", map[float64]float64{-20: 0.8, 20: 0.5, 40: 0.125}, 0.5, field.Angle{HorizontalDeg: 30}, 1, 0.25},
		{"farther", map[float64]float64{-20: 0.8, 20: 0.5, 40: 0.25}, 0.5, field.Angle{HorizontalDeg: 20}, 4, 0.5},
		{"alike to all sides, 11° right", map[float64]float64{-20: 1, 20: 1, 40: 1}, 1, field.Angle{HorizontalDeg: 11}, 1, 1},
		{"alike to all sides, 13° right, 9° up", map[float64]float64{-20: 1, 20: 1, 40: 1}, 1, field.Angle{HorizontalDeg: 13, VerticalDeg: 9}, 1, 1},
	} {
		d, src := measuredAround(at, c.gains, c.up)
		d.Listen.Distance = c.far
		s, err := New(d, files(src))
		if err != nil {
			t.Fatal(err)
		}
		r := mustField(t, s, freqs, c.angle)[0]
		ear := field.Listener{Distance: c.far, Angle: c.angle}.Ear()
		// The files hold the flight over the microphone's 1 m; what the ear is farther is taken out.
		flight := at.Distance(ear) - (c.far - 1)
		for k, f := range freqs {
			want := cmplx.Rect(20e-6*math.Pow(10, 90./20)*c.want/at.Distance(ear), -2*math.Pi*f*flight/343)
			// Of what the interpolation between rows is off, most is common to all tables.
			if e := cmplx.Abs(r.Sum[k]-want) / cmplx.Abs(want); e > 1e-3 {
				t.Errorf("%s at %g Hz: got %v, want %v, off by %.2g", c.name, f, r.Sum[k], want, e)
			}
		}
		if len(r.Warnings) > 0 {
			t.Errorf("%s: warnings %q", c.name, r.Warnings)
		}
	}
}

// TestMeasuredAroundWarnings: where nothing was measured, that is said, once a driver.
func TestMeasuredAroundWarnings(t *testing.T) {
	d, src := measuredAround(field.Point{}, map[float64]float64{-20: 1, 20: 1, 40: 1}, 1)
	s, err := New(d, files(src))
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		angle field.Angle
		want  string
	}{
		{field.Angle{HorizontalDeg: 60}, `driver "d": beyond 40° right it is taken as at that angle, which is invented`},
		{field.Angle{VerticalDeg: -10}, `driver "d": what is down was not measured and is taken as what is up, which is invented`},
	} {
		if got := mustField(t, s, []float64{1000}, c.angle)[0].Warnings; len(got) != 1 || got[0] != c.want {
			t.Errorf("%v: warnings %q, want %q", c.angle, got, c.want)
		}
	}
	d.Drivers[0].HasMic = true
	d.Drivers[0].At = [3]float64{0, 0.1, 0}
	if _, err := New(d, files(src)); err == nil || !strings.Contains(err.Error(), "about which the cabinet was turned") {
		t.Errorf("a microphone at the origin: %v", err)
	}
}
