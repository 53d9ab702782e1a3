package proof

import (
	"slices"

	"holdfast/deterministic/proof/interval"
)

// A box is a set of amounts: an interval for each unknown.
type box []iv

func (b box) hull(c box) box {
	out := make(box, len(b))
	for i := range b {
		out[i] = b[i].Hull(c[i])
	}
	return out
}

func (b box) in(c box) bool {
	for i := range b {
		if !b[i].In(c[i]) {
			return false
		}
	}
	return true
}

func (b box) meets(c box) bool {
	for i := range b {
		if b[i].Meet(c[i]).IsEmpty() {
			return false
		}
	}
	return true
}

func (b box) mid() []float64 {
	x := make([]float64, len(b))
	for i := range b {
		x[i] = b[i].Mid()
	}
	return x
}

// gain is the largest share of its width that an unknown lost from old to b; 1
// where an unbounded one became bounded.
func (b box) gain(old box) float64 {
	best := 0.0
	for i := range b {
		was, is := old[i].Width(), b[i].Width()
		switch {
		case was == 0 || is == was:
		case was > largest && is <= largest:
			return 1
		case was <= largest:
			best = max(best, 1-is/was)
		default:
			best = max(best, gainOfEnd(old[i], b[i]))
		}
	}
	return best
}

const largest = 0x1.fffffffffffffp1023

// gainOfEnd is the gain of an interval that stays unbounded: 1 where its finite
// end moved by more than a tenth of itself.
func gainOfEnd(old, now iv) float64 {
	if now.Mig() > 1.1*old.Mig() {
		return 1
	}
	return 0
}

// narrow cuts from the box, in place, what hull consistency excludes, until a
// round gains less than the given share; it tells whether it ran empty.
func (w *worker) narrow(b box, enough float64, rounds int) (empty bool) {
	g := &w.s.graph
	w.sheet.forward(g, b)
	for range rounds {
		old := slices.Clone(b)
		if w.sheet.impose(w.s.checks) || w.sheet.backward(g, &w.wings) {
			return true
		}
		w.sheet.leaves(g, b)
		if b.gain(old) < enough {
			return false
		}
		if w.sheet.refresh(g) {
			return true
		}
	}
	return false
}

// impose makes the checks 0; it tells whether one of them cannot be.
func (s sheet) impose(checks []int) (empty bool) {
	for _, id := range checks {
		s[id] = s[id].Meet(interval.Point(0))
		if s[id].IsEmpty() {
			return true
		}
	}
	return false
}

// leaves copies the species' intervals to the box.
func (s sheet) leaves(g *graph, b box) {
	for i := range g.nodes {
		if n := &g.nodes[i]; n.kind == variable {
			b[n.n] = s[i]
		}
	}
}
