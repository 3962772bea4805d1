package cli

import (
	"bytes"
	"encoding/json"
	"strings"
	"unicode"
)

// tomlString writes a text as a TOML string. What JSON escapes, TOML understands; the delete character, which
// JSON lets stand, TOML does not allow.
func tomlString(text string) string {
	var b bytes.Buffer
	e := json.NewEncoder(&b)
	e.SetEscapeHTML(false)
	if err := e.Encode(text); err != nil {
		panic(err) // a string can always be encoded
	}
	return strings.ReplaceAll(strings.TrimSuffix(b.String(), "\n"), "\x7f", `\u007f`)
}

// tomlList writes texts as a TOML array of strings.
func tomlList(texts []string) string {
	all := make([]string, len(texts))
	for i, text := range texts {
		all[i] = tomlString(text)
	}
	return "[" + strings.Join(all, ", ") + "]"
}

// tomlKey writes a name as a TOML key, in quotes only if it needs them.
func tomlKey(name string) string {
	bare := name != "" && strings.IndexFunc(name, func(r rune) bool {
		return r > unicode.MaxASCII || !unicode.IsLetter(r) && !unicode.IsDigit(r) && r != '-' && r != '_'
	}) < 0
	if bare {
		return name
	}
	return tomlString(name)
}
