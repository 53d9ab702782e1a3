package model

import (
	"fmt"
	"slices"
	"strings"
)

// didYouMean suggests the name nearest to the one typed, or nothing. Nearness is
// the number of letters changed, left out, put in or swapped with a neighbour.
// Damerau, Commun. ACM 7 (1964) 171.
func didYouMean(typed string, names []string) string {
	best, least := "", nearEnough(typed)+1
	for _, name := range names {
		if d := editDistance(strings.ToLower(typed), strings.ToLower(name), least); d < least {
			best, least = name, d
		}
	}
	if best == "" {
		return ""
	}
	return fmt.Sprintf("did you mean %q?", best)
}

// longestName is the longest name, in letters, that a suggestion is sought for.
const longestName = 64

// nearEnough is how many letters may be wrong: none in a name of one letter (only
// its case), one in a short name, a third of a longer one.
func nearEnough(typed string) int {
	n := len([]rune(typed))
	if n < 2 || n > longestName {
		return 0
	}
	return min(max(1, n/3), 4)
}

// editDistance is the restricted Damerau–Levenshtein distance; any number not
// below limit may stand for all of those.
func editDistance(a, b string, limit int) int {
	s, t := []rune(a), []rune(b)
	if d := len(s) - len(t); d >= limit || -d >= limit {
		return limit
	}
	before, last, row := make([]int, len(t)+1), make([]int, len(t)+1), make([]int, len(t)+1)
	for j := range last {
		last[j] = j
	}
	for i := 1; i <= len(s); i++ {
		row[0] = i
		for j := 1; j <= len(t); j++ {
			row[j] = min(last[j]+1, row[j-1]+1, last[j-1]+oneIf(s[i-1] != t[j-1]))
			if i > 1 && j > 1 && s[i-1] == t[j-2] && s[i-2] == t[j-1] {
				row[j] = min(row[j], before[j-2]+1)
			}
		}
		before, last, row = last, row, before
	}
	return last[len(t)]
}

func oneIf(differs bool) int {
	if differs {
		return 1
	}
	return 0
}

// allowed joins names for a hint: "allowed here: a, b, c".
func allowed(names []string) string {
	const most = 24
	if len(names) == 0 {
		return ""
	}
	if len(names) > most {
		names = append(slices.Clone(names[:most]), "…")
	}
	return "allowed here: " + strings.Join(names, ", ")
}

// join puts the parts of a hint that are not empty together.
func join(parts ...string) string {
	kept := slices.DeleteFunc(parts, func(s string) bool { return s == "" })
	return strings.Join(kept, " ")
}

// NameHint is the hint for a name that is not among those allowed: the nearest, where
// one is near enough, and the list.
func NameHint(typed string, names []string) string {
	near := didYouMean(typed, names)
	list := allowed(names)
	if near != "" && list != "" {
		return near + " " + strings.ToUpper(list[:1]) + list[1:]
	}
	return join(near, list)
}

// mostSuggestions is how many problems of a file get a suggestion or a list of
// names: beyond it the file is wrong as a whole, and the search would take long in
// a design of thousands of names.
const mostSuggestions = 50

// hinter makes hints from names, as long as they may help.
type hinter struct{ made int }

// near is NameHint of the names.
func (h *hinter) near(typed string, names func() []string) string {
	if h.made++; h.made > mostSuggestions {
		return ""
	}
	return NameHint(typed, names())
}

// list is the list of the names.
func (h *hinter) list(names func() []string) string {
	if h.made++; h.made > mostSuggestions {
		return ""
	}
	return allowed(names())
}
