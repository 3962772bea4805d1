package quantity

import "fmt"

// An Error says what is wrong with a text and how to mend it. Every error of this package is an *Error.
type Error struct {
	What string // `"4,7 uF" has a decimal comma`
	Mend string // `write a decimal point, "4.7 uF"`
}

// Error returns both halves, "what; mend".
func (e *Error) Error() string { return e.What + "; " + e.Mend }

// maxText is the longest text, in bytes, that is looked at: no number needs more, and a longer one would
// make the message unreadable.
const maxText = 64

// quote puts a text into a message, cut short when it is long.
func quote(text string) string {
	const most = 40
	if runes := []rune(text); len(runes) > most {
		text = string(runes[:most]) + "…"
	}
	return fmt.Sprintf("%q", text)
}
