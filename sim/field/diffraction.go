package field

import (
	"math"
	"math/cmplx"
)

// A Diffraction is what a baffle makes of one driver's sound at one ear. It is the sum of the direct sound and
// of the sound from the edges; the latter is kept as an impulse response, so that a frequency costs the same
// however many pieces the edges were cut into.
type Diffraction struct {
	speed    float64   // m/s
	radius   float64   // m, of the piston
	patch    float64   // m, radius of the patches of it for which the edges were worked out
	direct   float64   // 1 before the baffle, 0 behind it
	sinTheta float64   // of the ear from the driver's axis
	first    float64   // s, delay of taps[0] after the direct sound
	step     float64   // s, between taps
	taps     []float64 // of the edges
	reach    float64   // m, distance from driver to ear
}

const (
	finestStep = 5e-6   // s
	mostTaps   = 4096   // enough for paths 7 m longer than the direct one; beyond, the step grows
	pieceSize  = 0.05   // length of a piece over its distance from the driver, at most
	farPieces  = 8      // of an edge, for what goes from edge to edge
	nearest    = 0.5e-3 // m, from an edge: no point of a piston is taken to be nearer
)

// discPoints returns points on the unit disc, each for a patch of equal area, and the patches' radius: the
// middle and two rings, where the second moment about the middle is exactly that of the disc.
func discPoints() (points [][2]float64, patch float64) {
	points = append(points, [2]float64{})
	// Nineteen patches of mean square radius 1/38. A ring's mean square radius less that is its points'.
	for _, ring := range []struct {
		n      int
		radius float64
	}{{6, math.Sqrt(7. / 38)}, {12, math.Sqrt(25. / 38)}} {
		for i := range ring.n {
			sin, cos := math.Sincos(2 * math.Pi * (float64(i) + 0.5) / float64(ring.n))
			points = append(points, [2]float64{ring.radius * cos, ring.radius * sin})
		}
	}
	return points, math.Sqrt(1. / 19)
}

// Diffraction works out what the baffle makes of a driver whose acoustic centre, seen from the front, is at at,
// within the outline, a flat piston of the given radius in m (0: a point), for an ear that is not there, with
// the given speed of sound in m/s. It takes the piston to be in the plane of the baffle; a part of it that is
// over an edge counts as at the edge.
func (b *Baffle) Diffraction(at Point, radius float64, ear Point, soundSpeed float64) *Diffraction {
	at[2] = 0
	d := &Diffraction{speed: soundSpeed, radius: radius, reach: at.Distance(ear)}
	d.sinTheta = math.Min(1, math.Hypot(ear[0]-at[0], ear[1]-at[1])/d.reach)
	if ear[2] >= 0 {
		d.direct = 1
	}
	b.layOut(d, at, ear)
	points, patch := discPoints()
	if radius == 0 {
		points = points[:1]
	}
	d.patch = patch * radius
	for i := range b.edges {
		e := &b.edges[i]
		l := newListening(e, at, radius, ear, b.index)
		for _, p := range points {
			along, in := e.local(Point{at[0] + radius*p[0], at[1] + radius*p[1], 0})
			d.illuminate(l, along, max(nearest, in), 1/float64(len(points)))
		}
	}
	once := 0.
	for _, h := range d.taps {
		once += h
	}
	b.again(d, at, ear, 0.5-d.direct-once)
	last := len(d.taps)
	for last > 0 && d.taps[last-1] == 0 { // the room was made for the worst case
		last--
	}
	d.taps = d.taps[:last]
	return d
}

// layOut chooses the taps' times: from the earliest path over an edge to the latest over two.
func (b *Baffle) layOut(d *Diffraction, at, ear Point) {
	var out, in float64
	for i := range b.edges {
		corner := b.edges[i].at(0)
		out, in = max(out, corner.Distance(at)), max(in, corner.Distance(ear))
	}
	d.first = -d.radius / d.speed
	span := (out+b.across+in-d.reach)/d.speed - d.first
	d.step = max(finestStep, span/mostTaps)
	d.taps = make([]float64, int(span/d.step)+3)
}

