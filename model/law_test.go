package model

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"
)

// TestLawValues holds formulas against values worked out by hand, at x = 3, y = 0.5,
// z = 0, a = 2, b = 4. Powers bind tightest and from right to left, a sign less
// tightly than a power: common practice in written mathematics.
func TestLawValues(t *testing.T) {
	for text, want := range map[string]float64{
		"1 + 2*3":            7,
		"(1 + 2)*3":          9,
		"8 - 3 - 2":          3,
		"8/4/2":              1,
		"2^3^2":              512,
		"-x^2":               -9,
		"(-x)^2":             9,
		"2^-1":               0.5,
		"2^-1^2":             0.5,
		"-2^-2":              -0.25,
		"-x*y":               -1.5,
		"x - -y":             3.5,
		"--x":                3,
		"+x":                 3,
		"x*-y":               -1.5,
		"a*x^2/(b + x^2)":    18. / 13,
		"exp(0)":             1,
		"log(exp(1))":        1,
		"sqrt(x + 1)":        2,
		"min(x, y)":          0.5,
		"min(x, y, z, a)":    0,
		"max(1, x, a)":       3,
		"abs(y - x)":         2.5,
		"hill(x, 3, 2)":      0.5,
		"hill_fall(x, 3, 2)": 0.5,
		"hill(x, 1, 2)":      0.9,
		"hill_fall(x, 1, 2)": 0.1,
		"hill(z, 1, 2)":      0,
		"hill_fall(z, 1, 2)": 1,
		"hill(x, a, b)":      81. / 97,
		"1e3":                1000,
		"1.5e-2":             0.015,
		".5":                 0.5,
		"2.":                 2,
		"9007199254740993":   9007199254740992,
		"x\n  + y":           3.5,
		"x\t+\ty":            3.5,
		strings.Repeat("(", 200) + "x" + strings.Repeat(")", 200): 3,
		strings.Repeat("-", 500) + "x":                            3,
		"x" + strings.Repeat("+x", 4000):                          12003,
		"1" + strings.Repeat("^1", 4000):                          1,
	} {
		got := law(t, text).Eval([]float64{3, 0.5, 0}, []float64{2, 4})
		if !near(got, want) {
			t.Errorf("%.60s = %v, want %v", text, got, want)
		}
	}
}

