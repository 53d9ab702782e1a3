package proof_test

import (
	"context"
	"fmt"
	"math"
	"strings"
	"testing"

	"holdfast/deterministic/proof"
	"holdfast/model"
)

// A design gathers a draft by names.
type design struct {
	draft model.Draft
}

func newDesign(species ...string) *design {
	d := &design{}
	d.draft.Copies = 1
	for _, s := range species {
		d.draft.Species = append(d.draft.Species, model.Species{Name: s})
	}
	return d
}

func (d *design) index(name string) int {
	for i, s := range d.draft.Species {
		if s.Name == name {
			return i
		}
	}
	panic("no species " + name)
}

func (d *design) x(name string) *model.Node { return model.SpeciesRef(d.index(name)) }

// terms reads "a b b" as one a and two b.
func (d *design) terms(side string) []model.Term {
	count := map[int]int{}
	for name := range strings.FieldsSeq(side) {
		count[d.index(name)]++
	}
	var out []model.Term
	for i := range d.draft.Species {
		if count[i] > 0 {
			out = append(out, model.Term{Species: i, Count: count[i]})
		}
	}
	return out
}

// rate adds a reaction with the given law.
func (d *design) rate(uses, makes string, law *model.Node) *design {
	d.draft.Reactions = append(d.draft.Reactions, model.DraftReaction{
		Name: uses + " to " + makes, Uses: d.terms(uses), Makes: d.terms(makes), Rate: law,
	})
	return d
}

// mass adds a mass-action reaction.
func (d *design) mass(uses, needs, makes string, k float64) *design {
	d.draft.Reactions = append(d.draft.Reactions, model.DraftReaction{
		Name: uses + " to " + makes, Uses: d.terms(uses), Needs: d.terms(needs), Makes: d.terms(makes), MassAction: model.Number(k),
	})
	return d
}

func (d *design) network(t testing.TB) *model.Network {
	t.Helper()
	n, err := d.draft.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

func num(v float64) *model.Node                   { return model.Number(v) }
func plus(a, b *model.Node) *model.Node           { return model.Call(model.OpAdd, a, b) }
func minus(a, b *model.Node) *model.Node          { return model.Call(model.OpSub, a, b) }
func times(a, b *model.Node) *model.Node          { return model.Call(model.OpMul, a, b) }
func over(a, b *model.Node) *model.Node           { return model.Call(model.OpDiv, a, b) }
func raised(a *model.Node, p float64) *model.Node { return model.Call(model.OpPow, a, num(p)) }

func prove(t testing.TB, n *model.Network, low, high []float64) *proof.Result {
	t.Helper()
	r, err := proof.Prove(context.Background(), proof.Problem{Network: n, Low: low, High: high})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// wantComplete checks that the list is proved and is that of want, in order; the
// enclosures must hold the states up to the given relative error of want itself.
func wantComplete(t testing.TB, name string, r *proof.Result, want [][]float64, tolerance float64) {
	t.Helper()
	if !r.Complete || len(r.Roots) != len(want) {
		t.Errorf("%s: %v; want %d states, proved", name, r, len(want))
		return
	}
	for k, root := range r.Roots {
		for i, a := range root.Box {
			slack := tolerance * math.Abs(want[k][i])
			if !(a.Lo-slack <= want[k][i] && want[k][i] <= a.Hi+slack) {
				t.Errorf("%s: state %d has species %d in %v, want %v", name, k, i, a, want[k][i])
			}
			if a.Width() > 1e-9*a.Mag() {
				t.Errorf("%s: state %d has species %d only to %v", name, k, i, a)
			}
		}
	}
}

// wantResisting checks that nothing is claimed, and that a box around x is named.
func wantResisting(t testing.TB, name string, r *proof.Result, x []float64) {
	t.Helper()
	if r.Complete {
		t.Errorf("%s: %v; want 'not proved'", name, r)
		return
	}
	for _, u := range r.Unresolved {
		in := true
		for i, a := range u.Box {
			in = in && a.Has(x[i])
		}
		if in {
			return
		}
	}
	t.Errorf("%s: %v; want a box around %v", name, r, fmt.Sprint(x))
}
