package xover

import (
	"bytes"
	"errors"
	"fmt"
	"unicode"
	"unicode/utf8"

	"sixdown/xover/quantity"
)

// Parse reads the design file src; name is what messages call it, such as "harbour.toml".
//
// On success it returns a Design in which every number has been checked and every name refers to something
// it defines, and the warnings, in the order of the file. On failure the design is nil, there are no
// warnings, and the error is of type Errors: all that is wrong, sorted by position, up to MaxErrors. A fault
// in the TOML syntax is reported alone, since what follows it cannot be read. The bounds of this package
// (MaxFileBytes and the rest) keep a hostile file harmless; Parse never panics. src is not kept.
func Parse(name string, src []byte) (*Design, []Warning, error) {
	f, err := parseFile(name, src)
	if err != nil {
		return nil, nil, err
	}
	return f.design, f.warnings, nil
}

// A file is a design with the places of what Edit may change.
type file struct {
	design   *Design
	warnings []Warning
	parts    map[string]span     // of the literal that gives a part's value
	dcr, tol map[string]keyPlace // where a part's winding resistance and tolerance are written, or could be
	controls map[string]span     // of the number that gives a control's setting
}

// A span is a piece of the source, from its first byte to the one behind it.
type span struct{ from, to int }

// A keyPlace is what to put a key's text in place of, and what goes before and after it.
type keyPlace struct {
	span
	before, after string
}

// A parser reads one design file.
type parser struct {
	diagnostics
	where  *locator
	offset int // bytes before what where sees: a byte order mark
	design *Design
	file   *file

	partAt map[string]int  // index in design.Parts
	faulty map[string]bool // parts whose definition has an error: what they are is not known
	lost   map[string]bool // tables of which not all could be read: that a name is not there means nothing

	networkFault bool // a step could not be read: the nodes are not checked
}

// byteOrderMark may stand at the start of a file that a text editor wrote.
var byteOrderMark = []byte("\ufeff")

func parseFile(name string, src []byte) (*file, error) {
	p := &parser{
		diagnostics: diagnostics{file: name},
		design:      defaults(),
		file:        &file{parts: map[string]span{}, dcr: map[string]keyPlace{}, tol: map[string]keyPlace{}, controls: map[string]span{}},
		partAt:      map[string]int{},
		faulty:      map[string]bool{},
		lost:        map[string]bool{},
	}
	text := bytes.TrimPrefix(src, byteOrderMark)
	p.offset = len(src) - len(text)
	p.where = newLocator(text)
	p.document(text)
	p.sorted()
	if len(p.errors) > 0 {
		return nil, p.errors
	}
	p.file.design, p.file.warnings = p.design, p.warnings
	return p.file, nil
}

// defaults returns a Design with all that a file need not say.
func defaults() *Design {
	return &Design{
		Drive:  Drive{Level: 2.83, RatedLoad: 8},
		Listen: Listen{Distance: 1},
		Air:    Air{SoundSpeed: 343, Density: 1.20},
		Tune:   Tune{Band: [2]float64{200, 20e3}, Weights: Weights{Sum: 1, Ways: 1, Angles: 1}},
		Spread: Spread{TolR: 0.05, TolL: 0.05, TolC: 0.05, TolP: 0.2, LimitDB: 1},
	}
}

func (p *parser) pos(offset int) Position { return p.where.position(offset) }

// document reads everything. Each step goes on after errors of those before it, as far as it makes sense.
func (p *parser) document(src []byte) {
	if len(src) > MaxFileBytes {
		p.fail(Position{}, fmt.Sprintf("the file is larger than %d bytes", MaxFileBytes), "a design file is a few kilobytes; check that this is one")
		return
	}
	if at := firstInvalid(src); at >= 0 {
		p.fail(p.pos(at), "this is not UTF-8", "save the file as UTF-8")
		return
	}
	root := readSyntax(&p.diagnostics, p.where, src)
	if root == nil {
		return
	}
	p.top(root)
	p.checkUse()
	if len(p.errors) == 0 {
		checkDocument(&p.diagnostics, p.where, src)
	}
}

