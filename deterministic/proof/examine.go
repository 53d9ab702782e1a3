package proof

import (
	"math"
	"slices"

	"holdfast/deterministic/proof/interval"
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

// split cuts the box in two across the unknown whose width matters most, or gives
// it up where it is small. The measure is the change of each row over the box, by
// unknown, as a share of the row's (smear: Kearfott and Novoa, ACM Trans. Math.
// Softw. 16 (1990) 152, from memory); unknowns that all rates are linear in are
// left to the narrowing as long as others can be cut.
func (e *examiner) split(b box, heaps []heap) report {
	if slices.ContainsFunc(heaps, func(h heap) bool { return h.absorbs(b) }) {
		return report{stuck: b}
	}
	at, best := -1, 0.0
	score := e.smear(b)
	for i := range b {
		if v := score[i]; e.wide(b[i], i) && v > best {
			at, best = i, v
		}
	}
	if at < 0 {
		return report{stuck: b}
	}
	left, right := slices.Clone(b), slices.Clone(b)
	m := b[at].Lo + 0.4873*(b[at].Hi-b[at].Lo)
	left[at].Hi, right[at].Lo = m, m
	return report{parts: []box{left, right}}
}

// wide tells whether the unknown may be cut further.
func (e *examiner) wide(a iv, i int) bool {
	scale := max(a.Mag(), 1e-3*e.t.bounds[i].Hi)
	m := a.Lo + 0.4873*(a.Hi-a.Lo)
	return a.Width() > e.t.width*scale && a.Lo < m && m < a.Hi
}

func (e *examiner) smear(b box) []float64 {
	score := make([]float64, len(b))
	e.sheet.forward(&e.s.graph, b)
	e.differentiate(e.sheet)
	rows := make([]float64, len(b)*len(b))
	for k, col := range e.s.columns {
		for j, place := range e.s.atoms[k].species {
			for i, r := range col.rows {
				rows[r*len(b)+place] += col.coef[i].Mag() * min(e.slopes[k][j].Mag(), 1e300) * b[place].Width()
			}
		}
	}
	for i := range b {
		total := 0.0
		for j := range b {
			total += rows[i*len(b)+j]
		}
		for j := range b {
			if total > 0 {
				score[j] += rows[i*len(b)+j] / total
			}
		}
	}
	for j := range b {
		score[j] += 1e-9 * b[j].Width() / max(b[j].Mag(), 1e-300)
		if e.s.bent[j] {
			score[j] += 1e3
		}
		if math.IsNaN(score[j]) {
			score[j] = 1
		}
	}
	return score
}
