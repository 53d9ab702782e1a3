package model

import (
	"fmt"
	"strings"
	"testing"
)

// TestProblemCaret checks that the caret comes under its place, whatever stands
// before it.
func TestProblemCaret(t *testing.T) {
	long := strings.Repeat("x + ", 500)
	for _, c := range []struct {
		line   string
		column int
		want   string
	}{
		{"abc", 2, "    abc\n     ^"},
		{"abc", 4, "    abc\n       ^"},
		{"\tåb́c", 5, "    \tåb́c\n    \t  ^"}, // the accent is a character that takes no room
		{"a\x1bb", 3, "    a\ufffdb\n      ^"},
		{long, 1001, "    …" + long[940:1050] + "…\n     " + strings.Repeat(" ", 60) + "^"},
		{long, 1, "    " + long[:110] + "…\n    ^"},
	} {
		p := Problem{File: "f", Line: 3, Column: c.column, SourceLine: c.line, Message: "m", Hint: "h"}
		want := fmt.Sprintf("f:3:%d: m\n%s\n    h", c.column, c.want)
		if got := p.String(); got != want {
			t.Errorf("got\n%s\nwant\n%s", got, want)
		}
	}
}

// TestPositions checks lines and columns over all line ends.
func TestPositions(t *testing.T) {
	s := newSource("f", "ab\r\nçd\n\nx")
	for _, c := range []struct{ offset, line, column int }{
		{0, 1, 1}, {1, 1, 2}, {2, 1, 3}, {4, 2, 1}, {5, 2, 1}, {6, 2, 2}, {8, 3, 1}, {9, 4, 1}, {10, 4, 2}, {99, 4, 2}, {-1, 1, 1},
	} {
		if line, column := s.position(c.offset); line != c.line || column != c.column {
			t.Errorf("offset %d is at %d:%d, want %d:%d", c.offset, line, column, c.line, c.column)
		}
	}
	for i, want := range []string{"ab", "çd", "", "x"} {
		if got := s.line(i + 1); got != want {
			t.Errorf("line %d is %q, want %q", i+1, got, want)
		}
	}
}

// TestNearNames checks the suggestions; the distances are counted by hand.
func TestNearNames(t *testing.T) {
	names := []string{"protein", "mrna", "k", "copies", "half", "proteins"}
	for typed, want := range map[string]string{
		"protien":  "protein", // two letters swapped: 1
		"protei":   "protein", // one letter short, and two of proteins
		"Protein":  "protein", // case only: 0
		"portien":  "protein", // two swaps: 2 of 7
		"mRNA":     "mrna",
		"rna":      "mrna",
		"K":        "k",
		"q":        "",
		"kk":       "k",
		"copeis":   "copies",
		"quantity": "",
		"":         "",
		"haLf_":    "half",
	} {
		got := didYouMean(typed, names)
		if want != "" {
			want = fmt.Sprintf("did you mean %q?", want)
		}
		if got != want {
			t.Errorf("%q: %q, want %q", typed, got, want)
		}
	}
	for _, c := range []struct {
		a, b string
		want int
	}{{"kitten", "sitting", 3}, {"ab", "ba", 1}, {"", "abc", 3}, {"abc", "abc", 0}, {"ca", "abc", 3}} {
		if got := editDistance(c.a, c.b, 99); got != c.want {
			t.Errorf("distance of %q and %q is %d, want %d", c.a, c.b, got, c.want)
		}
	}
}