// TestLawRefusals checks that what is not of the formula language is refused, at
// the character where it stands (from 0).
func TestLawRefusals(t *testing.T) {
	long := strings.Repeat("(", 201) + "x" + strings.Repeat(")", 201)
	for _, c := range []struct {
		text    string
		at      int
		message string
	}{
		{"", 0, "empty"},
		{"  ", 0, "empty"},
		{"x +", 3, "breaks off"},
		{"x + * y", 4, `"*" cannot stand here`},
		{"* x", 0, `"*" cannot stand here`},
		{"()", 1, `")" cannot stand here`},
		{"(x", 2, "not closed"},
		{"x)", 1, "closes nothing"},
		{"x y", 2, "operator is missing"},
		{"2x", 1, "runs into a name"},
		{"2 x", 2, "operator is missing"},
		{"x 2", 2, "operator is missing"},
		{"(x)(y)", 3, "operator is missing"},
		{"2(x)", 1, "operator is missing"},
		{"x(y)", 0, "is a species, not a function"},
		{"a(y)", 0, "is a constant, not a function"},
		{"x + 'y'", 4, "text in quotes"},
		{"x + `y`", 4, "text in quotes"},
		{"x + b'y'", 4, "text in quotes"},
		{"[x]", 0, `"[" cannot stand`},
		{"{x: 1}", 0, `"{" cannot stand`},
		{"x[0]", 1, `"[" cannot stand`},
		{"x.y", 1, `"." cannot stand`},
		{"x?.y", 1, `"?." cannot stand`},
		{"x ? y : z", 2, "no cases"},
		{"x ?? y", 2, "no cases"},
		{"if x > 1 { y } else { z }", 0, "no cases"},
		{"x > y", 2, "no comparisons"},
		{"x == y", 2, "no comparisons"},
		{"x < y", 2, "no comparisons"},
		{"x && y", 2, "cannot stand"},
		{"x and y", 2, "cannot stand"},
		{"not x", 0, "cannot stand"},
		{"!x", 0, "cannot stand"},
		{"x in y", 2, "cannot stand"},
		{"x | max(y)", 2, "cannot stand"},
		{"let q = 1; q", 0, "cannot stand"},
		{"x; y", 1, "cannot stand"},
		{"x ** 2", 2, "** is not an operator"},
		{"x % 2", 2, "% is not an operator"},
		{"1..2", 1, "cannot stand"},
		{"true", 0, "cannot stand"},
		{"x + nil", 4, "cannot stand"},
		{"#", 0, "cannot stand"},
		{"map(x, # + 1)", 0, "there is no function"},
		{"::abs(x)", 0, "cannot stand"},
		{"x, y", 1, `"," cannot stand here`},
		{"min(x,)", 5, "argument is missing"},
		{"min(,x)", 4, "cannot stand here"},
		{"min(x,,y)", 5, "argument is missing"},
		{"0x10", 0, "not written plainly"},
		{"0b1", 0, "not written plainly"},
		{"1_000", 0, "not written plainly"},
		{"1e", 0, "cannot be read"},
		{"1e999", 0, "too large"},
		{"99999999999999999999", 0, "too long"},
		{"x // rest", 2, "comments"},
		{"x /* mid */ + y", 2, "comments"},
		{"x + y /* end", 11, "no meaning"},
		{"x @ y", 2, "no meaning"},
		{"x × y", 2, "no meaning"},
		{"x − y", 2, "no meaning"},
		{"x = y", 2, "cannot stand"},
		{"exq(x)", 0, `no function "exq"`},
		{"len(x)", 0, `no function "len"`},
		{"count(x, # > 1)", 0, `no function "count"`},
		{"now()", 0, `no function "now"`},
		{"pow(x, 2)", 0, `no function "pow"`},
		{"hill(x, 2)", 0, "three arguments"},
		{"hill(x, 1, 2, 3)", 0, "three arguments"},
		{"exp(x, y)", 0, "one argument"},
		{"exp()", 0, "one argument"},
		{"min(x)", 0, "two arguments or more"},
		{"exp", 0, "needs its arguments"},
		{"x + exp", 4, "needs its arguments"},
		{"x + w", 4, `no species or constant is called "w"`},
		{"$env", 0, `no species or constant is called "$env"`},
		{long, 200, "nested deeper than 200"},
		{"x" + strings.Repeat("+x", 6000), 0, "more than 10000 parts"},
		{strings.Repeat(" ", 100_001) + "x", 0, "longer than 100000"},
	} {
		p := lawParser{text: c.text, names: testNames(), hinter: &hinter{}}
		tree := p.parse()
		if tree != nil || len(p.errors) == 0 {
			t.Errorf("%.60q was accepted", c.text)
			continue
		}
		slices.SortFunc(p.errors, func(a, b lawError) int { return a.rune - b.rune })
		e := p.errors[0]
		if e.rune != c.at || !strings.Contains(e.message, c.message) {
			t.Errorf("%.60q: at %d: %s; want at %d: %s", c.text, e.rune, e.message, c.at, c.message)
		}
	}
}

// TestLawForeignNames checks that species may have names that the parser's own
// language uses for functions.
func TestLawForeignNames(t *testing.T) {
	for _, name := range []string{"count", "sum", "len", "now", "filter", "map", "all", "reduce", "int", "float", "e", "pi", "_", "β", "blåbær"} {
		names := nameTable{name: {kind: speciesName}}
		p := lawParser{text: fmt.Sprintf("2*%s/(1 + %s)", name, name), names: names, hinter: &hinter{}}
		tree := p.parse()
		if tree == nil {
			t.Errorf("%s: %v", name, p.errors)
			continue
		}
		if got := tree.Eval([]float64{3}, nil); got != 1.5 {
			t.Errorf("%s: value %v, want 1.5", name, got)
		}
	}
}

