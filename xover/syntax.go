package xover

import (
	"bytes"
	"errors"
	"fmt"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"

	"github.com/pelletier/go-toml/v2"
	"github.com/pelletier/go-toml/v2/unstable"
)

// A node is one value of the document, with its place in it.
type node struct {
	kind   nodeKind
	at     int     // offset of its first byte, or of its key where the parser does not tell
	end    int     // offset behind its last byte, of text, number and boolean
	text   string  // of text; of number, boolean and date the source
	inside int     // of text: offset of its first character, if the source holds text as it is; else -1
	number float64 // of number
	items  []*node // of list
	table  *table  // of tableNode
}

type nodeKind uint8

const (
	textNode nodeKind = iota
	numberNode
	booleanNode
	dateNode
	listNode
	tableNode
)

// String says what a value is, for messages.
func (k nodeKind) String() string {
	switch k {
	case textNode:
		return "a string"
	case numberNode:
		return "a number"
	case booleanNode:
		return "true or false"
	case dateNode:
		return "a date"
	case listNode:
		return "an array"
	}
	return "a table"
}

// A table is a TOML table; its keys stand in the order of the file.
type table struct {
	at     int // offset of its header or its key
	keys   []*entry
	index  map[string]*entry
	header bool // a [header] of its own has defined it
	inline bool // written in braces: nothing can be added to it
}

// An entry is a key of a table with its value.
type entry struct {
	name  string
	at    int // offset of the key
	value *node
}

func newTable(at int) *table { return &table{at: at, index: map[string]*entry{}} }

func (t *table) add(name string, at int, value *node) *entry {
	e := &entry{name, at, value}
	t.keys = append(t.keys, e)
	t.index[name] = e
	return e
}

// A syntaxReader builds the tree of a document from the expressions that the TOML parser gives.
type syntaxReader struct {
	*diagnostics
	where  *locator
	src    []byte
	parser unstable.Parser
	root   *table
	here   *table // to which the next key belongs; nil after a header that could not be taken
	values int
}

// readSyntax reads the TOML document src, which has no byte order mark. It reports a key or table that is
// written twice, and goes on; at a fault of the syntax it reports that and stops. The tree is nil if it
// could not be built.
func readSyntax(d *diagnostics, where *locator, src []byte) *table {
	if at := tooDeep(src); at >= 0 {
		d.fail(where.position(at), fmt.Sprintf("brackets are nested more than %d deep", MaxNesting), "take some of them out")
		return nil
	}
	r := &syntaxReader{diagnostics: d, where: where, src: src, root: newTable(0)}
	r.here = r.root
	r.parser.Reset(src)
	for r.parser.NextExpression() {
		expr := r.parser.Expression()
		switch expr.Kind {
		case unstable.Table, unstable.ArrayTable:
			r.here = r.header(expr)
		case unstable.KeyValue:
			if r.here != nil {
				r.keyValue(r.here, expr)
			}
		}
		if r.full() || r.values > MaxValues {
			break
		}
	}
	if r.values > MaxValues {
		d.fail(Position{}, fmt.Sprintf("the file holds more than %d values", MaxValues), "leave out what is not part of the design")
		return nil
	}
	if err := r.parser.Error(); err != nil {
		r.syntaxFault(err)
		return nil
	}
	return r.root
}

// checkDocument has the TOML library read the whole document, which finds what readSyntax does not look for:
// tables reopened where TOML forbids it.
func checkDocument(d *diagnostics, where *locator, src []byte) {
	var all map[string]any
	err := toml.Unmarshal(src, &all)
	if err == nil {
		return
	}
	pos, message := Position{}, strings.TrimPrefix(err.Error(), "toml: ")
	if fault, ok := errors.AsType[*toml.DecodeError](err); ok {
		line, column := fault.Position() // of bytes
		if line >= 1 && line <= len(where.lines) {
			pos = where.position(where.lines[line-1] + column - 1)
		}
	}
	d.fail(pos, "this is not TOML: "+message, "write each table and each key in one place only")
}

