package action

import (
	"context"
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"

	"holdfast/deterministic"
	"holdfast/model"
)

// draft reads the text of a design, load one of the demo designs.
func draft(t *testing.T, text string) *model.Draft {
	t.Helper()
	d, err := model.Parse("design.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func load(t *testing.T, name string) *model.Draft {
	t.Helper()
	d, err := model.Load("../../testdata/designs/" + name + ".toml")
	if err != nil {
		t.Fatal(err)
	}
	return d
}

// parse reads a design and binds it, with constants replaced by set.
func parse(t *testing.T, text string, set map[string]float64) *model.Network {
	t.Helper()
	n, err := draft(t, text).Bind(0, set)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// routes surveys a network and its paths.
func routes(t *testing.T, n *model.Network) *Routes {
	t.Helper()
	m, err := deterministic.Survey(context.Background(), n, deterministic.Options{})
	if m == nil {
		t.Fatal(err)
	}
	r, err := Survey(context.Background(), m, Options{})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// exponent gives the path of a pair that a saddle joins.
func exponent(t *testing.T, r *Routes, from, to string) *Path {
	t.Helper()
	p := r.Find(from, to)
	if p == nil || len(p.Paths) == 0 {
		t.Fatalf("no path from %s to %s: %+v", from, to, p)
	}
	return p.Paths[0]
}

// integral is ∫f from a to b, by Gauss's quadrature on 400 points: to rounding for
// what is smooth.
func integral(f func(x float64) float64, a, b float64) float64 {
	if a > b {
		return -integral(f, b, a)
	}
	return quad.Fixed(f, a, b, 400, quad.Legendre{}, 0)
}

func near(t *testing.T, what string, got, want, relative float64) {
	t.Helper()
	if !(math.Abs(got-want) <= relative*math.Abs(want)) {
		t.Errorf("%s: %.12g, want %.12g to %g (off by %.2g)", what, got, want, relative, got/want-1)
	}
}
