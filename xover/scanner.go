package xover

import (
	"strings"
	"unicode"
	"unicode/utf8"
)

// A token is a word or a sign of a step or a target.
type token struct {
	text string // "" at the end
	at   int    // offset in the string
}

// isNameRune tells the characters of names.
func isNameRune(c rune) bool {
	return unicode.IsLetter(c) || unicode.IsDigit(c) || c == '_' || c == '-'
}

// scan cuts a text into words, which are name characters and points, and signs, which are any other
// character but space; the last token is the end.
func scan(text string) []token {
	var tokens []token
	for at := 0; at < len(text); {
		c, size := utf8.DecodeRuneInString(text[at:])
		if unicode.IsSpace(c) {
			at += size
			continue
		}
		end := at + size
		if isWordRune(c) {
			end = at + len(text[at:]) - len(strings.TrimLeftFunc(text[at:], isWordRune))
		}
		tokens = append(tokens, token{text[at:end], at})
		at = end
	}
	return append(tokens, token{"", len(text)})
}

func isWordRune(c rune) bool { return isNameRune(c) || c == '.' }

// A cursor goes through the tokens of one string of the file.
type cursor struct {
	*parser
	n      *node
	tokens []token
	next   int
}

func (p *parser) cursor(n *node) *cursor { return &cursor{parser: p, n: n, tokens: scan(n.text)} }

func (c *cursor) peek() token { return c.tokens[c.next] }

// take returns the next token and goes past it; at the end it stays there.
func (c *cursor) take() token {
	t := c.tokens[c.next]
	if c.next < len(c.tokens)-1 {
		c.next++
	}
	return t
}

// accept takes the next token if it is text.
func (c *cursor) accept(text string) bool {
	if c.peek().text != text {
		return false
	}
	c.take()
	return true
}

// place returns where a token stands in the file: exactly, if the source has the string as it is; else where
// the string begins.
func (c *cursor) place(t token) Position {
	if c.n.inside < 0 {
		return c.pos(c.n.at)
	}
	return c.pos(c.n.inside + t.at)
}

// failAt reports an error at a token.
func (c *cursor) failAt(t token, what, mend string) {
	c.fail(c.place(t), what, mend)
}

// found says what stands at a token, for messages.
func found(t token) string {
	if t.text == "" {
		return "the end"
	}
	return `"` + shortened(t.text) + `"`
}
