package lattice

import (
	"fmt"
	"slices"
	"testing"

	"holdfast/model"
)

// counts gives whole-number coefficients by species.
type counts map[int]int

// A draft states a network for a test; laws are mass action with constant k
// unless rate is set.
type draft struct {
	species   []string
	start     []float64
	fixed     []bool
	reactions []draftReaction
	readout   int
}

type draftReaction struct {
	uses, needs, makes counts
	burst              map[int]float64
	k                  float64
	rate               *model.Node
}

func terms(c counts) []model.Term {
	var out []model.Term
	for s := range 16 {
		if c[s] > 0 {
			out = append(out, model.Term{Species: s, Count: c[s]})
		}
	}
	return out
}

func bind(t testing.TB, d draft, copies float64) *model.Network {
	t.Helper()
	md := &model.Draft{Copies: copies, TimeUnit: "s", Readout: d.readout}
	for i, name := range d.species {
		s := model.Species{Name: name}
		if i < len(d.start) {
			s.Start = d.start[i]
		}
		s.Fixed = i < len(d.fixed) && d.fixed[i]
		md.Species = append(md.Species, s)
	}
	for i, r := range d.reactions {
		dr := model.DraftReaction{Name: fmt.Sprintf("r%d", i), Uses: terms(r.uses), Needs: terms(r.needs), Makes: terms(r.makes), Rate: r.rate}
		if r.rate == nil {
			dr.MassAction = model.Number(r.k)
		}
		for s, mean := range r.burst {
			dr.Makes = append(dr.Makes, model.Term{Species: s, Burst: mean})
		}
		md.Reactions = append(md.Reactions, dr)
	}
	n, err := md.Bind(copies, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// permuted renames species i to order[i].
func (d draft) permuted(order []int) draft {
	out := d
	out.species, out.start = make([]string, len(order)), make([]float64, len(order))
	out.reactions = slices.Clone(d.reactions)
	for i, j := range order {
		out.species[j] = d.species[i]
		if i < len(d.start) {
			out.start[j] = d.start[i]
		}
	}
	for i := range out.reactions {
		r := &out.reactions[i]
		r.uses, r.needs, r.makes = reordered(r.uses, order), reordered(r.needs, order), reordered(r.makes, order)
		r.rate = reindex(r.rate, order)
	}
	return out
}

func reordered(c counts, order []int) counts {
	out := counts{}
	for s, k := range c {
		out[order[s]] = k
	}
	return out
}

func reindex(n *model.Node, order []int) *model.Node {
	if n == nil {
		return nil
	}
	out := *n
	if n.Op == model.OpSpecies {
		out.Index = order[n.Index]
	}
	out.Args = nil
	for _, a := range n.Args {
		out.Args = append(out.Args, reindex(a, order))
	}
	return &out
}

// repressed is top/(1+xⁿ).
func repressed(top float64, species int, power float64) *model.Node {
	x := model.Call(model.OpPow, model.SpeciesRef(species), model.Number(power))
	return model.Call(model.OpDiv, model.Number(top), model.Call(model.OpAdd, model.Number(1), x))
}

// toggle is a pair of genes that repress each other.
func toggle(a, b float64) draft {
	return draft{
		species: []string{"u", "v"}, readout: 1,
		reactions: []draftReaction{
			{makes: counts{0: 1}, rate: repressed(a, 1, 2)},
			{uses: counts{0: 1}, k: 1},
			{makes: counts{1: 1}, rate: repressed(b, 0, 2)},
			{uses: counts{1: 1}, k: 1},
		},
	}
}

// trio is three genes of which each represses both others: three states.
func trio(top float64) draft {
	both := func(a, b int) *model.Node {
		return model.Call(model.OpMul, repressed(top, a, 2), repressed(1, b, 2))
	}
	return draft{
		species: []string{"u", "v", "w"}, readout: 2,
		reactions: []draftReaction{
			{makes: counts{0: 1}, rate: both(1, 2)},
			{uses: counts{0: 1}, k: 1},
			{makes: counts{1: 1}, rate: both(0, 2)},
			{uses: counts{1: 1}, k: 1.1},
			{makes: counts{2: 1}, rate: both(0, 1)},
			{uses: counts{2: 1}, k: 1.2},
		},
	}
}
