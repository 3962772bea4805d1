package driver

import (
	"bytes"
	"encoding/binary"
	"iter"
	"strings"
	"unicode/utf16"
	"unicode/utf8"
)

// decode returns the text of a file in UTF-8, UTF-16 or Latin-1; ok is false if it is none of them. UTF-16 is known by
// its byte-order mark, or by a zero in every other byte, as plain text has it. Text that is not UTF-8 is Latin-1, whose
// bytes are the first 256 code points; above 127 it matters in comments only.
func decode(src []byte) (text string, ok bool) {
	switch {
	case bytes.HasPrefix(src, []byte{0xFF, 0xFE}):
		text = decodeUTF16(src[2:], binary.LittleEndian)
	case bytes.HasPrefix(src, []byte{0xFE, 0xFF}):
		text = decodeUTF16(src[2:], binary.BigEndian)
	case bytes.IndexByte(src, 0) >= 0:
		var zeros [2]int // at even and at odd places
		for i, b := range src {
			if b == 0 {
				zeros[i%2]++
			}
		}
		switch most := len(src) / 2; {
		case zeros[0] == 0 && 4*zeros[1] >= 3*most:
			text = decodeUTF16(src, binary.LittleEndian)
		case zeros[1] == 0 && 4*zeros[0] >= 3*most:
			text = decodeUTF16(src, binary.BigEndian)
		default:
			return "", false
		}
	case utf8.Valid(src):
		text = string(bytes.TrimPrefix(src, []byte("\uFEFF")))
	default:
		var b strings.Builder
		for _, c := range src {
			b.WriteRune(rune(c))
		}
		text = b.String()
	}
	// Control-Z ends text files of old systems.
	return strings.TrimRight(text, "\x1A"), strings.IndexByte(text, 0) < 0
}

// decodeUTF16 decodes whole units; half a one at the end is dropped.
func decodeUTF16(src []byte, order binary.ByteOrder) string {
	var b strings.Builder
	b.Grow(len(src) / 2)
	for len(src) >= 2 {
		r := rune(order.Uint16(src))
		src = src[2:]
		if utf16.IsSurrogate(r) && len(src) >= 2 {
			if pair := utf16.DecodeRune(r, rune(order.Uint16(src))); pair != utf8.RuneError {
				r, src = pair, src[2:]
			}
		}
		b.WriteRune(r) // a lone surrogate becomes U+FFFD
	}
	return b.String()
}

// lines yields the lines of a text, numbered from 1, without the space around them and the quotes around numbers. They end in LF, CR LF or CR.
func lines(text string) iter.Seq2[int, string] {
	return func(yield func(int, string) bool) {
		for no := 1; len(text) > 0; no++ {
			line := text
			if i := strings.IndexAny(text, "\r\n"); i < 0 {
				text = ""
			} else {
				line = text[:i]
				if strings.HasPrefix(text[i:], "\r\n") {
					i++
				}
				text = text[i+1:]
			}
			if !yield(no, unquoted(strings.TrimSpace(line))) {
				return
			}
		}
	}
}
