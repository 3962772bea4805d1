package sim

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"sixdown/sim/driver"
	"sixdown/sim/field"
	"sixdown/xover"
)

// radiating returns the curves of a source of 1 Pa on the axis whose pressure at θ from it is gain(cos θ).
func radiating(gain func(cos float64) float64) *Curves {
	squares := map[direction][]float64{}
	for _, d := range directions() {
		p := gain(math.Cos(float64(d.deg) * math.Pi / 180))
		squares[d] = []float64{p * p}
	}
	return curvesOf(squares, 1)
}

// pascalSPL is the level of 1 Pa: 20 lg(1/20e-6).
var pascalSPL = 20 * math.Log10(1/driver.ReferencePressure)

// TestWeights: the weights that ANSI/CTA-2034-A prints for the sound power, by the angle from the axis (from memory, as
// they are in the literature on measurements every 10°). tol is a unit of the last digit. By hand, from these figures:
// four directions share each angle but 0° and 180°, and all add up to 2·0.000604486 + 4·(2·0.114580828 + 0.019629373).
func TestWeights(t *testing.T) {
	printed := [10]float64{0.000604486, 0.004730189, 0.008955027, 0.012387354, 0.014989611, 0.016868154, 0.018165962, 0.019006744, 0.019477787, 0.019629373}
	sum := 0.0
	for _, d := range directions() {
		off := max(d.deg, -d.deg)
		near(t, "weight", d.weight(), printed[min(off, 180-off)/10], 1e-9)
		sum += d.weight()
	}
	near(t, "the sum", sum, 0.996373088, 70e-9)
	if n := len(directions()); n != 70 {
		t.Errorf("%d directions, want 70: 36 in each plane, 0 and 180 shared", n)
	}
}

// TestCurvesAlikeAllRound: where all directions are equal, so are all means, and the indexes are 0.
func TestCurvesAlikeAllRound(t *testing.T) {
	c := radiating(func(float64) float64 { return 1 })
	for name, got := range c.named() {
		near(t, name, got, pascalSPL, 1e-12)
	}
	near(t, "early reflections DI", c.EarlyReflectionsDI[0], 0, 1e-12)
	near(t, "sound power DI", c.SoundPowerDI[0], 0, 1e-12)
}

// named returns the levels at the first frequency.
func (c *Curves) named() map[string]float64 {
	return map[string]float64{
		"on axis": c.OnAxis[0], "listening window": c.ListeningWindow[0], "floor": c.Floor[0], "ceiling": c.Ceiling[0],
		"front wall": c.FrontWall[0], "side walls": c.SideWalls[0], "rear wall": c.RearWall[0],
		"early reflections": c.EarlyReflections[0], "sound power": c.SoundPower[0], "in room": c.InRoom[0],
	}
}

// TestCurvesOfKnownSources: by weights that are the parts of the sphere on both sides of an orbit, the mean of a square
// q(cos ψ) is in the limit of many angles
//
//	(4/2π) ∫ q sin ψ/√(1 + sin² ψ) dψ = (2/π) ∫ q(u)/√(2 - u²) du, u from -1 to 1.
//
// By hand ∫ du/√(2 - u²) = π/2 and ∫ u² du/√(2 - u²) = [arcsin(u/√2) - (u/2)√(2 - u²)] = π/2 - 1. So of a dipole, q = u², the
// mean is 1 - 2/π, where the true one is 1/3; of a cardioid, q = (1 + u)²/4, it is a quarter of 1 + (1 - 2/π). tol, at
// steps of 10°: 6·0.0006 of weight that is wanting on the axis takes up to 0.03 dB, the midpoint rule, q”h²/24, gives
// up to 0.01 dB. The bands of a sphere about the axis would give 4.76 dB for both and fail.
func TestCurvesOfKnownSources(t *testing.T) {
	for _, source := range []struct {
		name string
		gain func(cos float64) float64
		mean float64
	}{
		{"cardioid", func(cos float64) float64 { return (1 + cos) / 2 }, (2 - 2/math.Pi) / 4},
		{"dipole", func(cos float64) float64 { return cos }, 1 - 2/math.Pi},
	} {
		c := radiating(source.gain)
		near(t, source.name+": axis less sound power", c.OnAxis[0]-c.SoundPower[0], -10*math.Log10(source.mean), 0.03)
	}
	// A dipole by hand: squares of cosines at the standard's angles.
	sq := func(degs ...float64) (mean float64) {
		for _, d := range degs {
			mean += math.Pow(math.Cos(d*math.Pi/180), 2) / float64(len(degs))
		}
		return mean
	}
	window := sq(0, 10, 10, 10, 10, 20, 20, 30, 30)
	floor, ceiling, front, side := sq(20, 30, 40), sq(40, 50, 60), sq(0, 10, 10, 20, 20, 30, 30), sq(40, 50, 60, 70, 80)
	rear := sq(0, 10, 10, 20, 20, 30, 30, 40, 40, 50, 50, 60, 60, 70, 70, 80, 80, 90, 90)
	early := (floor + ceiling + front + side + rear) / 5
	c := radiating(func(cos float64) float64 { return cos })
	power := math.Pow(10, (c.SoundPower[0]-pascalSPL)/10)
	for name, want := range map[string]float64{
		"on axis": 1, "listening window": window, "floor": floor, "ceiling": ceiling, "front wall": front, "side walls": side,
		"rear wall": rear, "early reflections": early, "in room": 0.12*window + 0.44*early + 0.44*power,
	} {
		near(t, name, c.named()[name], pascalSPL+10*math.Log10(want), 1e-12)
	}
	near(t, "early reflections DI", c.EarlyReflectionsDI[0], 10*math.Log10(window/early), 1e-12)
	near(t, "sound power DI", c.SoundPowerDI[0], 10*math.Log10(window/power), 1e-12)
}

