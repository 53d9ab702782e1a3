package resting

import (
	"fmt"
	"strings"

	"holdfast/deterministic"
	"holdfast/deterministic/proof"
	"holdfast/deterministic/proof/interval"
)

// missed lists the proved states that no state of the survey is.
func (l *List) missed() []proof.Root {
	var out []proof.Root
	for _, r := range l.Proof.Roots {
		if l.within(r.Box) == nil && !r.Edge {
			out = append(out, r)
		}
	}
	return out
}

// within gives the surveyed state that lies in the box, or nil.
func (l *List) within(b []interval.Interval) *deterministic.State {
	for i := range l.Map.States {
		s := &l.Map.States[i]
		if s.Kind != deterministic.Declared && holds(b, s) {
			return s
		}
	}
	return nil
}

// holds tells whether the state lies in the box, to within its rounding error.
func holds(b []interval.Interval, s *deterministic.State) bool {
	for i, a := range b {
		slack := 4*s.Quality.Error[i] + 1e-12*s.Amounts[i]
		if s.Amounts[i] < a.Lo-slack || s.Amounts[i] > a.Hi+slack {
			return false
		}
	}
	return true
}

// seeds are starts at the states; an amount that may be 0 is taken as 0.
func seeds(roots []proof.Root) [][]float64 {
	var out [][]float64
	for _, r := range roots {
		x := append([]float64(nil), r.Point...)
		for i, a := range r.Box {
			if a.Lo <= 0 {
				x[i] = 0
			}
		}
		out = append(out, x)
	}
	return out
}

// points are the amounts of the states of a map.
func points(m *deterministic.Map) [][]float64 {
	var out [][]float64
	for i := range m.States {
		if m.States[i].Kind != deterministic.Declared {
			out = append(out, m.States[i].Amounts)
		}
	}
	return out
}

// reportMissed says which states the survey had missed, and which it misses still.
func (l *List) reportMissed(missed []proof.Root) {
	var found []string
	for _, r := range missed {
		if s := l.within(r.Box); s != nil {
			found = append(found, s.Name)
			continue
		}
		l.Warnings = append(l.Warnings, fmt.Sprintf("a resting state at %s is proved but is not in the list: its stability could not be worked out", l.amounts(r.Point)))
	}
	if len(found) > 0 {
		l.Warnings = append(l.Warnings, "the multi-start search had missed what the proof found: "+strings.Join(found, ", "))
	}
}

// compare warns of surveyed states that the proof excludes, and of proved ones at a
// kink.
func (l *List) compare() {
	for i := range l.Map.States {
		s := &l.Map.States[i]
		if s.Kind == deterministic.Declared || l.covered(s) {
			continue
		}
		l.Warnings = append(l.Warnings, fmt.Sprintf("%s is in the list of the multi-start search, and the proof says that no resting state is there", s.Name))
	}
	for _, r := range l.Proof.Roots {
		if s := l.within(r.Box); r.Kink && s != nil && s.Kind != deterministic.Degenerate {
			l.Warnings = append(l.Warnings, fmt.Sprintf("a law has no derivative at %s, where min, max or abs change over: its eigenvalues and linear noise hold on one side only", s.Name))
		}
	}
}

// covered tells whether the proof has the state, or leaves open that it is there.
func (l *List) covered(s *deterministic.State) bool {
	if l.Proof.Ending.Early() {
		return true
	}
	for _, r := range l.Proof.Roots {
		if holds(r.Box, s) {
			return true
		}
	}
	for _, u := range l.Proof.Unresolved {
		if holds(u.Box, s) {
			return true
		}
	}
	for i, x := range s.Amounts {
		if x < l.Proof.Low[i] || x > l.Proof.High[i] {
			return true // outside what was searched
		}
	}
	return false
}

// amounts writes a point by species.
func (l *List) amounts(x []float64) string {
	parts := make([]string, len(x))
	for i, v := range x {
		parts[i] = fmt.Sprintf("%s = %.6g", l.Map.Network.Species[i].Name, v)
	}
	return strings.Join(parts, ", ")
}