const syntaxMend = "check the line: a string, and every value with a unit, stands in double quotes"

func (r *syntaxReader) syntaxFault(err error) {
	at, message := len(r.src), err.Error()
	if fault, ok := errors.AsType[*unstable.ParserError](err); ok {
		// The highlight is a slice of src, so its capacity tells where it begins.
		if offset := cap(r.src) - cap(fault.Highlight); fault.Highlight != nil && offset >= 0 {
			at = min(offset, len(r.src))
		}
		message = fault.Message
	}
	r.fail(r.where.position(at), "this is not TOML: "+message, syntaxMend)
}

// header enters the table that a [header] or [[header]] names.
func (r *syntaxReader) header(expr *unstable.Node) *table {
	keys := r.keys(expr.Key())
	if keys == nil {
		return nil
	}
	last := keys[len(keys)-1]
	t := r.descend(r.root, keys[:len(keys)-1])
	if t == nil {
		return nil
	}
	e := t.index[last.name]
	if expr.Kind == unstable.ArrayTable {
		fresh := newTable(last.at)
		fresh.header = true
		item := &node{kind: tableNode, at: last.at, table: fresh}
		switch {
		case e == nil:
			r.values++
			t.add(last.name, last.at, &node{kind: listNode, at: last.at, items: []*node{item}})
		case e.value.kind == listNode && len(e.value.items) > 0 && e.value.items[0].kind == tableNode && !e.value.items[0].table.inline:
			e.value.items = append(e.value.items, item)
		default:
			r.twice(last, e)
			return nil
		}
		r.values++
		return fresh
	}
	switch {
	case e == nil:
		r.values++
		e = t.add(last.name, last.at, &node{kind: tableNode, at: last.at, table: newTable(last.at)})
	case e.value.kind != tableNode || e.value.table.header || e.value.table.inline:
		r.twice(last, e)
		return nil
	}
	e.value.table.header = true
	e.value.table.at = last.at
	return e.value.table
}

// keyValue puts `a.b = value` into t.
func (r *syntaxReader) keyValue(t *table, expr *unstable.Node) {
	keys := r.keys(expr.Key())
	if keys == nil {
		return
	}
	last := keys[len(keys)-1]
	if t = r.descend(t, keys[:len(keys)-1]); t == nil {
		return
	}
	value := r.value(expr.Value(), last.at)
	if e := t.index[last.name]; e != nil {
		r.twice(last, e)
		return
	}
	if value != nil {
		t.add(last.name, last.at, value)
	}
}

// keys lists a dotted key; nil, and an error is reported, if it has too many parts.
func (r *syntaxReader) keys(it unstable.Iterator) []entry {
	var keys []entry
	for it.Next() {
		n := it.Node()
		keys = append(keys, entry{name: string(n.Data), at: int(n.Raw.Offset)})
		if len(keys) > MaxNesting {
			r.fail(r.where.position(keys[0].at), fmt.Sprintf("the key has more than %d parts", MaxNesting), "take some of them out")
			return nil
		}
	}
	return keys
}

// descend goes from t through the tables that keys name and makes those that are not there yet. In an array
// of tables it goes into the last one.
func (r *syntaxReader) descend(t *table, keys []entry) *table {
	for _, k := range keys {
		e := t.index[k.name]
		if e == nil {
			r.values++
			e = t.add(k.name, k.at, &node{kind: tableNode, at: k.at, table: newTable(k.at)})
		}
		inner := e.value
		if inner.kind == listNode && len(inner.items) > 0 {
			inner = inner.items[len(inner.items)-1]
		}
		if inner.kind != tableNode || inner.table.inline {
			r.twice(k, e)
			return nil
		}
		t = inner.table
	}
	return t
}

