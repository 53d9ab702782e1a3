package proof

import (
	"math"

	"holdfast/deterministic/proof/interval"
	"holdfast/model"
)

// Enclose gives a box, in amounts, one bound a species, that is proved to hold
// every resting state with non-negative amounts on the conserved totals of the
// start; ok is false where none was found. The bounds follow from the totals and
// from production that saturates: at rest each species is lost as fast as it is
// made. Where the network has no resting state the box may be one point.
func Enclose(n *model.Network) (low, high []float64, ok bool) {
	t, err := newTask(Problem{Network: n})
	if err != nil {
		return nil, nil, false
	}
	most, ok := t.enclosure()
	if !ok {
		return nil, nil, false
	}
	for _, a := range most {
		low, high = append(low, a.Lo), append(high, a.Hi)
	}
	return low, high, true
}

// enclosure narrows the box of all non-negative amounts as far as that gains; ok
// is false where an amount stays unbounded.
func (t *task) enclosure() (out []interval.Interval, ok bool) {
	if t.system == nil {
		return nil, false
	}
	w := newWorker(t.system)
	b := make(box, len(t.system.species))
	for i := range b {
		b[i] = iv{Lo: 0, Hi: math.Inf(1)}
	}
	if w.narrow(b, 1e-3, 1000) {
		for i := range b {
			b[i] = interval.Point(0)
		}
	}
	ok = true
	for _, a := range b {
		ok = ok && a.Bounded()
	}
	return t.system.amounts(b), ok
}