// firstInvalid returns the offset of the first byte that is not UTF-8, -1 if all is.
func firstInvalid(src []byte) int {
	if utf8.Valid(src) {
		return -1
	}
	for at := 0; at < len(src); {
		r, size := utf8.DecodeRune(src[at:])
		if r == utf8.RuneError && size == 1 {
			return at
		}
		at += size
	}
	return -1
}

// top reads the tables of the file. Parts and drivers come first, wherever they stand, since ways, tone
// networks and controls name them.
func (p *parser) top(root *table) {
	r := p.read(root, "file", "the file")
	r.text("title", &p.design.Title)
	r.inTable("drive", "", p.drive)
	r.inTable("listen", "", p.listen)
	r.inTable("air", "", p.air)
	r.inTable("baffle", "", p.baffle)
	r.inTable("parts", "", p.parts)
	r.eachNamed("driver", MaxDrivers, p.driver)
	r.eachOf("way", MaxWays, p.way)
	r.inTable("tune", "", p.tune)
	r.inTable("spread", "", p.spread)
	r.inTable("tone", "", p.tone)
	r.eachNamed("control", MaxControls, p.control)
	r.done()

	switch {
	case len(p.design.Ways) > 0 && p.design.Tone != nil:
		p.fail(p.design.Tone.Pos, "the file has both [[way]] and [tone]", "keep one: a design is either a loudspeaker or a tone network")
	case root.index["way"] == nil && root.index["tone"] == nil && len(p.errors) == 0:
		p.fail(Position{}, "the file has neither a [[way]] nor a [tone]", "add a [[way]] for each driver, or a [tone] network")
	}
}

// inTable reads a table by its reader, if it is there. For a table that is written in braces example is one;
// for one with a header it is "".
func (r *tableReader) inTable(key, example string, read func(*tableReader)) {
	e := r.take(key)
	if e == nil {
		return
	}
	if e.value.kind != tableNode {
		mend := fmt.Sprintf("write [%s] on a line of its own and the keys below it", key)
		if example != "" {
			mend = "write it like " + example
		} else if e.value.kind == listNode {
			mend = fmt.Sprintf("write [%s] once, with single brackets", key)
		}
		r.fail(r.pos(e.at), fmt.Sprintf("%s is %s", key, e.value.kind), mend)
		return
	}
	inner := r.read(e.value.table, key, "["+key+"]")
	read(inner)
	inner.done()
}

// eachNamed reads the tables [key.NAME].
func (r *tableReader) eachNamed(key string, most int, read func(name string, t *tableReader)) {
	e := r.take(key)
	if e == nil {
		return
	}
	mend := fmt.Sprintf("write a table for each, [%s.NAME]", key)
	if e.value.kind != tableNode {
		r.lost[key] = true
		r.fail(r.pos(e.at), fmt.Sprintf("%s is %s", key, e.value.kind), mend)
		return
	}
	for i, named := range e.value.table.keys {
		switch {
		case r.full():
			return
		case i >= most:
			r.fail(r.pos(named.at), fmt.Sprintf("there are more than %d of [%s.NAME]", most, key), "leave some out")
			return
		case named.value.kind != tableNode:
			r.lost[key] = true
			r.fail(r.pos(named.at), fmt.Sprintf("%s.%s is %s", key, shortened(named.name), named.value.kind), mend)
			continue
		}
		if fault := nameFault(named.name); fault != "" {
			r.fail(r.pos(named.at), fmt.Sprintf("[%s.%s]: %s", key, shortened(named.name), fault), nameMend)
		}
		inner := r.read(named.value.table, key, fmt.Sprintf("[%s.%s]", key, shortened(named.name)))
		read(named.name, inner)
		inner.done()
	}
}

