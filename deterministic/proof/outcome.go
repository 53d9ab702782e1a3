package proof

import (
	"slices"

	"holdfast/deterministic/proof/interval"
)

// An outcome gathers what a search finds.
type outcome struct {
	task   *task
	known  []found
	stuck  []box
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
		o.stuck = append(o.stuck, r.stuck)
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
		case f.box.meets(k.box):
			o.stuck = append(o.stuck, f.box)
			return
		}
	}
	o.known = append(o.known, f)
}

// clusters joins boxes that touch into their hulls, until none touch. Boxes count as
// touching within the given share of their size.
func clusters(boxes []box, bounds box) []box {
	var out []box
	for _, b := range boxes {
		b = grown(b, bounds)
		for i := 0; i < len(out); {
			if !out[i].meets(b) {
				i++
				continue
			}
			b = b.hull(out[i])
			out = slices.Delete(out, i, i+1)
			i = 0
		}
		out = append(out, b)
	}
	return out
}

// grown widens a box by a hundredth of its width, inside the bounds.
func grown(b, bounds box) box {
	out := make(box, len(b))
	for i, a := range b {
		r := a.Width() / 100
		out[i] = a.Add(iv{Lo: -r, Hi: r}).Meet(bounds[i])
		if out[i].IsEmpty() {
			out[i] = a
		}
	}
	return out
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
