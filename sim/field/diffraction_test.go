package field

import (
	"fmt"
	"math"
	"math/cmplx"
	"testing"
)

const speed = 343.0

func db(z complex128) float64 { return 20 * math.Log10(cmplx.Abs(z)) }

// ear returns an ear at a distance, turned to the right and up.
func ear(distance, right, up float64) Point {
	return Listener{Distance: distance, SoundSpeed: speed, Angle: Angle{HorizontalDeg: right, VerticalDeg: up}}.Ear()
}

// disc returns a baffle of n equal edges around a circle of radius a.
func disc(a float64, n int, index float64) *Baffle {
	var corners [][2]float64
	for i := range n {
		sin, cos := math.Sincos(2 * math.Pi * float64(i) / float64(n))
		corners = append(corners, [2]float64{a * cos, a * sin})
	}
	return newBaffle(corners, index)
}

// Small against the wave, a cabinet radiates to all sides alike, half of what an infinite baffle gives: -6.02 dB.
func TestTowardDC(t *testing.T) {
	b := NewBaffle(0.22, 0.38)
	for _, at := range []Point{{}, {0.03, -0.09, -0.02}, {0.1, 0.18, 0}} {
		for _, radius := range []float64{0, 0.05} {
			for right := -180.0; right <= 180; right += 15 {
				for _, up := range []float64{-45, 0, 90} {
					d := b.Diffraction(at, radius, ear(2, right, up), speed)
					if got := d.At(1e-3); cmplx.Abs(got-0.5) > 1e-4 { // delays of some ms at 6 mrad/s
						t.Errorf("%v, radius %g, %g° right, %g° up: got %.6g, want 0.5", at, radius, right, up, got)
					}
				}
			}
		}
	}
}

// firstOrder returns the diffraction with what goes from edge to edge left out.
func firstOrder(b *Baffle, at Point, ear Point) *Diffraction {
	d := &Diffraction{speed: speed, reach: at.Distance(ear)}
	if ear[2] >= 0 {
		d.direct = 1
	}
	b.layOut(d, at, ear)
	for i := range b.edges {
		along, in := b.edges[i].local(at)
		d.illuminate(newListening(&b.edges[i], at, 0, ear, b.index), along, in, 1)
	}
	return d
}

// Toward DC the pressure about a rigid wedge of the open angle θ is 2π/θ of the free field's: the static limit of
// Biot and Tolstoy's solution (derived). Over the half space's 2 that is π/θ: 2/3 or -3.52 dB for a box's edge,
// 1/2 for a thin sheet, 1 for none.
func TestStraightEdge(t *testing.T) {
	// A baffle so long that its other edges are out of reach, the source 2 mm from one of them, at 100 Hz: k is
	// 1.83, so the edge is 0.004 of 1/k away and the others 300.
	const f = 100
	for _, tt := range []struct{ index, want float64 }{{2. / 3, 2. / 3}, {0.5, 0.5}, {1, 1}} {
		b := newBaffle([][2]float64{{0.002, 160}, {-160, 160}, {-160, -160}, {0.002, -160}}, tt.index)
		for right := -80.0; right <= 90; right += 10 {
			d := firstOrder(b, Point{}, ear(1, right, 0))
			// The way to the limit goes as √0.004, less for a box's edge, and the other edges' part as 1/√300.
			if got := cmplx.Abs(d.At(f)); math.Abs(got-tt.want) > 0.06 {
				t.Errorf("wedge index %.3g, %g° right: got %.4f, want %.4f", tt.index, right, got, tt.want)
			}
		}
	}
}

// The edge integral of Svensson and others (1999), eqs. (4) to (8), as it stands there, in the frequency domain:
// -ν/4π ∫ β·e^{-jk(m+l)}/(ml) dz with all four β, by the midpoint rule.
func TestEdgeIntegral(t *testing.T) {
	b := NewBaffle(0.22, 0.38)
	at := Point{0.02, 0.05, 0}
	for _, e := range []Point{ear(2, 0, 0), ear(2, 35, 0), ear(1, -70, 20), ear(1, 10, -85), ear(1, 88, 0)} {
		d := firstOrder(b, at, e)
		for _, f := range []float64{100, 1000, 3000, 8000} {
			k := 2 * math.Pi * f / speed
			var want complex128
			for i := range b.edges {
				want += svensson(&b.edges[i], b.index, at, e, k)
			}
			r := at.Distance(e)
			want /= 2 * cmplx.Rect(1/r, -k*r)
			// The taps take 0.2 % of a part of up to 0.5, and pieces are straight in delay though 5 mm long.
			if got := d.At(f) - 1; cmplx.Abs(got-want) > 2e-3 {
				t.Errorf("ear %.3v, %g Hz: got %.5f, want %.5f", e, f, got, want)
			}
		}
	}
}

