package proof

import (
	"cmp"
	"slices"

	"holdfast/deterministic/proof/interval"
)

// result states the outcome in amounts.
func (o *outcome) result(low, high []float64, all bool) *Result {
	r := &Result{Low: low, High: high, All: all, Boxes: o.boxes, Ending: o.ending}
	s := o.task.system
	for _, f := range o.known {
		root := Root{Box: s.amounts(f.box), Kink: f.kink, Edge: !f.box.in(o.task.bounds)}
		for _, a := range root.Box {
			root.Point = append(root.Point, a.Mid())
		}
		r.Roots = append(r.Roots, root)
	}
	slices.SortFunc(r.Roots, func(a, b Root) int { return slices.CompareFunc(a.Box, b.Box, before) })
	heaps := o.heaps
	for _, b := range o.left {
		heaps = pile(heaps, b)
	}
	for _, h := range heaps {
		r.Unresolved = append(r.Unresolved, Unresolved{Box: s.amounts(h.hull), Boxes: h.boxes, Species: o.task.names()})
	}
	r.Complete = len(heaps) == 0 && o.ending == Finished
	return r
}

// before orders intervals; those that meet count as equal.
func before(a, b interval.Interval) int {
	if a.Meet(b).IsEmpty() {
		return cmp.Compare(a.Lo, b.Lo)
	}
	return 0
}

// unposed is the result where the equations do not determine isolated states.
func (t *task) unposed(low, high []float64) *Result {
	u := Unresolved{Boxes: 1, Species: t.names()}
	for i := range low {
		u.Box = append(u.Box, interval.Interval{Lo: low[i], Hi: high[i]})
	}
	return &Result{Low: low, High: high, Unresolved: []Unresolved{u}, Ending: Unposed}
}

func (t *task) names() []string {
	var out []string
	for _, s := range t.network.Species {
		out = append(out, s.Name)
	}
	return out
}
