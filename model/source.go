package model

import (
	"fmt"
	"slices"
	"sort"
	"strings"
	"unicode/utf8"
)

// source is a design file's text with the offsets at which its lines begin.
type source struct {
	name, text string
	lines      []int
}

func newSource(name, text string) *source {
	s := &source{name: name, text: text, lines: []int{0}}
	for i := range len(text) {
		if text[i] == '\n' {
			s.lines = append(s.lines, i+1)
		}
	}
	return s
}

// position gives the line and column, from 1, of a byte offset.
func (s *source) position(offset int) (line, column int) {
	offset = min(max(offset, 0), len(s.text))
	for offset > 0 && offset < len(s.text) && !utf8.RuneStart(s.text[offset]) {
		offset-- // to the beginning of the character
	}
	line = sort.SearchInts(s.lines, offset+1)
	return line, utf8.RuneCountInString(s.text[s.lines[line-1]:offset]) + 1
}

// line gives the text of a line, from 1, without its end.
func (s *source) line(n int) string {
	end := len(s.text)
	if n < len(s.lines) {
		end = s.lines[n] - 1
	}
	return strings.TrimSuffix(s.text[s.lines[n-1]:end], "\r")
}

// after gives the offset of the line that follows the one holding offset, or the
// length of the text.
func (s *source) after(offset int) int {
	line, _ := s.position(offset)
	if line < len(s.lines) {
		return s.lines[line]
	}
	return len(s.text)
}

// reporter gathers what is wrong with a design file, and what is worth a note.
type reporter struct {
	src             *source
	problems, notes Problems
	hinter          hinter
}

// errorf adds a problem at a byte offset.
func (r *reporter) errorf(offset int, hint, format string, args ...any) {
	r.problems = append(r.problems, r.problem(offset, hint, format, args...))
}

// notef adds a note at a byte offset.
func (r *reporter) notef(offset int, hint, format string, args ...any) {
	r.notes = append(r.notes, r.problem(offset, hint, format, args...))
}

func (r *reporter) problem(offset int, hint, format string, args ...any) Problem {
	line, column := r.src.position(offset)
	text := r.src.line(line)
	return Problem{
		File: r.src.name, Line: line, SourceLine: text,
		Column:  min(column, utf8.RuneCountInString(text)+1), // not behind the line's end
		Message: fmt.Sprintf(format, args...), Hint: hint,
	}
}

// lineOf gives the line of an offset, for messages that point back.
func (r *reporter) lineOf(offset int) int {
	line, _ := r.src.position(offset)
	return line
}

// err gives the problems in the order of the file, or nil.
func (r *reporter) err() error {
	if len(r.problems) == 0 {
		return nil
	}
	sortByPlace(r.problems)
	return r.problems
}

func sortByPlace(p Problems) {
	slices.SortStableFunc(p, func(a, b Problem) int {
		if a.Line != b.Line {
			return a.Line - b.Line
		}
		return a.Column - b.Column
	})
}