// eachOf reads the tables [[key]].
func (r *tableReader) eachOf(key string, most int, read func(*tableReader)) {
	e := r.take(key)
	if e == nil {
		return
	}
	mend := fmt.Sprintf("write [[%s]], with double brackets, before each", key)
	if e.value.kind != listNode || len(e.value.items) == 0 {
		r.fail(r.pos(e.at), fmt.Sprintf("%s is %s", key, emptyOr(e.value)), mend)
		return
	}
	for i, item := range e.value.items {
		switch {
		case r.full():
			return
		case i >= most:
			r.fail(r.pos(item.at), fmt.Sprintf("there are more than %d of [[%s]]", most, key), "leave some out")
			return
		case item.kind != tableNode:
			r.fail(r.pos(item.at), fmt.Sprintf("%s is %s", key, item.kind), mend)
			continue
		}
		inner := r.read(item.table, key, fmt.Sprintf("[[%s]]", key))
		read(inner)
		inner.done()
	}
}

func emptyOr(n *node) string {
	if n.kind == listNode {
		return "an empty array"
	}
	return n.kind.String()
}

func (p *parser) drive(r *tableReader) {
	d := &p.design.Drive
	r.quantity("level", quantity.Volt, positive, &d.Level)
	r.quantity("source", quantity.Ohm, notNegative, &d.Source)
	r.quantity("rated_power", quantity.Watt, positive, &d.RatedPower)
	r.quantity("rated_load", quantity.Ohm, positive, &d.RatedLoad)
}

func (p *parser) listen(r *tableReader) {
	r.quantity("distance", quantity.Metre, positive, &p.design.Listen.Distance)
	r.quantity("height", quantity.Metre, anySign, &p.design.Listen.Height)
}

func (p *parser) air(r *tableReader) {
	r.quantity("sound_speed", quantity.MetrePerSecond, positive, &p.design.Air.SoundSpeed)
	r.quantity("density", quantity.KilogramPerCubicMetre, positive, &p.design.Air.Density)
}

func (p *parser) baffle(r *tableReader) {
	b := &Baffle{}
	if !r.quantity("width", quantity.Metre, positive, &b.Width) {
		r.missing("width", `give it, such as width = "220 mm"`)
	}
	if !r.quantity("height", quantity.Metre, positive, &b.Height) {
		r.missing("height", `give it, such as height = "380 mm"`)
	}
	p.design.Baffle = b
}

// failQuantity reports an error of the quantity room.
func (p *parser) failQuantity(key string, n *node, err error) {
	if fault, ok := errors.AsType[*quantity.Error](err); ok {
		p.fail(p.pos(n.at), key+": "+fault.What, fault.Mend)
	}
}

// failQuantityAt is failQuantity at a token of a string.
func (c *cursor) failQuantityAt(t token, what string, err error) {
	if fault, ok := errors.AsType[*quantity.Error](err); ok {
		c.failAt(t, what+": "+fault.What, fault.Mend)
	}
}

// nameFault says why a name cannot be one; "" if it can. A name is letters, digits, _ and -, and begins with
// a letter, so that the arrangement can be read.
func nameFault(name string) string {
	if name == "" {
		return "the name is empty"
	}
	if utf8.RuneCountInString(name) > MaxNameRunes {
		return fmt.Sprintf("the name is longer than %d characters", MaxNameRunes)
	}
	for i, c := range name {
		if i == 0 && !unicode.IsLetter(c) {
			return fmt.Sprintf("the name begins with %q", c)
		}
		if !isNameRune(c) {
			return fmt.Sprintf("the name has %q in it", c)
		}
	}
	return ""
}

// CheckName returns an error of the form "what; how to mend" if a part, driver, way, node or control cannot be
// called name in a design file.
func CheckName(name string) error {
	if fault := nameFault(name); fault != "" {
		return errors.New(oneLine(fault) + "; " + nameMend)
	}
	return nil
}

const nameMend = "use letters, digits, _ and -, a letter first"