// TestCurvesOfOneDirection: of a loudspeaker that is heard in one direction alone, with the square of a pascal there, a
// mean over n directions is 1/n where the direction is among them and 0 elsewhere. Which are among them is as remembered
// of the standard: h is right and v up, in degrees.
func TestCurvesOfOneDirection(t *testing.T) {
	h := func(degs ...int) (ds []direction) {
		for _, deg := range degs {
			ds = append(ds, direction{Horizontal, deg})
		}
		return ds
	}
	v := func(degs ...int) (ds []direction) {
		for _, deg := range degs {
			ds = append(ds, direction{Vertical, deg})
		}
		return ds
	}
	members := map[string][]direction{
		"on axis":          h(0),
		"listening window": append(h(0, -10, 10, -20, 20, -30, 30), v(-10, 10)...),
		"floor":            v(-20, -30, -40),
		"ceiling":          v(40, 50, 60),
		"front wall":       h(0, -10, 10, -20, 20, -30, 30),
		"side walls":       h(-40, -50, -60, -70, -80, 40, 50, 60, 70, 80),
		"rear wall":        h(180, -90, -100, -110, -120, -130, -140, -150, -160, -170, 90, 100, 110, 120, 130, 140, 150, 160, 170),
	}
	for _, one := range directions() {
		squares := map[direction][]float64{}
		for _, d := range directions() {
			squares[d] = []float64{0}
		}
		squares[one] = []float64{1}
		got := curvesOf(squares, 1).named()
		for name, among := range members {
			want := 0.0
			if slices.Contains(among, one) {
				want = 1 / float64(len(among))
			}
			near(t, fmt.Sprintf("%s heard at %v", name, one), math.Pow(10, (got[name]-pascalSPL)/10), want, 1e-12)
		}
	}
}

// twoPoints is two equal flat drivers in parallel, above and below the origin by half of apart.
func twoPoints(apart float64) *xover.Design {
	a, b := plainDriver("a", 8, 90), plainDriver("b", 8, 90)
	a.At[1], b.At[1] = apart/2, -apart/2
	return &xover.Design{Drive: xover.Drive{Level: 2.83}, Listen: xover.Listen{Distance: 1000}, Drivers: []xover.Driver{a, b}, Ways: []xover.Way{{Name: "up", Driver: "a"}, {Name: "down", Driver: "b"}}}
}

// TestPolarOfTwoPoints: two equal points d apart give |cos(πd/λ·sin θ)| of what they give ahead, far away: with d = λ
// a null at 30° and ±1 at 90°; in the plane between them nothing changes. 1000 m off, the paths differ from parallel ones
// by d²/8r, a millionth of the wavelength.
func TestPolarOfTwoPoints(t *testing.T) {
	s := mustNew(t, twoPoints(0.343))
	degs := []float64{-90, -45, 0, 10, 20, 40, 60, 90}
	freqs := []float64{500, 1000}
	p, err := s.Polar(freqs, Vertical, degs)
	if err != nil {
		t.Fatal(err)
	}
	level, err := s.Polar(freqs, Horizontal, degs)
	if err != nil {
		t.Fatal(err)
	}
	for i, deg := range degs {
		for k, f := range freqs {
			x := math.Pi * f / 1000 * math.Sin(deg*math.Pi/180)
			want := 20 * math.Log10(math.Abs(math.Cos(x)))
			if math.Abs(math.Cos(x)) < 1e-9 { // the null at 500 Hz to the side, filled by 20 lg(d/2r): the nearer is louder
				if math.Abs(p.LevelDB[i][k]-20*math.Log10(0.343/2/1000)) > 0.01 {
					t.Errorf("%g° at %g Hz: %g dB, want the null that 1/r leaves", deg, f, p.LevelDB[i][k])
				}
				continue
			}
			near(t, "vertical", p.LevelDB[i][k], want, 1e-3)
			near(t, "horizontal", level.LevelDB[i][k], 0, 1e-3)
		}
	}
}

