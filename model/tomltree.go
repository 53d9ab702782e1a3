package model

import (
	"strings"

	"github.com/pelletier/go-toml/v2/unstable"
)

// tomlValue is a value of a TOML file with the byte offset at which it begins.
type tomlValue struct {
	kind unstable.Kind
	at   int
	// text is the value of a string, or the characters of a number.
	text string
	// raw is a string as it stands in the file, quotes and all.
	raw   string
	items []tomlValue // of an array
	table *tomlTable  // of an inline table, or of a table with a header
}

// tomlEntry is a key with its value.
type tomlEntry struct {
	key   string
	at    int
	value tomlValue
}

// tomlTable is a table in the order of the file.
type tomlTable struct {
	at      int
	entries []tomlEntry
	index   map[string]int
	origin  tomlOrigin
	// damaged tells that part of the table could not be read, so that what is
	// missing from it says nothing; lost are the keys of that part, where they
	// could be made out, and lostKeys tells that some could not.
	damaged, lostKeys bool
	lost              []string
}

// tomlOrigin is how a table came to be, which decides what may be added to it.
type tomlOrigin uint8

const (
	impliedTable tomlOrigin = iota // named in the path of another's header
	headerTable                    // by its own header
	dottedTable                    // by a key with dots
	inlineTable                    // by braces; closed
)

func newTable(at int, origin tomlOrigin) *tomlTable {
	return &tomlTable{at: at, index: map[string]int{}, origin: origin}
}

// get gives the entry of a key, or nil.
func (t *tomlTable) get(key string) *tomlEntry {
	if i, ok := t.index[key]; ok {
		return &t.entries[i]
	}
	return nil
}

func (t *tomlTable) put(e tomlEntry) {
	t.index[e.key] = len(t.entries)
	t.entries = append(t.entries, e)
}

// keyPart is one part of a dotted key.
type keyPart struct {
	name string
	at   int
}

// valueKind names a value's kind for messages.
func (v *tomlValue) valueKind() string {
	switch v.kind {
	case unstable.String:
		return "a string"
	case unstable.Bool:
		return "true or false"
	case unstable.Integer, unstable.Float:
		return "a number"
	case unstable.Array:
		return "a list"
	case unstable.ArrayTable:
		return "a list of tables"
	case unstable.InlineTable, unstable.Table:
		return "a table"
	}
	return "a date or time"
}

// runeOffsets gives, for each rune of the string's value and for its end, the
// byte offset in the file where the rune stands; escapes are undone.
func (v *tomlValue) runeOffsets() []int {
	quotes := 1
	if strings.HasPrefix(v.raw, `"""`) || strings.HasPrefix(v.raw, "'''") {
		quotes = 3
	}
	body := v.raw[quotes : len(v.raw)-quotes]
	skip := 0
	if quotes == 3 {
		skip = leadingLineEnd(body)
	}
	start := v.at + quotes + skip
	if v.raw[0] == '\'' {
		return plainOffsets(body[skip:], start)
	}
	return escapedOffsets(body[skip:], start)
}

func leadingLineEnd(s string) int {
	switch {
	case strings.HasPrefix(s, "\n"):
		return 1
	case strings.HasPrefix(s, "\r\n"):
		return 2
	}
	return 0
}

func plainOffsets(s string, start int) []int {
	var out []int
	for i := range s {
		out = append(out, start+i)
	}
	return append(out, start+len(s))
}

func escapedOffsets(s string, start int) []int {
	var out []int
	for i := 0; i < len(s); {
		n := escapeLength(s[i:])
		if n == 0 { // a line end that is escaped, and the blanks after it
			rest := strings.TrimLeft(s[i+1:], " \t\r\n")
			i = len(s) - len(rest)
			continue
		}
		out = append(out, start+i)
		i += n
	}
	return append(out, start+len(s))
}

// escapeLength is the bytes of the character or escape at the head of s, 0 for an
// escaped line end.
func escapeLength(s string) int {
	if s[0] != '\\' {
		for i := range s {
			if i > 0 {
				return i
			}
		}
		return len(s)
	}
	switch s[1] {
	case 'x':
		return 4
	case 'u':
		return 6
	case 'U':
		return 10
	case ' ', '\t', '\r', '\n':
		return 0
	}
	return 2
}
