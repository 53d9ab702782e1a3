package proof

import "holdfast/deterministic/proof/interval"

// An outcome gathers what a search finds.
type outcome struct {
	task   *task
	known  []found
	heaps  []heap
	left   []box
	boxes  int
	ending Ending
}

// take notes a report and gives the boxes that are still to be examined.
func (o *outcome) take(r report) []box {
	for _, f := range r.states {
		o.note(f)
	}
	if r.stuck != nil {
		o.heaps = pile(o.heaps, r.stuck)
	}
	return r.parts
}

// note adds a state unless it is a known one, or lies outside the bounds. Where
// one cannot tell, its box is left unresolved.
func (o *outcome) note(f found) {
	if !f.box.meets(o.task.bounds) {
		return
	}
	for _, k := range o.known {
		switch {
		case f.box.in(k.unique) || k.box.in(f.unique):
			return
		case f.box.meets(k.box) && !o.same(f, k):
			o.heaps = pile(o.heaps, f.box)
			return
		case f.box.meets(k.box):
			return
		}
	}
	o.known = append(o.known, f)
}

// same tells whether the two states whose boxes meet are proved to be one.
func (o *outcome) same(f, k found) bool {
	return newWorker(o.task.system).alone(f.box.hull(k.box))
}

// amounts gives a box in the unknowns as a box with one interval a species.
func (s *system) amounts(b box) []interval.Interval {
	out := make([]interval.Interval, len(s.place))
	for i, at := range s.place {
		if at != none {
			out[i] = iv{Lo: b[at].Lo + 0, Hi: b[at].Hi + 0} // no −0
		}
	}
	return out
}
