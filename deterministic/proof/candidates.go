package proof

import (
	"holdfast/deterministic/proof/interval"
)

// candidates are resting states near b: on a face where species are 0 for good,
// and in the open.
func (e *examiner) candidates(b box) []found {
	var out []found
	if f, ok := e.onFace(b); ok {
		out = append(out, f)
	}
	if f, ok := e.pin(b.mid(), b, e.t.reach); ok {
		out = append(out, f)
	}
	return out
}

// onFace looks for a resting state near b with the species at 0 that would stay 0.
func (e *examiner) onFace(b box) (f found, ok bool) {
	absent := make([]bool, len(e.t.network.Species))
	any := false
	for i := range b {
		if b[i].Lo == 0 {
			absent[e.s.species[i]] = true
			any = true
		}
	}
	if !any {
		return f, false
	}
	face, ok := e.t.face(absent)
	if !ok {
		return f, false
	}
	if len(face.species) == 0 {
		return e.lift(face, found{}), true
	}
	w := newWorker(face)
	part, bounds := make(box, len(face.species)), make(box, len(face.species))
	for k, i := range face.species {
		part[k], bounds[k] = b[e.s.place[i]], e.t.reach[e.s.place[i]]
	}
	if f, ok = w.pin(part.mid(), part, bounds); !ok {
		return f, false
	}
	return e.lift(face, f), true
}

// lift puts a state on a face into the full system.
func (e *examiner) lift(face *system, f found) found {
	full := make(box, len(e.s.species))
	for k, i := range e.s.species {
		full[k] = interval.Point(0)
		if at := face.place[i]; at != none {
			full[k] = f.box[at]
		}
	}
	return found{box: full, kink: f.kink}
}
