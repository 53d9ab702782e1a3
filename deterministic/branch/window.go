package branch

import (
	"fmt"
	"math"
	"slices"

	"holdfast/deterministic"
)

// window walks from a state of today to both sides.
func (b *builder) window(s deterministic.State, today float64) Window {
	w := Window{State: s.Name, Amounts: slices.Clone(s.Amounts), Branch: -1}
	a, ok, _ := b.place(s.Amounts, today)
	if !ok {
		b.warnings = append(b.warnings, fmt.Sprintf("state %s could not be placed on a branch", s.Name))
		return w
	}
	w.Branch = a.branch
	spots := b.branches[a.branch].spots
	up := b.endOf(spots, a.at, 1, today)
	down := b.endOf(spots, a.at+1, -1, today)
	w.Low, w.High = down, up
	if spots[a.at].u[b.f.n] > spots[min(a.at+1, len(spots)-1)].u[b.f.n] {
		w.Low, w.High = up, down
	}
	return w
}

// endOf walks from spot i, itself left out, to where the stable state ends.
func (b *builder) endOf(spots []spot, i, step int, today float64) End {
	last := i
	for j := i + step; j >= 0 && j < len(spots); j += step {
		last = j
		s := &spots[j]
		if s.mark == nil && unstable(s.values) > 0 || s.mark != nil && b.stops(spots, j, step) {
			break
		}
	}
	m := spots[last].mark
	if m == nil {
		m = b.endMark(spots[last].u, Lost, "")
	}
	e := End{Mark: *m, Knob: m.Knob, Distance: math.NaN()}
	if today != 0 {
		e.Distance = 100 * abs(m.Knob-today) / today
	}
	e.Mark.Index = last
	return e
}

// stops tells whether a stable state ends at the mark of spot j.
func (b *builder) stops(spots []spot, j, step int) bool {
	m := spots[j].mark
	if m.Kind.Ends() || m.Turns {
		return true
	}
	for k := j + step; k >= 0 && k < len(spots); k += step {
		if spots[k].mark == nil {
			return unstable(spots[k].values) > 0
		}
	}
	return true
}
