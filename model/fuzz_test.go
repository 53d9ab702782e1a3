package model

import (
	"errors"
	"io"
	"math"
	"os"
	"path/filepath"
	"testing"
)

// FuzzParse checks that no text makes Parse, Bind or Describe panic or run away,
// that every error is Problems with a place inside the file, and that a file
// without errors can be bound.
func FuzzParse(f *testing.F) {
	for _, pattern := range []string{"../testdata/bad/*.toml", "../testdata/designs/*.toml"} {
		files, err := filepath.Glob(pattern)
		if err != nil {
			f.Fatal(err)
		}
		for _, path := range files {
			text, err := os.ReadFile(path)
			if err != nil {
				f.Fatal(err)
			}
			f.Add(text)
		}
	}
	f.Add([]byte(good))
	f.Add([]byte("a=[[[[[[[[[[{b={c=[{}]}}]]]]]]]]]]]\n[a.b]\n[[a]]\n[a]\na.b.c=1\n\"\"='''\n'''"))
	f.Fuzz(func(t *testing.T, text []byte) {
		d, err := Parse("f.toml", text)
		if err != nil {
			checkProblems(t, err, len(text))
			return
		}
		n, err := d.Bind(0, nil)
		if err != nil {
			t.Fatalf("a design without errors does not bind: %v", err)
		}
		if err := n.Describe(io.Discard); err != nil {
			t.Fatal(err)
		}
	})
}

func checkProblems(t *testing.T, err error, size int) {
	t.Helper()
	var problems Problems
	if !errors.As(err, &problems) || len(problems) == 0 {
		t.Fatalf("the error is not Problems: %v", err)
	}
	for _, p := range problems {
		if p.Line < 1 || p.Column < 1 || p.Line > size+1 || p.Column > len([]rune(p.SourceLine))+1 {
			t.Fatalf("the place is outside the file: %+v", p)
		}
	}
	_ = err.Error()
}

// FuzzLaw checks that no formula makes the parser or the compiler panic, and that
// the program gives what the tree gives.
func FuzzLaw(f *testing.F) {
	for _, text := range []string{
		shortLaw, longLaw, "-x^2^-y", "min(x, y, z)*hill_fall(a, b, x)", "count(x)", "x | y", "let x = 1; x", "[x for y]", "x//y",
		"#x", "::x", "x?.y", "((((x))))", "1e5.5", "0x1p3", "'a' + `b`", "b'\\x00'", "\xff", "if x {1} else {2}", "not not x", "..", "?:",
	} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		p := lawParser{text: text, names: testNames(), hinter: &hinter{}}
		tree := p.parse()
		if (tree == nil) != (len(p.errors) > 0) {
			t.Fatalf("tree %v with errors %v", tree, p.errors)
		}
		if tree == nil {
			return
		}
		bound := tree.Bind([]float64{1.5, 2})
		x := []float64{0.3, 1.2, 2}
		got, want := Compile(bound).Eval(x), bound.Eval(x, nil)
		if got != want && !(math.IsNaN(got) && math.IsNaN(want)) {
			t.Fatalf("program %v, tree %v", got, want)
		}
		bound.Gradient(x, nil, make([]float64, 3), nil)
		written := tree.Format([]string{"x", "y", "z"}, []string{"a", "b"})
		again := lawParser{text: written, names: testNames(), hinter: &hinter{}}
		if again.parse() == nil && len(written) < longestFormula {
			t.Fatalf("%q is written %q, which does not parse: %v", text, written, again.errors)
		}
	})
}