// TestCurvesOfADesign: drivers at one place that radiate to all sides alike make all curves equal; it is the model
// that says so, or one measurement, or measurements at all angles.
func TestCurvesOfADesign(t *testing.T) {
	s := mustNew(t, twoPoints(0))
	c, err := s.Curves([]float64{100, 1000})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "sound power DI", c.SoundPowerDI[1], 0, 1e-9)
	near(t, "sound power", c.SoundPower[1], 90+20*math.Log10(2)-60, 1e-9) // two of 90 dB at 1 m, 1000 m away
	if c.Basis != "model" || len(c.Missing) > 0 || len(c.Warnings) > 0 {
		t.Errorf("basis %q, missing %q, warnings %q", c.Basis, c.Missing, c.Warnings)
	}
	d, src := measuredAround(field.Point{}, map[float64]float64{-20: 1, 20: 1, 40: 1}, 1)
	s, err = New(d, files(src))
	if err != nil {
		t.Fatal(err)
	}
	if c, err = s.Curves([]float64{1000}); err != nil {
		t.Fatal(err)
	}
	want := []string{
		`driver "d": beyond 20° left it is taken as at that angle`,
		`driver "d": beyond 40° right it is taken as at that angle`,
		`driver "d": what is down was not measured and is taken as what is up`,
		`driver "d": beyond 30° down it is taken as at that angle`,
		`driver "d": beyond 30° up it is taken as at that angle`,
	}
	slices.Sort(want)
	slices.Sort(c.Missing)
	if c.Basis != "mixed" || !slices.Equal(c.Missing, want) {
		t.Errorf("basis %q, missing %q", c.Basis, c.Missing)
	}
	for _, plane := range []struct {
		to *[]xover.AngledFile
		at func(float64) field.Angle
	}{{&d.Drivers[0].Horizontal, Horizontal.Angle}, {&d.Drivers[0].Vertical, Vertical.Angle}} {
		*plane.to = []xover.AngledFile{{AngleDeg: -90, File: "0"}, {AngleDeg: 0, File: "0"}, {AngleDeg: 180, File: "0"}}
	}
	if s, err = New(d, files(src)); err != nil {
		t.Fatal(err)
	}
	if c, err = s.Curves([]float64{1000}); err != nil {
		t.Fatal(err)
	}
	if c.Basis != "measured" || len(c.Missing) > 0 || len(c.Warnings) > 0 {
		t.Errorf("basis %q, missing %q, warnings %q", c.Basis, c.Missing, c.Warnings)
	}
	near(t, "sound power DI, measured", c.SoundPowerDI[0], 0, 1e-9)
}

func TestCurvesWithoutASum(t *testing.T) {
	d := twoPoints(0)
	d.Drivers[0].HasSensitivity = false
	s := mustNew(t, d)
	if _, err := s.Curves([]float64{1000}); err == nil {
		t.Error("curves without a sum")
	}
	if _, err := s.Polar([]float64{1000}, Vertical, []float64{0}); err == nil {
		t.Error("a polar map without a sum")
	}
}

// TestTurned: a System that is turned answers straight ahead as it would have at that angle.
func TestTurned(t *testing.T) {
	s := mustNew(t, twoPoints(0.3))
	angle := field.Angle{HorizontalDeg: 10, VerticalDeg: 35}
	turned, err := s.Turned(angle)
	if err != nil {
		t.Fatal(err)
	}
	want, got := mustField(t, s, []float64{300, 3000}, angle)[0], mustPredict(t, turned, 300, 3000)
	if !slices.Equal(got.Sum, want.Sum) || got.Angle != angle {
		t.Errorf("got %v at %v, want %v", got.Sum, got.Angle, want.Sum)
	}
	back := mustField(t, turned, []float64{300, 3000}, field.Angle{HorizontalDeg: -10, VerticalDeg: -35})[0]
	if ahead := mustPredict(t, s, 300, 3000); !slices.Equal(back.Sum, ahead.Sum) {
		t.Errorf("turned back: got %v, want %v", back.Sum, ahead.Sum)
	}
	if _, err := s.Turned(field.Angle{VerticalDeg: math.Inf(1)}); err == nil {
		t.Error("an infinite angle is accepted")
	}
}
