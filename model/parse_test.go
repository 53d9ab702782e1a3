package model

import (
	"errors"
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

var update = flag.Bool("update", false, "write the golden files anew")

// golden holds got against a stored text.
func golden(t *testing.T, path, got string) {
	t.Helper()
	if *update {
		if err := os.WriteFile(path, []byte(got), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if got != string(want) {
		t.Errorf("%s differs; got:\n%s", path, got)
	}
}

// TestBadDesigns holds the whole error of every bad design against its stored text.
func TestBadDesigns(t *testing.T) {
	files, err := filepath.Glob("../testdata/bad/*.toml")
	if err != nil || len(files) < 20 {
		t.Fatalf("%d bad designs found: %v", len(files), err)
	}
	for _, path := range files {
		text, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		_, err = Parse(filepath.Base(path), text)
		var problems Problems
		if !errors.As(err, &problems) {
			t.Errorf("%s: the error is %v, not Problems", path, err)
			continue
		}
		golden(t, strings.TrimSuffix(path, ".toml")+".txt", err.Error()+"\n")
	}
}

// good is a small design that tests change in one place.
const good = `title = "t"
time = "min"
generation = 40
copies = 10

[species]
x = { start = 1 }
y = { start = 2, readout = true }
g = { start = 1, fixed_count = true }

[constants]
k = 2.0
h = 1.5

[[reaction]]
name = "make"
needs = { g = 1 }
makes = { x = 1, y = { burst = "2*k" } }
rate = "k*g*hill(x, h, 2)"

[[reaction]]
name = "lose x"
uses = { x = 1 }
mass_action = "k/2"

[[reaction]]
name = "lose y"
uses = { y = 2 }
needs = { y = 1 }
mass_action = 0.5

[core.high]
x = { min = 4 }
y = { min = 1, max = 9 }
`

// changed gives the good design with one text replaced, and the line and column
// where a mark, if the new text has one ("‸"), stands; the mark is taken out.
func changed(t *testing.T, old, replacement string) (text string, line, column int) {
	t.Helper()
	if !strings.Contains(good, old) {
		t.Fatalf("the good design has no %q", old)
	}
	text = strings.Replace(good, old, replacement, 1)
	before, after, _ := strings.Cut(text, "‸")
	line = strings.Count(before, "\n") + 1
	column = len([]rune(before[strings.LastIndex(before, "\n")+1:])) + 1
	return before + after, line, column
}

// TestOneProblem makes one mistake at a time in a good design. Each must give
// exactly one problem, at the mark.
func TestOneProblem(t *testing.T) {
	for _, c := range []struct{ old, new, message string }{
		{`time = "min"`, `time = ‸""`, "empty"},
		{`time = "min"`, `time = ‸5`, "must be a text"},
		{`title = "t"`, `‸tite = "t"`, `unknown key "tite"`},
		{`generation = 40`, `generation = ‸0`, "not allowed"},
		{`generation = 40`, `generation = ‸inf`, "not allowed"},
		{`generation = 40`, `generation = ‸1979-05-27`, "a date or time"},
		{`copies = 10`, `copies = ‸-1.0`, "not allowed"},
		{`copies = 10`, `copies = ‸nan`, "not allowed"},
		{`copies = 10`, `copies = ‸"10"`, "must be a number"},
		{`copies = 10`, `copies.‸of = 10`, ""},
		{`x = { start = 1 }`, `x = { ‸begin = 1 }`, `unknown key "begin"`},
		{`x = { start = 1 }`, `x = { start = ‸-1 }`, "not allowed"},
		{`x = { start = 1 }`, `x = { start = ‸true }`, "must be a number"},
		{`x = { start = 1 }`, `x = ‸1`, "must be a table"},
		{`x = { start = 1 }`, `‸x = { start = 1e16 }`, "more than can be counted"},
		{`x = { start = 1 }`, `x = { start = 1, ‸start = 2 }`, "given twice"},
		{`x = { start = 1 }`, "x = { start = 1 }\n‸x = { start = 1 }", "given twice"},
		{`x = { start = 1 }`, "x = { start = 1, ‸readout = true }", ""},
		{`g = { start = 1,`, `g = { start = ‸1.5,`, "not a whole number"},
		{`fixed_count = true`, `fixed_count = ‸1`, "true or false"},
		{`k = 2.0`, "k = 2.0\n‸x = 1.0", `name of a species already`},
		{`k = 2.0`, "k = 2.0\n‸max = 1.0", `name of a function`},
		{`k = 2.0`, "k = 2.0\n‸in = 1.0", `reserved word`},
		{`k = 2.0`, "k = 2.0\n‸\"1k\" = 1.0", `cannot be the name`},
		{`h = 1.5`, `h = ‸-1.5`, "not allowed"},
		{`h = 1.5`, `h = ‸nan`, "not allowed"},
		{`h = 1.5`, `h = ‸"1.5"`, "must be a number"},
		{`h = 1.5`, `h = ‸[1.5]`, "a list"},
		{`needs = { g = 1 }`, `needz = { g = 1 }`, `unknown key "needz"`},
		{`needs = { g = 1 }`, `needs = { ‸q = 1 }`, `no species is called "q"`},
		{`needs = { g = 1 }`, `needs = { ‸k = 1 }`, `is a constant, not a species`},
		{`needs = { g = 1 }`, `needs = ‸["g"]`, `must be a table`},
		{`needs = { g = 1 }`, `needs = { g = ‸{ burst = 2 } }`, `must be a whole number`},
		{`makes = { x = 1,`, `makes = { x = ‸1.5,`, "not whole"},
		{`makes = { x = 1,`, `makes = { x = ‸0,`, "not allowed"},
		{`makes = { x = 1,`, `makes = { x = ‸-1,`, "not allowed"},
		{`makes = { x = 1,`, `makes = { x = ‸2000000,`, "not allowed"},
		{`burst = "2*k"`, `burst = "2*‸x"`, "is a species"},
		{`burst = "2*k"`, `burst = ‸"k - 2"`, "burst is 0"},
		{`burst = "2*k"`, `burst = ‸0`, "not allowed"},
		{`burst = "2*k"`, `burst = 2, ‸from = 1`, "unknown key"},
		{`{ burst = "2*k" }`, `‸{ }`, "has no count"},
		{`rate = "k*g*hill(x, h, 2)"`, `rate = "k*g*hill(‸xx, h, 2)"`, `no species or constant is called "xx"`},
		{`rate = "k*g*hill(x, h, 2)"`, `rate = "k*g*‸hill(x, h)"`, "three arguments"},
		{`rate = "k*g*hill(x, h, 2)"`, `rate = 'k*g*‸hil(x, h, 2)'`, "no function"},
		{`rate = "k*g*hill(x, h, 2)"`, `rate = "\u006b*g*hill(x, h, ‸w)"`, "no species or constant"},
		{`rate = "k*g*hill(x, h, 2)"`, "rate = \"\"\"\n  k*g*\\\n   hill(x,\n  h, ‸w)\"\"\"", "no species or constant"},
		{`rate = "k*g*hill(x, h, 2)"`, "rate = '''\n  k*g*\n   hill(x,\n  h, ‸w)'''", "no species or constant"},
		{`rate = "k*g*hill(x, h, 2)"`, `rate = "k*g*hill(x, h, 2) ‸- "`, ""},
		{`rate = "k*g*hill(x, h, 2)"`, `rate = ‸-1`, "not allowed"},
		{`rate = "k*g*hill(x, h, 2)"`, `rate = ‸inf`, "not allowed"},
		{`rate = "k*g*hill(x, h, 2)"`, `rate = ‸{ k = 1 }`, "a number or a formula"},
		{`mass_action = "k/2"`, `mass_action = "k/‸x"`, "is a species"},
		{`mass_action = "k/2"`, `mass_action = ‸"k - 3"`, "mass_action is -1"},
		{`mass_action = "k/2"`, `mass_action = ‸"1/(k - 2)"`, "mass_action is +Inf"},
		{`mass_action = 0.5`, `mass_action = ‸-0.5`, "not allowed"},
		{`name = "lose x"`, `name = ‸"make"`, "called \"make\" already"},
		{`name = "lose x"`, `name = ‸""`, "name is empty"},
		{`name = "lose x"`, `‸nome = "lose x"`, ""},
		{`uses = { x = 1 }`, `uses = { x = 1 }` + "\nmakes = { x = 1 }", "changes nothing"},
		{"[[reaction]]\nname = \"lose x\"", "[[‸reaction]]\nname = \"lose x\"\nrate = \"k\"", ""},
		{`[core.high]`, `[core.‸any]`, "no state can be called"},
		{`[core.high]`, `[core.‸saddle2]`, "no state can be called"},
		{`x = { min = 4 }`, `x = { min = ‸4.5 }`, "not a whole number"},
		{`x = { min = 4 }`, `x = { ‸mim = 4 }`, ""},
		{`x = { min = 4 }`, `x = ‸{ }`, "has no range"},
		{`x = { min = 4 }`, `‸w = { min = 4 }`, "no species is called"},
		{`y = { min = 1, max = 9 }`, `y = ‸{ min = 10, max = 9 }`, "above max"},
		{`y = { min = 1, max = 9 }`, `y = { min = ‸-1, max = 9 }`, "not allowed"},
		{`k = 2.0`, "k = 2.0\nq = ‸", "a value is missing"},
		{`k = 2.0`, "k = 2.0\nq = ‸.5", "not TOML"},
		{`k = 2.0`, "k = 2.0\nq = \"no end‸", "not closed"},
		{`[constants]`, "[constants‸", "not TOML"},
	} {
		text, line, column := changed(t, c.old, c.new)
		_, err := Parse("t.toml", []byte(text))
		var problems Problems
		if !errors.As(err, &problems) {
			t.Errorf("%q: accepted (%v)", c.new, err)
			continue
		}
		marked := strings.Contains(c.new, "‸") && c.message != ""
		p := problems[0]
		if len(problems) != 1 && c.message != "" || !strings.Contains(p.Message, c.message) || marked && (p.Line != line || p.Column != column) {
			t.Errorf("%q, want %q at %d:%d:\n%v", c.new, c.message, line, column, err)
		}
		if p.Hint == "" && c.message != "" {
			t.Errorf("%q: no hint: %v", c.new, p)
		}
	}
}

// TestAfterSyntaxErrors checks that reading goes on after a syntax error: names that
// it may have cost are not reported, all others are.
func TestAfterSyntaxErrors(t *testing.T) {
	for _, c := range []struct{ old, new string }{
		// h is lost; w never was there
		{"h = 1.5\n", "h = .5\n"},
		// a table that is not closed loses every name in it, over several lines
		{"y = { start = 2, readout = true }\n", "y = { start = 2,\n  readout = true\ng = { start = 1 }\n"},
	} {
		text, _, _ := changed(t, c.old, c.new)
		text = strings.Replace(text, "hill(x, h, 2)", "hill(x, h, w)", 1)
		_, err := Parse("t.toml", []byte(text))
		var problems Problems
		if !errors.As(err, &problems) {
			t.Fatal(err)
		}
		if len(problems) != 2 || !strings.Contains(problems[1].Message, `"w"`) {
			t.Errorf("%q:\n%v", c.new, err)
		}
	}
}

// TestGoodDesign checks everything that the good design states.
func TestGoodDesign(t *testing.T) {
	d, err := Parse("t.toml", []byte(good))
	if err != nil {
		t.Fatal(err)
	}
	if d.Title != "t" || d.TimeUnit != "min" || d.Generation != 40 || d.Copies != 10 || d.Readout != 1 || len(d.Notes) != 0 {
		t.Errorf("draft: %+v", d)
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	want := `make: (g) → x + burst of y, mean 4; k*g*hill(x, h, 2); scale 10; 1 at the start
lose x: x → ∅; k/2*x; scale 10; 10 at the start
lose y: 2 y + (y) → ∅; 0.5*y^3; scale 10; 34.2 at the start
`
	var got strings.Builder
	for r, re := range n.Reactions {
		got.WriteString(fmt.Sprintf("%s: %s; %s; scale %g; %.4g at the start\n", re.Name, n.Equation(r), n.LawText(r), re.Scale, n.Propensity(r, n.StartCounts())))
	}
	// make: Ω k g x²/(h²+x²) = 10·2·1·1/(2.25+1) = 6.154; lose y: 0.5 Ω (20·19·18)/Ω³ = 34.2.
	want = strings.Replace(want, "1 at the start", "6.154 at the start", 1)
	if got.String() != want {
		t.Errorf("got\n%swant\n%s", got.String(), want)
	}
	// make y in bursts of mean 4: 4 Ω/Ω a firing; lose y: −2; g is read only.
	if a, b, c := n.AmountChange(0, 1), n.AmountChange(2, 1), n.AmountChange(0, 2); a != 4 || b != -2 || c != 0 {
		t.Errorf("amount changes %v, %v, %v", a, b, c)
	}
	if fmt.Sprint(n.Declared) != "[{high [{0 4 9223372036854775807} {1 1 9}]}]" {
		t.Errorf("declared cores %v", n.Declared)
	}
}

// TestSameDesignOtherwiseWritten checks that TOML's other ways to write the same
// tables give the same draft.
func TestSameDesignOtherwiseWritten(t *testing.T) {
	other := `time = 'min'
title = """t"""
copies = 1_0
generation = 4e1
constants = { k = 2, h = 1.5 }
core.high.x.min = 4
core.high.y = { min = 1, max = 0x9 }
reaction = [
  { name = "make", needs = { g = 1 }, makes = { x = 1, y.burst = "2*k" }, rate = "k*g*hill(x, h, 2)" },
  { name = "lose x", uses = { x = 1.0 }, mass_action = "k/2" }, # a comment
  { name = "lose y", needs.y = 1, uses.y = 2, mass_action = 0.5 },
]
[species.x]
start = 1
[species.y]
readout = true
start = 2
[species.g]
fixed_count = true
start = 1
`
	a, err := Parse("t.toml", []byte(good))
	if err != nil {
		t.Fatal(err)
	}
	for name, text := range map[string]string{
		"otherwise": other,
		"crlf":      strings.ReplaceAll(good, "\n", "\r\n"),
		"bom":       "\ufeff" + good,
		"no end":    strings.TrimSuffix(good, "\n"),
	} {
		b, err := Parse("t.toml", []byte(text))
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if x, y := signatureOf(t, a), signatureOf(t, b); x != y {
			t.Errorf("%s:\n%s\nwant\n%s", name, y, x)
		}
	}
}

func signatureOf(t *testing.T, d *Draft) string {
	t.Helper()
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	n.File = ""
	var b strings.Builder
	if err := n.Describe(&b); err != nil {
		t.Fatal(err)
	}
	return b.String()
}

// TestNotes checks what is noted though it is not wrong.
func TestNotes(t *testing.T) {
	for _, c := range []struct{ old, new, message string }{
		{`k = 2.0`, "k = 2.0\n‸spare = 1.0", "no reaction mentions the constant spare"},
		{`x = { start = 1 }`, "x = { start = 1 }\n‸w = { start = 1 }", "no reaction mentions the species w"},
		{", readout = true", "", "no species is the readout; x, the first"},
	} {
		text, line, _ := changed(t, c.old, c.new)
		d, err := Parse("t.toml", []byte(text))
		if err != nil {
			t.Errorf("%q: %v", c.new, err)
			continue
		}
		if len(d.Notes) != 1 || d.Notes[0].Message[:len(c.message)] != c.message || c.new != "" && d.Notes[0].Line != line {
			t.Errorf("%q: notes %v", c.new, d.Notes)
		}
	}
}

// TestLoadErrors checks the errors of files that cannot be read.
func TestLoadErrors(t *testing.T) {
	for _, path := range []string{filepath.Join(t.TempDir(), "none.toml"), t.TempDir()} {
		if _, err := Load(path); err == nil || !strings.Contains(err.Error(), "cannot read the design") {
			t.Errorf("%s: %v", path, err)
		}
	}
	if _, err := Parse("big", make([]byte, largestFile+1)); err == nil || !strings.Contains(err.Error(), "larger than 64 MiB") {
		t.Errorf("a file that is too large: %v", err)
	}
}
