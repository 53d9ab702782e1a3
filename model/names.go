package model

import (
	"maps"
	"slices"
	"unicode"
)

// functions maps the names of the functions of rate laws to their operators.
func functions() map[string]Op {
	return map[string]Op{
		"exp": OpExp, "log": OpLog, "sqrt": OpSqrt, "min": OpMin, "max": OpMax, "abs": OpAbs,
		"hill": OpHill, "hill_fall": OpHillFall,
	}
}

// functionNames lists the functions of rate laws.
func functionNames() []string { return slices.Sorted(maps.Keys(functions())) }

// signatures says how each function is written.
func signature(op Op) string {
	switch op {
	case OpMin, OpMax:
		return opName(op) + "(a, b, …)"
	case OpHill, OpHillFall:
		return opName(op) + "(x, half, n)"
	}
	return opName(op) + "(x)"
}

// reservedWords are words that the formula grammar keeps for itself.
func reservedWords() []string {
	return []string{
		"and", "or", "not", "in", "let", "if", "else", "matches", "contains", "startsWith", "endsWith",
		"true", "false", "nil",
	}
}

// isIdentifier tells whether a name can stand in a formula: letters, digits and
// underscores, not beginning with a digit.
func isIdentifier(name string) bool {
	for i, r := range name {
		if r != '_' && !unicode.IsLetter(r) && (i == 0 || !unicode.IsDigit(r)) {
			return false
		}
	}
	return name != ""
}

// nameKind tells what a name in a formula stands for.
type nameKind uint8

const (
	speciesName nameKind = iota
	constantName
)

func (k nameKind) String() string {
	if k == speciesName {
		return "species"
	}
	return "constant"
}

// namedThing is a species or a constant: its index in the draft, where it stands
// in the file, and whether any reaction mentions it.
type namedThing struct {
	kind  nameKind
	index int
	at    int
	used  bool
	// refused marks a name that cannot be one; it is known only so that its uses
	// are not reported as well.
	refused bool
}

// nameTable resolves the names of a design.
type nameTable map[string]*namedThing

// of lists the names of one kind.
func (t nameTable) of(kind nameKind) []string {
	var out []string
	for _, name := range slices.Sorted(maps.Keys(t)) {
		if t[name].kind == kind && !t[name].refused {
			out = append(out, name)
		}
	}
	return out
}

func (t nameTable) species() []string { return t.of(speciesName) }

func (t nameTable) constants() []string { return t.of(constantName) }

// all lists the names of both kinds.
func (t nameTable) all() []string {
	return append(t.of(speciesName), t.of(constantName)...)
}
