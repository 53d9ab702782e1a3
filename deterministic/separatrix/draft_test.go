package separatrix

import (
	"context"
	"fmt"
	"math"
	"testing"

	"holdfast/deterministic"
	"holdfast/model"
)

// planar is a network of species x, y, … each made and lost by the laws given.
func planar(t testing.TB, made, lost []*model.Node) *model.Network {
	t.Helper()
	d := model.Draft{Title: "test", TimeUnit: "min", Copies: 50}
	for i := range made {
		name := string(rune('x' + i))
		d.Species = append(d.Species, model.Species{Name: name})
		one := []model.Term{{Species: i, Count: 1}}
		d.Reactions = append(d.Reactions,
			model.DraftReaction{Name: "make " + name, Rate: made[i], Makes: one},
			model.DraftReaction{Name: "lose " + name, Rate: lost[i], Uses: one})
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

func x(i int) *model.Node                { return model.SpeciesRef(i) }
func num(v float64) *model.Node          { return model.Number(v) }
func plus(a, b *model.Node) *model.Node  { return model.Call(model.OpAdd, a, b) }
func times(a, b *model.Node) *model.Node { return model.Call(model.OpMul, a, b) }

func surveyed(t testing.TB, n *model.Network) *deterministic.Map {
	t.Helper()
	m, err := deterministic.Survey(context.Background(), n, deterministic.Options{})
	if err != nil {
		t.Fatal(err)
	}
	return m
}

func traced(t testing.TB, m *deterministic.Map, o Options) []Curve {
	t.Helper()
	c, err := Trace(context.Background(), m, o)
	if err != nil {
		t.Fatal(err)
	}
	if o.High == nil {
		o.High = m.High
	}
	for _, c := range c {
		checkSpacing(t, c, o.withDefaults())
	}
	return c
}

// checkSpacing sees that the points of a curve are as dense as promised, give or take
// what an amount changes over one spacing.
func checkSpacing(t testing.TB, c Curve, o Options) {
	t.Helper()
	for k := 1; k < len(c.Points); k++ {
		sum := 0.0
		for i, p := range c.Points[k-1] {
			q := c.Points[k][i]
			unit := max(p, q, localShare*o.High[i])
			sum += (p - q) * (p - q) / (unit * unit)
		}
		if d := math.Sqrt(sum); d > (1+2*o.Spacing)*o.Spacing {
			t.Errorf("points %d and %d of the curve of %s are %.3g apart, more than %g", k-1, k, c.Saddle, d, o.Spacing)
		}
	}
}

func near(t testing.TB, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s = %.15g, want %.15g within %.2g", what, got, want, tolerance)
	}
}

func at(p []float64) string { return fmt.Sprintf("at %.6g", p) }