// add puts a pulse of the given weight, spread evenly between two path lengths in m, into the taps.
func (d *Diffraction) add(weight, from, to float64) {
	from, to = (from-d.reach)/d.speed, (to-d.reach)/d.speed
	n := int(math.Abs(to-from)/d.step) + 1
	weight /= float64(n)
	for i := range n {
		x := (from + (to-from)*(float64(i)+0.5)/float64(n) - d.first) / d.step
		x = max(0, min(float64(len(d.taps)-2), x))
		k := int(x)
		part := weight * (x - float64(k))
		d.taps[k] += weight - part
		d.taps[k+1] += part
	}
}

// A listening is an edge cut into pieces, and the part of the edge integral that depends on the ear alone.
type listening struct {
	index  float64
	nodes  []float64 // m, along the edge, the ends of the pieces
	bend   []float64 // arsinh of the distance along the edge from the ear over that from the edge
	to     []float64 // m, from the node to the ear
	angles [2]wedgeAngle
	share  float64 // of the first angle that the far end of the cabinet's side lets pass
	blend  float64 // how far from the first angle to the second
}

// newListening cuts up e for a driver at at and an ear. The pieces are the shorter the nearer they are to the
// driver and to where the path over the edge is shortest: there most of the strength is in little of the edge
// where the ear is near the limit of its shadow.
func newListening(e *edge, at Point, radius float64, ear Point, index float64) *listening {
	source, near := e.local(at)
	along, in := e.local(ear)
	off := max(nearest, math.Hypot(in, ear[2]))
	middle := max(0, min(e.length, (source*off+along*near)/(near+off)))
	scale := max(nearest, near-radius, near/2)
	before, after := math.Asinh(middle/scale), math.Asinh((e.length-middle)/scale)
	m, n := int(math.Ceil(2*before/pieceSize)), int(math.Ceil(2*after/pieceSize))
	l := &listening{index: index, nodes: make([]float64, m+n+1), bend: make([]float64, m+n+1), to: make([]float64, m+n+1)}
	for i := range l.nodes {
		z := middle
		if i < m {
			t := float64(m-i) / float64(m)
			z -= scale * math.Sinh(before*t*t)
		} else if i > m {
			t := float64(i-m) / float64(n)
			z += scale * math.Sinh(after*t*t)
		}
		l.nodes[i], l.bend[i], l.to[i] = z, math.Asinh((z-along)/off), math.Hypot(z-along, off)
	}
	// The ear's angle around the edge from the front, through the air. Behind the baffle the wave goes along the
	// cabinet's side, and where the ear is in line with it the edge at the far end halves it, as every edge does
	// at the limit of its shadow; how soon depends on the depth, which is not known, so it is done evenly. Inside
	// the corner, where no straight line leads, the two directions along its sides are blended.
	theta := math.Atan2(ear[2], in)
	if theta < 0 {
		theta += 2 * math.Pi
	}
	open := math.Pi / index
	l.angles = [2]wedgeAngle{newWedgeAngle(min(theta, open), index), newWedgeAngle(0, index)}
	l.share = 1
	if theta > math.Pi {
		l.share = 1 - 0.5*min(1, (theta-math.Pi)/(open-math.Pi))
	}
	if theta > open {
		l.blend = (theta - open) / (2*math.Pi - open)
	}
	return l
}

// A wedgeAngle is what the edge's strength depends on besides the place along it: half of π ± θ times the
// index, as sine and cosine.
type wedgeAngle struct{ sin1, cos1, sin2, cos2 float64 }

func newWedgeAngle(theta, index float64) (w wedgeAngle) {
	w.sin1, w.cos1 = math.Sincos(index * (math.Pi - theta) / 2)
	w.sin2, w.cos2 = math.Sincos(index * (math.Pi + theta) / 2)
	return w
}

// upTo returns the edge integral, delay left out, from where its argument is 0: the sum over both signs of
// arctan(tanh(νη/2)·cot(ν(π ± θ)/2)), whose derivative is Svensson's β·ν/2 for a source on the wedge's face.
func (w *wedgeAngle) upTo(tanh float64) float64 {
	sum := math.Atan2(tanh*w.cos2, w.sin2)
	if w.sin1 < 0 {
		return sum - math.Atan2(tanh*w.cos1, -w.sin1)
	}
	return sum + math.Atan2(tanh*w.cos1, w.sin1)
}

