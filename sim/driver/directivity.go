package driver

import (
	"cmp"
	"fmt"
	"math"
	"math/cmplx"
	"slices"
)

// An AngledTable is a response measured at an angle from the axis: in the horizontal plane positive to the right,
// in the vertical one positive up.
type AngledTable struct {
	AngleDeg float64 // -180 to 180
	Table    *Table
	Delay    float64 // s, by how much later than on the axis the sound came to the microphone
	Gain     float64 // pressure for its distance over that for the one on the axis; 0: 1
}

// A Directivity is what a driver radiates away from its axis over what it radiates on it, both at one distance from
// its acoustic centre, interpolated between measurements. What is interpolated, linearly in angle, is the difference from the axis: of the level in dB and of
// the phase, followed without jumps along frequency, and then from angle to angle.
//
// Between the two planes, at the angle θ from the axis and turned round it by φ from the right, it is the sum of the
// difference at θ in the horizontal plane times cos²φ and that in the vertical plane times sin²φ, so that a driver that
// is alike in both is alike all round. What was not measured is taken as follows, which Invented tells: one side of a
// plane as the mirror image of the other; all planes as the one measured; what lies beyond the last angle of a side as
// at that angle.
type Directivity struct {
	axis    polarCurve
	tables  []angled  // without the axis
	planes  [2]*plane // horizontal, vertical; nil: not measured
	notes   fold
	doubt   Doubt   // of all tables off the axis
	lo, hi  float64 // Hz, where all tables have rows
	minimum bool
}

// A polarCurve answers with ln|H| and the phase in rad, flight time taken out, at f in Hz.
type polarCurve interface {
	polar(f float64) (lnMag, phase float64)
}

// An angled is one table with the whole turns that join its phase to its neighbour's.
type angled struct {
	curve polarCurve
	turns float64 // rad
	delay float64 // s, to be taken out
	ln    float64 // to be taken off ln|H|
}

// polar returns what curve has at the distance of the axis.
func (a *angled) polar(f float64) (lnMag, phase float64) {
	lnMag, phase = a.curve.polar(f)
	return lnMag - a.ln, phase + a.turns + 2*math.Pi*f*a.delay
}

// A plane has the two sides of a measured plane.
type plane struct {
	sides  [2][]node // to the right or up, to the left or down; by rising angle, the first on the axis
	mirror int       // the side that is a copy of the other; -1: none
}

// A node is a measured angle.
type node struct {
	deg   float64 // from the axis, 0 to 180
	table int     // of tables; -1: the axis
}

// NewDirectivity makes a directivity of the table on the axis and those at other angles, which may have one at 0,
// which is passed over, but no angle twice. Unless minimum is true their phases are on one time base. With minimum each is given the minimum phase that belongs to it. The error is a
// *TableError.
func NewDirectivity(axis *Table, horizontal, vertical []AngledTable, minimum bool) (*Directivity, error) {
	d := &Directivity{minimum: minimum, hi: math.Inf(1)}
	delay := 0.
	if !minimum {
		delay = flight(ExcessDelay(axis))
	}
	var err error
	if d.axis, err = d.read(axis, delay); err != nil {
		return nil, err
	}
	d.notes, d.doubt = fold{}, Doubt{} // those on the axis are the radiator's
	for i, given := range [][]AngledTable{horizontal, vertical} {
		if d.planes[i], err = d.plane(given, delay); err != nil {
			return nil, err
		}
	}
	return d, nil
}

