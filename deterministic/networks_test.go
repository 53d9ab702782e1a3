package deterministic

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"holdfast/model"
)

// draft builds networks for tests: species by name, laws as trees.
type draft struct{ model.Draft }

func newDraft(copies float64, species ...string) *draft {
	d := &draft{model.Draft{TimeUnit: "min", Copies: copies}}
	for _, name := range species {
		d.Species = append(d.Species, model.Species{Name: name})
	}
	return d
}

func (d *draft) add(uses, needs, makes []model.Term, k float64) *draft {
	d.Reactions = append(d.Reactions, model.DraftReaction{
		Name: fmt.Sprint("reaction ", len(d.Reactions)), Uses: uses, Needs: needs, Makes: makes, MassAction: model.Number(k),
	})
	return d
}

func (d *draft) law(uses, makes []model.Term, law *model.Node) *draft {
	d.Reactions = append(d.Reactions, model.DraftReaction{
		Name: fmt.Sprint("reaction ", len(d.Reactions)), Uses: uses, Makes: makes, Rate: law,
	})
	return d
}

func (d *draft) network(t testing.TB) *model.Network {
	t.Helper()
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

func terms(species ...int) []model.Term {
	var out []model.Term
	for _, i := range species {
		out = append(out, model.Term{Species: i, Count: 1})
	}
	return out
}

func several(species, count int) []model.Term {
	if count == 0 {
		return nil
	}
	return []model.Term{{Species: species, Count: count}}
}

func sumOf(a, b *model.Node) *model.Node { return model.Call(model.OpAdd, a, b) }

func hillOf(top float64, species int, half, n float64) *model.Node {
	return model.Call(model.OpMul, model.Number(top),
		model.Call(model.OpHill, model.SpeciesRef(species), model.Number(half), model.Number(n)))
}

func fallOf(top float64, species int, half, n float64) *model.Node {
	return model.Call(model.OpMul, model.Number(top),
		model.Call(model.OpHillFall, model.SpeciesRef(species), model.Number(half), model.Number(n)))
}

// polynomial is the one-species network x' = −κ ∏ (x − rᵢ) for an odd number of
// positive roots: kA→(k+1)A with the even powers' coefficients, kA→(k−1)A with the
// odd ones', all positive.
func polynomial(t testing.TB, kappa float64, roots []float64) *model.Network {
	c := []float64{kappa} // c[j]: magnitude of the coefficient of x^j
	for _, r := range roots {
		next := make([]float64, len(c)+1)
		for j, v := range c {
			next[j+1] += v
			next[j] += v * r
		}
		c = next
	}
	d := newDraft(1, "x")
	for j, v := range c {
		if j%2 == 0 {
			d.add(nil, several(0, j), several(0, 1), v)
		} else {
			d.add(several(0, 1), several(0, j-1), nil, v)
		}
	}
	return d.network(t)
}

func logUniform(r *rand.Rand, low, high float64) float64 {
	return low * pow10(r.Float64()*log10(high/low))
}

func pow10(x float64) float64 { return math.Pow(10, x) }
func log10(x float64) float64 { return math.Log10(x) }

// fastDimers is the dimer switch with its bindings and partings faster by a factor:
// the same resting states.
func fastDimers(t testing.TB, factor float64) *model.Network {
	d := newDraft(1, "a", "a2", "b", "b2", "o", "oa2", "ob2", "oa2b2")
	for i := 4; i < 8; i++ {
		d.Species[i].Fixed = true
	}
	d.Species[0].Start, d.Species[4].Start, d.Readout = 20, 1, 2
	both := func(left, right []model.Term, forth, back float64) {
		d.add(left, nil, right, factor*forth).add(right, nil, left, factor*back)
	}
	both(several(0, 2), terms(1), 5, 5)
	both(several(2, 2), terms(3), 5, 5)
	both(terms(4, 1), terms(5), 5, 1)
	both(terms(4, 3), terms(6), 5, 1)
	both(terms(5, 3), terms(7), 5, 1)
	both(terms(6, 1), terms(7), 5, 1)
	for _, p := range [][2]int{{4, 0}, {4, 2}, {5, 0}, {6, 2}} {
		d.add(nil, terms(p[0]), terms(p[1]), 1)
	}
	return d.add(terms(0), nil, nil, 0.3).add(terms(2), nil, nil, 0.3).network(t)
}
