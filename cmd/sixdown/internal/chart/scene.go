package chart

// A point is a place in page units, x to the right and y down.
type point struct{ x, y float64 }

// A rect is a box in page units.
type rect struct{ x, y, w, h float64 }

func (r rect) right() float64  { return r.x + r.w }
func (r rect) bottom() float64 { return r.y + r.h }

// grown returns r with d more on every side.
func (r rect) grown(d float64) rect { return rect{r.x - d, r.y - d, r.w + 2*d, r.h + 2*d} }

// overlaps reports whether two boxes have more than an edge in common.
func (r rect) overlaps(o rect) bool {
	return r.x < o.right() && o.x < r.right() && r.y < o.bottom() && o.y < r.bottom()
}

// holds reports whether o lies in r.
func (r rect) holds(o rect) bool {
	return o.x >= r.x && o.right() <= r.right() && o.y >= r.y && o.bottom() <= r.bottom()
}

// A pen is how a line is drawn.
type pen struct {
	ink   ink
	width float64
	dash  []float64 // lengths of stroke and gap in turn; nil: solid
}

// A mark is one thing in a scene: a line, a shape, a disc or a text.
type mark interface{ isMark() }

// A line is an open polyline.
type line struct {
	points []point
	pen    pen
}

// A shape is a filled area. What an even number of its loops encloses is not of it.
type shape struct {
	loops [][]point
	ink   ink
}

// A disc is a filled circle.
type disc struct {
	at  point
	r   float64
	ink ink
}

// An anchor says which point of a text its place is.
type anchor uint8

const (
	start anchor = iota
	middle
	end
)

// A text is one line of writing on a baseline.
type text struct {
	at     point // on the baseline
	text   string
	size   float64
	bold   bool
	anchor anchor
	ink    ink
}

func (line) isMark()  {}
func (shape) isMark() {}
func (disc) isMark()  {}
func (text) isMark()  {}

// A scene is a sheet with marks on it, the later over the earlier.
type scene struct {
	w, h  float64
	title string
	marks []mark
	fonts *fonts
}

func (s *scene) add(m ...mark) { s.marks = append(s.marks, m...) }

// stroke draws a straight line.
func (s *scene) stroke(from, to point, p pen) { s.add(line{[]point{from, to}, p}) }

// fill fills a box.
func (s *scene) fill(r rect, i ink) {
	s.add(shape{[][]point{{{r.x, r.y}, {r.right(), r.y}, {r.right(), r.bottom()}, {r.x, r.bottom()}}}, i})
}

// frame draws the edge of a box.
func (s *scene) frame(r rect) {
	s.add(line{[]point{{r.x, r.y}, {r.right(), r.y}, {r.right(), r.bottom()}, {r.x, r.bottom()}, {r.x, r.y}}, pen{ink: frame, width: 0.8}})
}

// box is where a text stands, from the top of its capitals to the foot of its descenders.
func (s *scene) box(t text) rect {
	return rect{s.fonts.from(t), t.at.y - capHeight*t.size, s.fonts.width(t.text, t.size, t.bold), (capHeight + descent) * t.size}
}
