package model

import (
	"errors"
	"strings"

	"github.com/pelletier/go-toml/v2/unstable"
)

// recover reports a syntax error and gives the offset to read on from: the line
// after it.
func (d *tomlDoc) recover(err error) int {
	at, message := d.base, err.Error()
	var place *unstable.ParserError
	if errors.As(err, &place) {
		at = d.base + offsetIn(d.data[d.base:], place.Highlight)
		message = place.Message
	}
	line, _ := d.src.position(min(at, len(d.src.text)-1))
	d.syntaxError(at, message)
	for i := d.read + 1; i <= line; i++ {
		d.damage(at, strings.TrimSpace(d.src.line(i)))
	}
	d.read = line
	return max(d.src.after(at), d.base+1)
}

// syntaxError words the library's message.
func (d *tomlDoc) syntaxError(at int, message string) {
	end := at >= len(d.data) || d.data[at] == '\n' || d.data[at] == '\r' || d.data[at] == '#'
	switch {
	case end && strings.Contains(message, "start of value"):
		d.errorf(at, syntaxHint(message), "a value is missing here")
	case strings.Contains(message, "cannot have new lines"):
		d.errorf(at, syntaxHint(message), "the text in quotes is not closed")
	default:
		d.errorf(at, syntaxHint(message), "this is not TOML: %s", message)
	}
}

// damage notes what a line that cannot be read may have held: a header, or a key
// of the current table.
func (d *tomlDoc) damage(at int, line string) {
	if line == "" || line[0] == '#' {
		return
	}
	if strings.HasPrefix(line, "[") {
		d.lostHeader = true
		d.current = newTable(at, headerTable)
	}
	d.current.damaged = true
	key, _, found := strings.Cut(line, "=")
	key = strings.Trim(strings.TrimSpace(key), `"'`)
	if found && isIdentifier(key) {
		d.current.lost = append(d.current.lost, key)
		return
	}
	d.current.lostKeys = true
}

// offsetIn gives the offset of a sub-slice in data, or the end of data.
func offsetIn(data, part []byte) int {
	offset := cap(data) - cap(part)
	if offset < 0 || offset > len(data) {
		return len(data)
	}
	return offset
}

// syntaxHint says what to type for the commonest slips.
func syntaxHint(message string) string {
	switch {
	case strings.Contains(message, "strings must be quoted"), strings.Contains(message, "at start of value"), strings.Contains(message, "expected keyword"):
		return `a value is a number, true, false, a text in "quotes" or a { table }`
	case strings.Contains(message, "new lines"), strings.Contains(message, "unterminated"):
		return `close the text with " on the line where it begins`
	case strings.Contains(message, "after key"):
		return "write: key = value"
	case strings.Contains(message, "start of key"):
		return "write: key = value, or a header such as [species]; a comment begins with #"
	case strings.Contains(message, "table name"):
		return "close the header: [species], [constants], [[reaction]], [core.NAME]"
	case strings.Contains(message, "inline table"):
		return "close the table with } and put commas between its entries"
	case strings.Contains(message, "decimal point"):
		return "write 0.5 for .5 and 1.0 for 1."
	case strings.Contains(message, "leading zero"):
		return "leave out the zeros at the front"
	case strings.Contains(message, "expected newline"):
		return "one entry a line; a comment begins with #"
	}
	return ""
}