// svensson returns the edge's part of the pressure of a source whose free field is e^{-jkr}/r.
func svensson(e *edge, index float64, source, ear Point, k float64) complex128 {
	sz, sr := e.local(source)
	ez, in := e.local(ear)
	er, theta := math.Hypot(in, ear[2]), math.Atan2(ear[2], in)
	const n = 100000
	var sum complex128
	for i := range n {
		z := e.length * (float64(i) + 0.5) / n
		m, l := math.Hypot(z-sz, sr), math.Hypot(z-ez, er)
		cosh := (m*l + (z-sz)*(z-ez)) / (sr * er)
		coshNu := math.Cosh(index * math.Acosh(math.Max(1, cosh)))
		beta := 0.0
		for _, phi := range []float64{math.Pi + theta, math.Pi + theta, math.Pi - theta, math.Pi - theta} { // the source is at the angle 0
			beta += math.Sin(index*phi) / (coshNu - math.Cos(index*phi))
		}
		sum += complex(beta/(m*l), 0) * cmplx.Rect(1, -k*(m+l))
	}
	return sum * complex(-index/(4*math.Pi)*e.length/n, 0)
}

// Nothing jumps where the ear goes through the plane of the baffle, though the direct sound ends there; and far
// above, half of it is left (half a wave is beyond the edge), less what the other edges add.
func TestThroughThePlane(t *testing.T) {
	b := NewBaffle(0.22, 0.38)
	for _, radius := range []float64{0, 0.04} {
		for _, f := range []float64{50, 500, 2000, 6000} {
			before := b.Diffraction(Point{0.01, 0.05, 0}, radius, Point{2, 0.1, 1e-7}, speed).At(f)
			behind := b.Diffraction(Point{0.01, 0.05, 0}, radius, Point{2, 0.1, -1e-7}, speed).At(f)
			// A piston's nineteen patches stand for its Bessel function.
			if cmplx.Abs(before-behind) > 4e-3 {
				t.Errorf("radius %g, %g Hz: %.5f before and %.5f behind", radius, f, before, behind)
			}
		}
	}
	// A large baffle, a point close to one edge: of the others 1/√(kρ) is left.
	got := NewBaffle(4, 4).Diffraction(Point{1.9, 0, 0}, 0, Point{30, 0, 0}, speed).At(10e3)
	near(t, "at grazing incidence", cmplx.Abs(got), 0.5, 0.06)
}

// A circular face, the source at its middle, seen from afar on its axis. The simple ring of secondary sources
// gives |1 - ½e^{-jka}| (derived, after J. Vanderkooy, J. Audio Eng. Soc. 39(12), 923–933, 1991). A right-angled
// edge is 2/√3 as strong as that ring when seen from the front, -(1/2π)·cot(π/6) = -1/√3 in all (derived from
// the wedge); the rest, which goes from edge to edge, falls off.
func TestCircularFace(t *testing.T) {
	const a = 0.15
	d := disc(a, 96, boxEdge).Diffraction(Point{}, 0, ear(200, 0, 0), speed)
	at := func(ka float64) float64 { return cmplx.Abs(d.At(ka * speed / (2 * math.Pi * a))) }
	near(t, "ka = 0.001", at(0.001), 0.5, 1e-3)
	for _, tt := range []struct{ ka, ring, dB float64 }{
		// Tolerances: the edge is 2/√3 as strong, so 1.577 for 1.5 at the top, and 0.423 for 0.5 at the bottom.
		{math.Pi / 2, 0.97, 0.5}, {math.Pi, 3.52, 0.5}, {3 * math.Pi / 2, 0.97, 0.5}, {2 * math.Pi, -6.02, 1.5},
	} {
		near(t, fmt.Sprintf("ka = %.4g, over the ring's dB", tt.ka), 20*math.Log10(at(tt.ka)), tt.ring, tt.dB)
	}
	for ka := 30.0; ka < 31; ka += 0.1 {
		want := cmplx.Abs(1 - cmplx.Rect(1/math.Sqrt(3), -ka))
		near(t, fmt.Sprintf("ka = %.4g, with edges of 1/√3", ka), at(ka), want, 0.02) // 1/√3 - ½ spread over a path of 2a
	}
	// The step rises past 3.01 dB over the free field, so -3.01 dB here, at f·D = 79.1 m/s by the ring and at 108.6
	// for a sphere (derived); a face of the same width lies near them.
	lo, hi := 0.1, 1.5
	for range 60 {
		if mid := (lo + hi) / 2; at(mid) < math.Sqrt2/2 {
			lo = mid
		} else {
			hi = mid
		}
	}
	if fd := lo * speed / math.Pi; fd < 70 || fd > 115 {
		t.Errorf("the step is half done at f·D = %.1f m/s", fd)
	}
}

