package model

import (
	"fmt"
	"strings"
	"unicode"
)

// A Problem is one thing that is wrong, or worth a look, in a design file.
type Problem struct {
	// File is the file's name as it was given.
	File string
	// Line and Column count from 1; Column counts characters (runes).
	Line, Column int
	// Message says what is wrong; Hint says what is allowed, or what to type.
	Message, Hint string
	// SourceLine is the line of the file, without its end.
	SourceLine string
}

// Problems are all the errors of one design file, in the order of the file.
type Problems []Problem

// Error lists every problem: file, line and column, what is wrong, the line of
// the file with a caret under the place, and what to type.
func (p Problems) Error() string {
	parts := make([]string, len(p))
	for i, q := range p {
		parts[i] = q.String()
	}
	return strings.Join(parts, "\n\n")
}

// String gives the problem on several lines, without a final line end.
func (p Problem) String() string {
	var b strings.Builder
	fmt.Fprintf(&b, "%s:%d:%d: %s", p.File, p.Line, p.Column, p.Message)
	if line, indent := p.excerpt(); line != "" {
		fmt.Fprintf(&b, "\n    %s\n    %s^", line, indent)
	}
	if p.Hint != "" {
		fmt.Fprintf(&b, "\n    %s", p.Hint)
	}
	return b.String()
}

// A long source line is shown as a window of this many characters around the
// place, beginning at most windowBefore characters before it.
const (
	windowWidth  = 110
	windowBefore = 60
)

// excerpt gives the source line, or a window of it, and the blanks that bring a
// caret under the column.
func (p Problem) excerpt() (line, indent string) {
	runes := []rune(p.SourceLine)
	at := min(max(p.Column-1, 0), len(runes))
	from, to, left, right := 0, len(runes), "", ""
	if len(runes) > windowWidth && at > windowBefore {
		from, left = at-windowBefore, "…"
	}
	if to-from > windowWidth {
		to, right = from+windowWidth, "…"
	}
	line = left + visible(runes[from:to]) + right
	return line, strings.Repeat(" ", len([]rune(left))) + blanks(runes[from:at])
}

// visible replaces control characters, which would move the cursor of a
// terminal, by a mark; tabs stay.
func visible(runes []rune) string {
	return strings.Map(func(r rune) rune {
		if r != '\t' && unicode.IsControl(r) {
			return unicode.ReplacementChar
		}
		return r
	}, string(runes))
}

// blanks is as wide as the runes on a terminal: tabs stay tabs, marks that sit on
// the character before them take no room.
func blanks(runes []rune) string {
	var b strings.Builder
	for _, r := range runes {
		switch {
		case r == '\t':
			b.WriteByte('\t')
		case unicode.In(r, unicode.Mn, unicode.Me, unicode.Cf):
		default:
			b.WriteByte(' ')
		}
	}
	return b.String()
}
