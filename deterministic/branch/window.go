package branch

import (
	"math"
	"slices"

	"holdfast/deterministic"
)

// window walks from a state of today to both sides.
func (b *builder) window(s deterministic.State, today float64) Window {
	w := Window{State: s.Name, Amounts: slices.Clone(s.Amounts), Branch: -1}
	a, ok, _ := b.place(s.Amounts, today)
	if !ok {
		lost := b.endMark(append(slices.Clone(s.Amounts), today), Lost, "")
		lost.Text = b.reason(s.Amounts, today)
		w.Low = End{*lost, math.NaN(), math.NaN()}
		w.High = w.Low
		return w
	}
	w.Branch = a.branch
	t := b.branches[a.branch]
	up := b.endOf(t, a.at, 1, today)
	down := b.endOf(t, a.at+1, -1, today)
	w.Low, w.High = down, up
	if t.spots[a.at].u[b.f.n] > t.spots[min(a.at+1, len(t.spots)-1)].u[b.f.n] {
		w.Low, w.High = up, down
	}
	return w
}

// next gives the spot after spot i in a walk, round and round on a closed branch; −1
// past the end.
func (t *traced) next(i, step int) int {
	i += step
	if n := len(t.spots) - 1; t.closed && n > 0 {
		return (i + n) % n // the last spot is the first again
	}
	if i < 0 || i >= len(t.spots) {
		return -1
	}
	return i
}

// endOf walks from spot i, itself left out, to where the stable state ends; once
// round at most.
func (b *builder) endOf(t traced, i, step int, today float64) End {
	last := i
	for range t.spots {
		j := t.next(last, step)
		if j < 0 {
			break
		}
		last = j
		s := &t.spots[j]
		if s.mark == nil && unstable(s.values) > 0 || s.mark != nil && b.stops(t, j, step) {
			break
		}
	}
	m := t.spots[last].mark
	if m == nil {
		m = b.endMark(t.spots[last].u, Lost, "")
	}
	e := End{Mark: *m, Knob: m.Knob, Distance: math.NaN()}
	if today != 0 {
		e.Distance = 100 * abs(m.Knob-today) / today
	}
	e.Mark.Index = last
	return e
}

// stops tells whether a stable state ends at the mark of spot j.
func (b *builder) stops(t traced, j, step int) bool {
	m := t.spots[j].mark
	if m.Turns || m.Kind.Ends() && m.Kind != Closed {
		return true
	}
	for range t.spots {
		if j = t.next(j, step); j < 0 {
			return true
		}
		if t.spots[j].mark == nil {
			return unstable(t.spots[j].values) > 0
		}
	}
	return true
}