// TestLawSeveralErrors checks that one formula reports all it can.
func TestLawSeveralErrors(t *testing.T) {
	p := lawParser{text: "w + exq(v) + hill(x) + 2 ** y", names: testNames(), hinter: &hinter{}}
	p.parse()
	var at []int
	for _, e := range p.errors {
		at = append(at, e.rune)
	}
	if fmt.Sprint(at) != "[25 0 4 8]" {
		t.Errorf("errors at %v: %+v", at, p.errors)
	}
	p = lawParser{text: "w + hill(x) + v", names: testNames(), hinter: &hinter{}}
	p.parse()
	if len(p.errors) != 3 {
		t.Errorf("%d errors, want 3: %+v", len(p.errors), p.errors)
	}
}

// TestFormatRoundTrip checks that writing a tree and parsing it again gives the
// same tree.
func TestFormatRoundTrip(t *testing.T) {
	species, constants := []string{"x", "y", "z"}, []string{"a", "b"}
	for _, text := range []string{
		"a + b*x^2/(a^2 + x^2)", "x - (y - z)", "x - y - z", "x/(y/z)", "x/y/z", "x/(y*z)",
		"(x + y)*(x - y)", "-x^2", "(-x)^2", "-(x*y)", "-x*y", "x^y^z", "(x^y)^z", "2^-x", "--x", "x - -y",
		"hill(x, a, b)*hill_fall(y + z, a, 2.5)", "min(min(x, y), z)", "exp(-x)", "1e-05*x", "(x*y)^2", "x^(y*z)",
	} {
		tree := law(t, text)
		written := tree.Format(species, constants)
		if again := law(t, written); !equal(tree, again) {
			t.Errorf("%s is written %s, which is another tree", text, written)
		}
		if len(written) > len(text)+2 {
			t.Errorf("%s is written %s, with more parentheses than it needs", text, written)
		}
	}
}

func equal(a, b *Node) bool {
	if a.Op != b.Op || a.Value != b.Value || a.Index != b.Index || len(a.Args) != len(b.Args) {
		return false
	}
	for i := range a.Args {
		if !equal(a.Args[i], b.Args[i]) {
			return false
		}
	}
	return true
}

// TestBindFolds checks which identities are applied, and which are not.
func TestBindFolds(t *testing.T) {
	species, constants := []string{"x", "y", "z"}, []string{"a", "b"}
	for text, want := range map[string]string{
		"a + b":             "5",
		"x*1":               "x",
		"1*x":               "x",
		"x/1":               "x",
		"x^1":               "x",
		"x + 0":             "x",
		"0 + x":             "x",
		"x - 0":             "x",
		"0 - x":             "0 - x",
		"--x":               "x",
		"x + -y":            "x - y",
		"x - -y":            "x + y",
		"x*(a - 1)":         "x", // a is 2
		"x*0":               "x*0",
		"0*x":               "0*x",
		"x^0":               "x^0",
		"0/x":               "0/x",
		"x - x":             "x - x",
		"x/x":               "x/x",
		"1^x":               "1^x",
		"a*b*x":             "6*x",
		"x*a*b":             "x*2*3",
		"hill(x, a*b, a+b)": "hill(x, 6, 5)",
		"exp(0)*x":          "x",
		"log(0)*x":          "-Inf*x",
	} {
		if got := law(t, text).Bind([]float64{2, 3}).Format(species, constants); got != want {
			t.Errorf("%s is folded to %s, want %s", text, got, want)
		}
	}
}

// TestReads checks which species and constants a law reads.
func TestReads(t *testing.T) {
	tree := law(t, "z*b + x^a/(1 + z)")
	if got := fmt.Sprint(tree.Reads(), tree.Constants()); got != "[0 2] [0 1]" {
		t.Errorf("reads %s", got)
	}
}

// TestHillExtremes checks that the Hill function neither overflows nor loses its
// small tail: x = k·10^±200 with n = 4 lies beyond the powers' range.
func TestHillExtremes(t *testing.T) {
	for _, c := range []struct{ x, k, n, want float64 }{
		{1e200, 1, 4, 1},
		{1e-60, 1, 4, 1e-240},
		{1, 1e60, 4, 1e-240},
		{1e300, 1e300, 9, 0.5},
		{2, 1, -2, 0.2},
		{0, 1, -2, 1},
	} {
		if got := hill(c.x, c.k, c.n); math.Abs(got-c.want) > 1e-13*c.want {
			t.Errorf("hill(%g, %g, %g) = %g, want %g", c.x, c.k, c.n, got, c.want)
		}
	}
}
