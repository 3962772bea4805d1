package field

import "math"

// A Baffle is the flat front of a cabinet in the plane z = 0, whose edges are right angles.
//
// What the edges do is worked out by edge sources: each piece of an edge sends on what reaches it, to all
// sides, so that the pressure at the ear is the direct sound, if the ear is before the baffle, and an integral
// along the edges. The source strength is the exact one for a rigid wedge,
//
//	M. A. Biot, I. Tolstoy, "Formulation of Wave Propagation in Infinite Media by Normal Coordinates with an
//	Application to Diffraction", J. Acoust. Soc. Am. 29(3), 381–391, 1957;
//	U. P. Svensson, R. I. Fred, J. Vanderkooy, "An analytic secondary source model of edge diffraction impulse
//	responses", J. Acoust. Soc. Am. 106(5), 2331–2344, 1999,
//
// for which the integral over a piece is known in closed form but for the delay, which hardly changes along it.
// It holds at every angle, through the plane of the baffle and beyond.
//
// Waves from one edge are diffracted again by the others. Without them the pressure toward DC would be wrong,
// where a cabinet, small against the wave, must radiate to all sides alike, half of what an infinite baffle
// gives: J. Vanderkooy, "A Simple Theory of Cabinet Edge Diffraction", J. Audio Eng. Soc. 39(12), 923–933,
// 1991. What is missing there is therefore added with the delays of the paths from edge to edge, each wave
// spread over the edges by the angles that they subtend, so that it fades as the frequency rises. This is an
// approximation. The cabinet's depth does not enter: it counts where the ear is far behind the baffle, and
// there the answer is no better than an estimate.
type Baffle struct {
	edges  []edge
	index  float64 // π over the open angle of the edges' wedge
	across float64 // m, the greatest distance between two of its points
}

// An edge runs from one corner to the next, anticlockwise as the listener sees it.
type edge struct {
	x, y   float64 // m, its first corner
	tx, ty float64 // unit vector along it; the one into the baffle is (-ty, tx)
	length float64 // m
}

// boxEdge is the index of a right-angled edge, around which the air takes three quarters of a turn.
const boxEdge = 2. / 3

// NewBaffle returns a baffle of the given width and height in m, both > 0, centred on the origin.
func NewBaffle(width, height float64) *Baffle {
	w, h := width/2, height/2
	return newBaffle([][2]float64{{w, h}, {-w, h}, {-w, -h}, {w, -h}}, boxEdge)
}

// newBaffle returns a baffle of any convex outline, its corners anticlockwise.
func newBaffle(corners [][2]float64, index float64) *Baffle {
	b := &Baffle{index: index}
	for i, p := range corners {
		q := corners[(i+1)%len(corners)]
		length := math.Hypot(q[0]-p[0], q[1]-p[1])
		b.edges = append(b.edges, edge{x: p[0], y: p[1], tx: (q[0] - p[0]) / length, ty: (q[1] - p[1]) / length, length: length})
		for _, r := range corners[i:] {
			b.across = max(b.across, math.Hypot(r[0]-p[0], r[1]-p[1]))
		}
	}
	return b
}

// local returns where p is as the edge sees it: along it from its first corner, and into the baffle from it.
func (e *edge) local(p Point) (along, in float64) {
	dx, dy := p[0]-e.x, p[1]-e.y
	return dx*e.tx + dy*e.ty, dy*e.tx - dx*e.ty
}

// at returns the point along m from the first corner.
func (e *edge) at(along float64) Point { return Point{e.x + along*e.tx, e.y + along*e.ty, 0} }

// Room returns how far in m the point at, seen from the front, is within the baffle: the distance to the
// nearest edge, negative outside.
func (b *Baffle) Room(at Point) float64 {
	room := math.Inf(1)
	for i := range b.edges {
		_, in := b.edges[i].local(at)
		room = min(room, in)
	}
	return room
}
