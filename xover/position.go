package xover

import (
	"bytes"
	"sort"
	"unicode/utf8"
)

// A locator turns byte offsets of a text into Positions. It is not for concurrent use.
type locator struct {
	src   []byte
	lines []int // offset of the first byte of each line
	// The last answer: places are mostly asked for in rising order, and a file may be one long line.
	last    int
	lastPos Position
}

func newLocator(src []byte) *locator {
	l := &locator{src: src, lines: []int{0}, lastPos: Position{1, 1}}
	for at := 0; ; {
		next := bytes.IndexByte(src[at:], '\n')
		if next < 0 {
			return l
		}
		at += next + 1
		l.lines = append(l.lines, at)
	}
}

// position returns the line and column of the byte at offset; an offset outside the text counts as its
// nearest end.
func (l *locator) position(offset int) Position {
	offset = min(max(offset, 0), len(l.src))
	for offset > 0 && offset < len(l.src) && !utf8.RuneStart(l.src[offset]) { // inside a character: where it begins
		offset--
	}
	line := sort.SearchInts(l.lines, offset+1) // lines that begin at or before offset
	from, column := l.lines[line-1], 1
	if line == l.lastPos.Line && offset >= l.last {
		from, column = l.last, l.lastPos.Column
	}
	pos := Position{line, column + utf8.RuneCount(l.src[from:offset])}
	l.last, l.lastPos = offset, pos
	return pos
}