// illuminate adds what an edge makes of a point source on the baffle, along m along it and in m from it.
func (d *Diffraction) illuminate(l *listening, along, in, weight float64) {
	var before, path float64
	for i, z := range l.nodes {
		tanh := math.Tanh(l.index * (math.Asinh((z-along)/in) + l.bend[i]) / 2)
		now := l.share * l.angles[0].upTo(tanh)
		if l.blend > 0 {
			now += l.blend * (l.angles[1].upTo(tanh) - now)
		}
		length := math.Hypot(z-along, in) + l.to[i]
		if i > 0 {
			// Over the direct sound of a source on a baffle, which is twice that in the open.
			d.add(weight*(before-now)/(2*math.Pi)*2*d.reach/(path+length), path, length)
		}
		before, path = now, length
	}
}

// again adds what goes from one edge to another and then to the ear, to a total of sum.
func (b *Baffle) again(d *Diffraction, at, ear Point, sum float64) {
	for i := range b.edges {
		first := &b.edges[i]
		along, in := first.local(at)
		size := first.length / farPieces
		for p := range farPieces {
			z := size * float64(p)
			here := first.at(z + size/2)
			share := sum * (math.Atan((z+size-along)/in) - math.Atan((z-along)/in)) / (2 * math.Pi)
			out := at.Distance(here)
			for j := range b.edges {
				if j != i {
					b.edges[j].passOn(d, here, ear, share/math.Pi, out, size)
				}
			}
		}
	}
}

// passOn adds what the edge passes on to the ear of what comes along the baffle from a piece of another edge
// at here; share is of each radian, out the length of the path up to there and size that of the piece.
func (e *edge) passOn(d *Diffraction, here, ear Point, share, out, size float64) {
	along, in := e.local(here)
	piece := e.length / farPieces
	blur := (size + piece) / 4
	for q := range farPieces {
		z := piece * float64(q)
		there := e.at(z + piece/2)
		angle := math.Atan((z+piece-along)/in) - math.Atan((z-along)/in)
		length := out + here.Distance(there) + there.Distance(ear)
		d.add(share*angle, length-blur, length+blur)
	}
}

// At returns the pressure at the frequency f in Hz over that of a point source of the same strength in an
// infinite baffle, at the same distance; its phase is over that of the direct sound. It allocates nothing.
func (d *Diffraction) At(f float64) complex128 {
	w := 2 * math.Pi * f
	direct := d.direct * Piston(w/d.speed*d.radius, d.sinTheta)
	// What lies between taps was put on both neighbours, which on the average weakens it by sinc². That is made up
	// for up to x⁴, which is 0.3 % at 20 kHz; far above, where the taps say nothing, it stays below 1.2.
	x := w * d.step / 2
	smooth := sinc(x)
	weight := smooth * smooth * (1 + x*x*2/3) * Piston(w/d.speed*d.patch, 1)
	return complex(direct, 0) + complex(weight, 0)*polynomial(d.taps, cmplx.Rect(1, -w*d.step))*cmplx.Rect(1, -w*d.first)
}

// sinc returns sin x / x.
func sinc(x float64) float64 {
	if x < 1e-4 {
		return 1 - x*x/6
	}
	return math.Sin(x) / x
}

// polynomial returns Σ h[n]·zⁿ by Horner's rule, as four in z⁴ at once, since each step of one waits for the
// step before.
func polynomial(h []float64, z complex128) complex128 {
	z2 := z * z
	z4 := z2 * z2
	var a, b, c, e complex128
	top := len(h) &^ 3
	switch len(h) - top {
	case 3:
		a, b, c = complex(h[top], 0), complex(h[top+1], 0), complex(h[top+2], 0)
	case 2:
		a, b = complex(h[top], 0), complex(h[top+1], 0)
	case 1:
		a = complex(h[top], 0)
	}
	for k := top - 4; k >= 0; k -= 4 {
		g := h[k : k+4 : k+4]
		a = a*z4 + complex(g[0], 0)
		b = b*z4 + complex(g[1], 0)
		c = c*z4 + complex(g[2], 0)
		e = e*z4 + complex(g[3], 0)
	}
	return a + z*(b+z*(c+z*e))
}
