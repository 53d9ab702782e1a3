package zoo

import (
	"holdfast/model"
)

// counts gives whole-number coefficients by species name.
type counts map[string]int

// reaction states one reaction by names. Exactly one of k (the name of the
// constant of a mass-action law) and law is set.
type reaction struct {
	name               string
	uses, needs, makes counts
	burst              map[string]float64
	k                  string
	law                *model.Node
}

// builder gathers a draft.
type builder struct{ draft model.Draft }

func newBuilder(title, unit string, copies float64) *builder {
	return &builder{model.Draft{Title: title, TimeUnit: unit, Copies: copies}}
}

func (b *builder) species(name string, start float64) *builder {
	b.draft.Species = append(b.draft.Species, model.Species{Name: name, Start: start})
	return b
}

func (b *builder) fixed(name string, start float64) *builder {
	b.draft.Species = append(b.draft.Species, model.Species{Name: name, Start: start, Fixed: true})
	return b
}

func (b *builder) constant(name string, value float64) *builder {
	b.draft.Constants = append(b.draft.Constants, model.Constant{Name: name, Value: value})
	return b
}

// readout makes the named species the one that orders the states.
func (b *builder) readout(name string) *builder {
	b.draft.Readout = b.speciesIndex(name)
	return b
}

func (b *builder) add(r reaction) *builder {
	d := model.DraftReaction{
		Name: r.name, Rate: r.law,
		Uses: b.terms(r.uses), Needs: b.terms(r.needs), Makes: b.terms(r.makes),
	}
	for i, s := range b.draft.Species {
		if mean, ok := r.burst[s.Name]; ok {
			d.Makes = append(d.Makes, model.Term{Species: i, Burst: mean})
		}
	}
	if r.k != "" {
		d.MassAction = b.c(r.k)
	}
	b.draft.Reactions = append(b.draft.Reactions, d)
	return b
}

func (b *builder) terms(c counts) []model.Term {
	var out []model.Term
	for i, s := range b.draft.Species {
		if n := c[s.Name]; n > 0 {
			out = append(out, model.Term{Species: i, Count: n})
		}
	}
	return out
}

// x is a node that reads the named species, c one that reads the named constant.
func (b *builder) x(name string) *model.Node { return model.SpeciesRef(b.speciesIndex(name)) }

func (b *builder) c(name string) *model.Node {
	for i, c := range b.draft.Constants {
		if c.Name == name {
			return model.ConstantRef(i)
		}
	}
	panic("zoo: no constant " + name)
}

func (b *builder) speciesIndex(name string) int {
	for i, s := range b.draft.Species {
		if s.Name == name {
			return i
		}
	}
	panic("zoo: no species " + name)
}

func (b *builder) network() *model.Network {
	n, err := b.draft.Bind(0, nil)
	if err != nil {
		panic("zoo: " + err.Error())
	}
	return n
}

func add(a, b *model.Node) *model.Node { return model.Call(model.OpAdd, a, b) }
func mul(a, b *model.Node) *model.Node { return model.Call(model.OpMul, a, b) }
func div(a, b *model.Node) *model.Node { return model.Call(model.OpDiv, a, b) }
func pow(a, b *model.Node) *model.Node { return model.Call(model.OpPow, a, b) }
func num(v float64) *model.Node        { return model.Number(v) }

// falling is top/(1+xⁿ).
func falling(top, x, n *model.Node) *model.Node { return div(top, add(num(1), pow(x, n))) }
