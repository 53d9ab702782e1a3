package proof

import (
	"slices"
)

// A report is what came of one box: nothing where it holds no resting state that
// is not known; states; the parts that it was split into; or that it resisted.
type report struct {
	states []found
	parts  []box
	stuck  box
}

// examiner is a worker with what it needs to know of the task.
type examiner struct {
	*worker
	t *task
}

// examine does all it can with one box, which it may change.
func (e *examiner) examine(b box, known []found, heaps []heap) report {
	for range 40 {
		old := slices.Clone(b)
		if e.narrow(b, 0.1, 10) || isKnown(b, known) {
			return report{}
		}
		x := b.mid()
		if !e.linearise(b, x) {
			break
		}
		region := slices.Clone(b)
		alone := e.contracts(b)
		if e.sweep(b, x) {
			return report{}
		}
		if alone {
			r, done := e.settle(b, region)
			if !done {
				rest := e.split(b, heaps)
				r.parts, r.stuck = rest.parts, rest.stuck
			}
			return r
		}
		if b.gain(old) < 0.2 {
			break
		}
	}
	return e.split(b, heaps)
}

func isKnown(b box, known []found) bool {
	return slices.ContainsFunc(known, func(f found) bool { return b.in(f.unique) })
}

// settle finds out whether b holds a resting state, where region, which holds b,
// holds one at most.
func (e *examiner) settle(b, region box) (r report, done bool) {
	for range 3 {
		x := b.mid()
		if !e.linearise(b, x) {
			return r, false
		}
		e.krawczyk(b, x)
		if defined, _ := e.sheet.defined(&e.s.graph); defined && box(e.image).in(b) && e.contracts(b) {
			f := found{box: slices.Clone(box(e.image)), unique: region}
			e.tighten(&f)
			return report{states: []found{f}}, true
		}
		if e.sweep(b, x) {
			return r, true
		}
	}
	for _, f := range e.candidates(b) {
		if both := region.hull(f.box); e.alone(both) {
			f.unique = both
			return report{states: []found{f}}, true
		}
		if f.unique != nil {
			r.states = append(r.states, f)
		}
	}
	return r, false
}