// read makes a curve of a table.
func (d *Directivity) read(t *Table, delay float64) (polarCurve, error) {
	d.lo, d.hi = max(d.lo, t.Rows[0].Frequency), min(d.hi, t.Rows[len(t.Rows)-1].Frequency)
	if d.minimum {
		lnMag, err := t.lnPressures()
		if err != nil {
			return nil, err
		}
		d.notes.table(t.Name, t.Notes)
		freqs, _, _ := t.columns()
		return minimumPhaseOf(freqs, lnMag), nil
	}
	r, err := newResponseTable(t, delay)
	if err != nil {
		return nil, err
	}
	d.notes.table(t.Name, r.notes)
	own, spread := ExcessDelay(t)
	d.doubt = d.doubt.Plus(r.doubt.knowing(own, spread))
	// Off the axis the sound may have fallen so far that the delay is uncertain, but a whole flight time cannot vanish.
	if spread < otherBase/5 && math.Abs(own-delay) > otherBase {
		d.notes.add("time base", fmt.Sprintf("%s: its phase holds %.2f ms of flight time and that on the axis %.2f ms; give all angles on one time base", t.Name, own*1e3, delay*1e3))
	}
	return &r.curve, nil
}

// otherBase is how far in s two flight times must be apart to be from two time bases: the parts of no driver are that
// far, 0.34 m, from each other.
const otherBase = 1e-3

// plane joins the tables of one plane to each other, outward from the axis.
func (d *Directivity) plane(given []AngledTable, delay float64) (*plane, error) {
	if len(given) == 0 {
		return nil, nil
	}
	given = slices.Clone(given)
	slices.SortFunc(given, func(a, b AngledTable) int { return cmp.Compare(math.Abs(a.AngleDeg), math.Abs(b.AngleDeg)) })
	p := &plane{mirror: -1}
	for side := range p.sides {
		p.sides[side] = []node{{0, -1}}
	}
	for _, g := range given {
		if g.AngleDeg == 0 {
			continue
		}
		c, err := d.read(g.Table, delay)
		if err != nil {
			return nil, err
		}
		side := 0
		if g.AngleDeg < 0 {
			side = 1
		}
		nodes := p.sides[side]
		a := angled{curve: c, delay: g.Delay}
		if g.Gain > 0 {
			a.ln = math.Log(g.Gain)
		}
		a.turns = d.join(&a, nodes[len(nodes)-1].table)
		d.tables = append(d.tables, a)
		p.sides[side] = append(nodes, node{math.Abs(g.AngleDeg), len(d.tables) - 1})
	}
	right, left := &p.sides[0], &p.sides[1]
	straightBehind := func(nodes []node) bool { return nodes[len(nodes)-1].deg == 180 }
	switch {
	case len(*left) == 1 && len(*right) == 1: // the axis alone, which is no plane
		return nil, nil
	case len(*left) == 1:
		*left, p.mirror = *right, 1
	case len(*right) == 1:
		*right, p.mirror = *left, 0
	case straightBehind(*right): // which is behind the other side too
		*left = append(*left, (*right)[len(*right)-1])
	case straightBehind(*left):
		*right = append(*right, (*left)[len(*left)-1])
	}
	return p, nil
}

// join returns the whole turns, in rad, that bring a's phase next to that of its neighbour nearer the axis. They are
// counted in the two octaves where both begin: there a driver is small against the wave, and the phase hardly changes
// with the angle.
func (d *Directivity) join(a *angled, neighbour int) float64 {
	const points = 9
	sum := 0.
	for i := range points {
		f := d.lo * math.Pow(min(4, d.hi/d.lo), float64(i)/(points-1))
		_, own := a.polar(f)
		var other float64
		if neighbour < 0 {
			_, other = d.axis.polar(f)
		} else {
			_, other = d.tables[neighbour].polar(f)
		}
		sum += other - own
	}
	return 2 * math.Pi * math.Round(sum/points/(2*math.Pi))
}

// A Toward is a Directivity in one direction.
type Toward struct {
	axis  polarCurve
	parts []part
	whole float64 // sum of the parts' weights
}

// A part is a table that counts in a direction, and how much.
type part struct {
	angled
	weight float64
}

