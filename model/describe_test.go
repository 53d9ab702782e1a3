package model

import (
	"errors"
	"math"
	"path/filepath"
	"strings"
	"testing"
)

func load(t *testing.T, name string) *Network {
	t.Helper()
	d, err := Load(filepath.Join("../testdata/designs", name+".toml"))
	if err != nil {
		t.Fatal(err)
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// TestDescribe holds the description of the demo designs against stored texts.
func TestDescribe(t *testing.T) {
	for _, name := range []string{"latch", "leakless", "pair", "operator", "varied"} {
		n := load(t, name)
		n.File = filepath.Base(n.File)
		var b strings.Builder
		if err := n.Describe(&b); err != nil {
			t.Fatal(err)
		}
		golden(t, "../testdata/check/"+name+".txt", b.String())
	}
}

// everything is a design that has something to warn of in every way.
const everything = `time = "h"
copies = 2.5

[species]
x = { start = 1.1 }
y = { start = 0 }
z = { start = 4 }
g = { start = 500, fixed_count = true }
dna = { start = 2, fixed_count = true }

[constants]
k = 1.0
zero = 0.0
spare = 3.0

[[reaction]]
name = "grow"
needs = { z = 1 }
makes = { x = 1 }
rate = "k*x^0.5 + sqrt(x)"

[[reaction]]
name = "shrink"
uses = { x = 1, g = 2 }
rate = "k - 3*x"

[[reaction]]
name = "never"
makes = { y = 1 }
mass_action = "zero"

[[reaction]]
name = "odd"
uses = { z = 1 }
rate = "k*z/(x - x)"

[[reaction]]
name = "burst"
needs = { dna = 1 }
makes = { y = { burst = "2*k" } }
mass_action = "k"

[core.high]
x = { min = 4 }
y = { min = 2, max = 8 }
z = { max = 1 }
`

func TestDescribeEverything(t *testing.T) {
	d, err := Parse("everything.toml", []byte(everything))
	if err != nil {
		t.Fatal(err)
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	var b strings.Builder
	if err := n.Describe(&b); err != nil {
		t.Fatal(err)
	}
	golden(t, "../testdata/check/everything.txt", b.String())
}

// fullDisk is a writer that takes nothing.
type fullDisk struct{}

var errFull = errors.New("no space left")

func (fullDisk) Write([]byte) (int, error) { return 0, errFull }

func TestDescribeTellsOfAFullDisk(t *testing.T) {
	if err := load(t, "latch").Describe(fullDisk{}); !errors.Is(err, errFull) {
		t.Errorf("the error is %v", err)
	}
}

// TestBindErrors checks what Bind refuses.
func TestBindErrors(t *testing.T) {
	d, err := Parse("t.toml", []byte(good))
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		copies  float64
		set     map[string]float64
		message string
	}{
		{-1, nil, "copies = -1"},
		{math.NaN(), nil, "copies = NaN"},
		{math.Inf(1), nil, "copies = +Inf"},
		{1e16, nil, "molecules are counted up to 1e+12"},
		{0, map[string]float64{"kk": 1}, `no constant is called "kk": did you mean "k"?`},
		{0, map[string]float64{"h": -1}, "h = -1"},
		{0, map[string]float64{"h": math.NaN()}, "h = NaN"},
		{0, map[string]float64{"k": 0}, "the mean burst of y is 0"},
		{0, map[string]float64{"aa": 1, "bb": 2}, `called "aa"`},
	} {
		if _, err := d.Bind(c.copies, c.set); err == nil || !strings.Contains(err.Error(), c.message) {
			t.Errorf("copies %v, set %v: the error is %v, want %q", c.copies, c.set, err, c.message)
		}
	}
}

// TestBindLeavesTheDraft checks that binding twice does not mix the values.
func TestBindLeavesTheDraft(t *testing.T) {
	d, err := Parse("t.toml", []byte(good))
	if err != nil {
		t.Fatal(err)
	}
	a, err := d.Bind(5, map[string]float64{"k": 3})
	if err != nil {
		t.Fatal(err)
	}
	b, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	if a.Constants[0].Value != 3 || b.Constants[0].Value != 2 || a.Copies != 5 || b.Copies != 10 {
		t.Errorf("constants %v and %v, copies %g and %g", a.Constants, b.Constants, a.Copies, b.Copies)
	}
	if a.Reactions[0].Bursts[0].Burst != 6 || b.Reactions[0].Bursts[0].Burst != 4 {
		t.Errorf("bursts %v and %v", a.Reactions[0].Bursts, b.Reactions[0].Bursts)
	}
	if got := a.StartCounts(); got[0] != 5 || got[1] != 10 || got[2] != 1 {
		t.Errorf("start counts %v", got)
	}
}

// TestPropensities holds propensities against the definition, written out: with
// Ω = 10, k Ω^(1−order) ∏ n!/(n−ν)! for mass action, Ω v(n/Ω) for a law, v where a
// fixed count changes, 0 where what is used is not there.
func TestPropensities(t *testing.T) {
	text := `time = "s"
copies = 10
[species]
x = { start = 0 }
y = { start = 0 }
g = { start = 0, fixed_count = true }
h = { start = 0, fixed_count = true }
[[reaction]]
name = "source"
makes = { x = 1 }
mass_action = 3
[[reaction]]
name = "pair"
uses = { x = 2 }
makes = { y = 1 }
mass_action = 3
[[reaction]]
name = "three"
uses = { x = 1 }
needs = { x = 2 }
mass_action = 3
[[reaction]]
name = "make"
needs = { g = 1 }
makes = { x = 1 }
mass_action = 3
[[reaction]]
name = "bind"
uses = { g = 1, y = 1 }
makes = { h = 1 }
mass_action = 3
[[reaction]]
name = "unbind"
uses = { h = 1 }
makes = { g = 1, y = 1 }
rate = "3*h"
[[reaction]]
name = "law"
uses = { x = 3 }
rate = "2 + g*x^2"
`
	d, err := Parse("t.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	const x, y, g, h = 7., 4., 2., 3.
	counts := []int64{x, y, g, h}
	want := []float64{10 * 3, 10 * 3 * x * (x - 1) / 100, 10 * 3 * x * (x - 1) * (x - 2) / 1000, 10 * 3 * g, 3 * g * y / 10, 3 * h, 10 * (2 + g*0.49)}
	for r, w := range want {
		if got := n.Propensity(r, counts); math.Abs(got-w) > 1e-13*w {
			t.Errorf("%s: propensity %v, want %v", n.Reactions[r].Name, got, w)
		}
	}
	if got := n.Propensity(6, []int64{2, 4, 2, 3}); got != 0 {
		t.Errorf("a law that uses three of two molecules has propensity %v", got)
	}
	if got := n.Propensity(2, []int64{2, 4, 2, 3}); got != 0 {
		t.Errorf("mass action of three of two molecules has propensity %v", got)
	}
}