func (r *syntaxReader) twice(again entry, first *entry) {
	r.fail(r.where.position(again.at), fmt.Sprintf("%q is defined twice, first in line %d", shortened(again.name), r.where.position(first.at).Line),
		"keep one of them, or give one another name")
}

// value reads a value; at is where its key stands. It is nil past MaxValues, which the caller reports.
func (r *syntaxReader) value(n *unstable.Node, at int) *node {
	if r.values++; r.values > MaxValues {
		return nil
	}
	v := &node{at: at, inside: -1}
	if n.Raw.Length > 0 {
		v.at, v.end = int(n.Raw.Offset), int(n.Raw.Offset+n.Raw.Length)
	}
	switch n.Kind {
	case unstable.String:
		v.kind, v.text = textNode, string(n.Data)
		if raw := r.src[v.at:v.end]; len(raw) == len(n.Data)+2 && bytes.Equal(raw[1:len(raw)-1], n.Data) {
			v.inside = v.at + 1
		}
	case unstable.Bool:
		v.kind, v.text = booleanNode, string(n.Data)
	case unstable.Integer, unstable.Float:
		v.kind, v.text, v.number = numberNode, string(n.Data), numberOf(n.Data)
	case unstable.Array:
		v.kind = listNode
		for it := n.Children(); it.Next(); {
			if item := r.value(it.Node(), v.at); item != nil {
				v.items = append(v.items, item)
			}
		}
	case unstable.InlineTable:
		v.kind, v.table = tableNode, newTable(v.at)
		for it := n.Children(); it.Next(); {
			r.keyValue(v.table, it.Node())
		}
		v.table.close()
	default:
		v.kind, v.text = dateNode, string(n.Data)
	}
	return v
}

// close marks an inline table, and those that dotted keys made inside it, as complete.
func (t *table) close() {
	t.inline = true
	for _, e := range t.keys {
		if e.value.kind == tableNode {
			e.value.table.close()
		}
	}
}

// numberOf reads a TOML integer or float; NaN if it is out of range.
func numberOf(text []byte) float64 {
	plain := strings.ReplaceAll(string(text), "_", "")
	if len(plain) > 2 && plain[0] == '0' && strings.ContainsRune("xob", rune(plain[1])) {
		v, err := strconv.ParseInt(plain, 0, 64)
		if err != nil {
			return math.NaN()
		}
		return float64(v)
	}
	v, err := strconv.ParseFloat(plain, 64)
	if err != nil {
		return math.NaN()
	}
	return v
}

// tooDeep returns the offset of the first bracket that is nested more than MaxNesting deep, -1 if none is.
// It runs before the parser, which recurses. It need not be exact on text that is no TOML.
func tooDeep(src []byte) int {
	depth := 0
	for i := 0; i < len(src); i++ {
		switch c := src[i]; c {
		case '[', '{':
			if depth++; depth > MaxNesting {
				return i
			}
		case ']', '}':
			depth = max(depth-1, 0)
		case '#':
			for i+1 < len(src) && src[i+1] != '\n' {
				i++
			}
		case '"', '\'':
			i = stringEnd(src, i)
		}
	}
	return -1
}

// stringEnd returns the offset of the last byte of the TOML string that begins at i.
func stringEnd(src []byte, i int) int {
	quote, long := src[i], bytes.Repeat(src[i:i+1], 3)
	if bytes.HasPrefix(src[i:], long) {
		for i += 3; i < len(src); i++ {
			if quote == '"' && src[i] == '\\' {
				i++
			} else if bytes.HasPrefix(src[i:], long) {
				return i + 2
			}
		}
		return i
	}
	for i++; i < len(src) && src[i] != '\n'; i++ {
		if quote == '"' && src[i] == '\\' {
			i++
		} else if src[i] == quote {
			return i
		}
	}
	return i
}

// shortened cuts a text from the file for a message.
func shortened(text string) string {
	const most = 40
	if utf8.RuneCountInString(text) > most {
		return string([]rune(text)[:most]) + "…"
	}
	return text
}