// A driver's size smooths what the edges do: their part of a piston is that of its points' mean.
func TestPistonSmoothsTheEdges(t *testing.T) {
	b := NewBaffle(0.22, 0.38)
	at, e := Point{0, 0.05, 0}, ear(2, 0, 0)
	const a, n = 0.04, 40
	points := []*Diffraction{}
	for i := range n {
		for j := range n {
			if x, y := 2*(float64(i)+0.5)/n-1, 2*(float64(j)+0.5)/n-1; x*x+y*y < 1 {
				points = append(points, firstOrder(b, Point{a*x + at[0], a*y + at[1], 0}, e))
			}
		}
	}
	piston := b.Diffraction(at, a, e, speed)
	whole := b.Diffraction(at, 0, e, speed)
	for _, f := range []float64{500, 1000, 2000, 3000, 4000, 6000} {
		var want complex128
		k := 2 * math.Pi * f / speed
		for _, p := range points {
			want += (p.At(f) - 1) * cmplx.Rect(1/float64(len(points)), -k*(p.reach-piston.reach))
		}
		again := whole.At(f) - firstOrder(b, at, e).At(f) // what goes from edge to edge, for a point
		got := piston.At(f) - complex(Piston(k*a, piston.sinTheta), 0)
		want += again * complex(Piston(k*piston.patch, 1), 0)
		if cmplx.Abs(got-want) > 0.02 { // nineteen patches for a thousand points
			t.Errorf("%g Hz: got %.4f, want %.4f", f, got, want)
		}
	}
	// At high frequencies, where a driver beams, the edges are hardly lit: the ripple goes.
	for _, f := range []float64{12e3, 16e3, 20e3} {
		near(t, fmt.Sprintf("ripple at %g Hz", f), db(piston.At(f))-db(complex(Piston(2*math.Pi*f/speed*a, piston.sinTheta), 0)), 0, 0.5)
	}
}

// Odd sizes, places and frequencies give numbers.
func TestDiffractionIsFinite(t *testing.T) {
	for _, size := range []float64{1e-3, 0.3, 30, 1e4} {
		b := NewBaffle(size, 2*size)
		for _, at := range []Point{{}, {size * 0.4999999, size * 0.9999999, 0.2}} {
			for _, radius := range []float64{0, 0.02, 2 * size} {
				for _, e := range []Point{{0, 0, 1}, {0, 0, -1}, {size / 2, 0, 0}, {size / 2, size, 0}, {3, 0, 0}, {1e4, 1, 1}} {
					d := b.Diffraction(at, radius, e, speed)
					for _, f := range []float64{1e-3, 20, 1e3, 20e3, 1e7} {
						if p := d.At(f); !(cmplx.Abs(p) < 100) {
							t.Fatalf("%g m, driver %v of %g m, ear %v, %g Hz: %v", size, at, radius, e, f, p)
						}
					}
				}
			}
		}
	}
}

func TestRoom(t *testing.T) {
	b := NewBaffle(0.2, 0.4)
	for _, tt := range []struct {
		at   Point
		want float64
	}{{Point{}, 0.1}, {Point{0.07, 0.1, -0.02}, 0.03}, {Point{0, -0.19, 0}, 0.01}, {Point{0.15, 0, 0}, -0.05}, {Point{0, 0.25, 0}, -0.05}} {
		near(t, fmt.Sprintf("%v", tt.at), b.Room(tt.at), tt.want, 1e-15)
	}
}

func TestDiffractionAtAllocatesNothing(t *testing.T) {
	d := NewBaffle(0.22, 0.38).Diffraction(Point{0, 0.06, 0}, 0.013, ear(2, 20, 0), speed)
	if n := testing.AllocsPerRun(10, func() { d.At(3000) }); n != 0 {
		t.Errorf("%v allocations", n)
	}
}

// The plain sum of the polynomial's terms.
func TestPolynomial(t *testing.T) {
	z := cmplx.Rect(1, 0.7)
	for n := range 14 {
		h, want, power := make([]float64, n), complex(0, 0), complex(1, 0)
		for i := range h {
			h[i] = math.Cos(3 * float64(i))
			want += complex(h[i], 0) * power
			power *= z
		}
		if got := polynomial(h, z); cmplx.Abs(got-want) > 1e-13 {
			t.Errorf("%d terms: got %v, want %v", n, got, want)
		}
	}
}

func BenchmarkDiffraction(b *testing.B) {
	baffle, e := NewBaffle(0.22, 0.38), ear(2, 20, 0)
	b.Run("new", func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			baffle.Diffraction(Point{0, 0.06, 0}, 0.065, e, speed)
		}
	})
	d := baffle.Diffraction(Point{0, 0.06, 0}, 0.065, e, speed)
	b.Run("at", func(b *testing.B) {
		b.ReportAllocs()
		for b.Loop() {
			d.At(3000)
		}
	})
}

func ExampleBaffle() {
	b := NewBaffle(0.22, 0.38)
	tweeter := Point{0, 0.06, 0}
	d := b.Diffraction(tweeter, 0.013, Point{0, 0, 2}, 343)
	fmt.Printf("%.1f dB toward DC\n", 20*math.Log10(cmplx.Abs(d.At(0.01))))
	// Output: -6.0 dB toward DC
}