// Toward returns what is radiated in the direction that is offDeg, 0 to 180, from the axis on which the driver was
// measured, turned round it by aroundDeg: 0 is right of it, 90 above.
func (d *Directivity) Toward(offDeg, aroundDeg float64) *Toward {
	t := &Toward{axis: d.axis}
	sin, cos := math.Sincos(aroundDeg * math.Pi / 180)
	for i, p := range d.planes {
		if p == nil {
			continue
		}
		along := [...]float64{cos, sin}[i]
		first, second := along*along, 0. // weights of the two sides
		if d.planes[1-i] == nil {        // round, as far as its two sides are alike
			first, second = (1+along)/2, (1-along)/2
		} else if along < 0 {
			first, second = second, first
		}
		d.add(t, p.sides[0], offDeg, first)
		d.add(t, p.sides[1], offDeg, second)
	}
	return t
}

// add puts a side at an angle, with a weight, into t. What falls to the axis is a difference of 0.
func (d *Directivity) add(t *Toward, nodes []node, deg, weight float64) {
	i := 1
	for i < len(nodes) && nodes[i].deg < deg {
		i++
	}
	put := func(n node, w float64) {
		if n.table >= 0 && w > 1e-12 {
			t.parts = append(t.parts, part{d.tables[n.table], w})
			t.whole += w
		}
	}
	if i == len(nodes) { // held, and Invented says so
		put(nodes[i-1], weight)
		return
	}
	x := (deg - nodes[i-1].deg) / (nodes[i].deg - nodes[i-1].deg)
	put(nodes[i-1], weight*(1-x))
	put(nodes[i], weight*x)
}

// At returns the pressure in that direction over that on the axis at f in Hz, at the microphone's distance. It
// allocates nothing.
func (t *Toward) At(f float64) complex128 {
	if len(t.parts) == 0 {
		return 1
	}
	lnMag, phase := t.axis.polar(f)
	lnMag, phase = -t.whole*lnMag, -t.whole*phase
	for i := range t.parts {
		p := &t.parts[i]
		l, a := p.polar(f)
		lnMag += p.weight * l
		phase += p.weight * a
	}
	return cmplx.Rect(math.Exp(max(-700, min(700, lnMag))), phase)
}

// Invented says what in the direction of Toward was not measured, a clause each; none if all was.
func (d *Directivity) Invented(offDeg, aroundDeg float64) []string {
	const rounding = 1e-6 // degrees; the ear is turned by rounded sines
	if offDeg < rounding {
		return nil
	}
	behind := offDeg > 180-rounding // in all planes, to both sides
	sin, cos := math.Sincos(aroundDeg * math.Pi / 180)
	var clauses []string
	for i, p := range d.planes {
		along := [...]float64{cos, sin}[i]
		leans := math.Abs(along)*offDeg > rounding
		other := planeNames[1-i][0]
		switch {
		case p == nil && leans && !behind:
			clauses = append(clauses, fmt.Sprintf("the %s plane was not measured and is taken as the %s one", planeNames[i][0], other))
		case p != nil && (leans || d.planes[1-i] == nil):
			side := 0
			if along < 0 {
				side = 1
			}
			if leans && side == p.mirror && !behind {
				clauses = append(clauses, fmt.Sprintf("what is %s was not measured and is taken as what is %s", planeNames[i][1+side], planeNames[i][2-side]))
			}
			if last := p.sides[side][len(p.sides[side])-1].deg; offDeg > last+rounding {
				clauses = append(clauses, fmt.Sprintf("beyond %g° %s it is taken as at that angle", last, planeNames[i][1+side]))
			}
		}
	}
	return clauses
}

// planeNames are the planes with their two sides.
var planeNames = [2][3]string{{"horizontal", "right", "left"}, {"vertical", "up", "down"}}

// Notes returns what is odd about the tables off the axis, a sentence each, but for their doubts; of several files with the
// same oddity the first is named.
func (d *Directivity) Notes() []string { return d.notes.notes() }

// Doubt tells where phases off the axis cannot be followed.
func (d *Directivity) Doubt() Doubt { return d.doubt }

// Range returns the frequencies in Hz between which all tables have rows; beyond them some are carried on as they are
// on the axis.
func (d *Directivity) Range() (lo, hi float64) { return d.lo, d.hi }
