package lattice

import (
	"holdfast/model"
)

// A move is what one reaction does to the counts. A burst is not one jump of
// random length but a walk: the network enters a phase in which it gains one
// molecule with probability q or ends with 1−q, both in no time. The geometric
// law is memoryless, so this is exact, needs no cut, and moves by single steps.
type move struct {
	net   []model.Term
	phase int // the phase entered, 0 for none
	// table holds the propensity by count for laws of one species.
	species int
	table   []float64
	idle    bool // changes nothing
}

// A phase is one kind of burst under way.
type phase struct {
	species int
	again   float64 // probability of one more molecule
	next    int     // the phase that follows, 0 for none
}

// moves lists what the reactions do, and the phases numbered from 1.
func moves(n *model.Network) ([]move, []phase) {
	phases := []phase{{}}
	out := make([]move, len(n.Reactions))
	for r := range n.Reactions {
		re := &n.Reactions[r]
		next := 0
		for i := len(re.Bursts) - 1; i >= 0; i-- {
			b := re.Bursts[i]
			phases, next = addPhase(phases, phase{b.Species, b.Burst / (1 + b.Burst), next})
		}
		out[r] = move{net: re.Net, phase: next, species: -1, idle: len(re.Net) == 0 && next == 0}
		if reads := n.Reads(r); len(reads) == 1 {
			out[r].species = reads[0]
		}
	}
	return out, phases
}

// addPhase gives the number of the phase, added to the list if it is not there.
func addPhase(list []phase, p phase) ([]phase, int) {
	for i := 1; i < len(list); i++ {
		if list[i] == p {
			return list, i
		}
	}
	return append(list, p), len(list)
}

// jumps gives the longest step that any single transition makes in each species.
func jumps(species int, ms []move, phases []phase) []int {
	out := make([]int, species)
	for _, m := range ms {
		for _, t := range m.net {
			out[t.Species] = max(out[t.Species], t.Count, -t.Count)
		}
	}
	for _, p := range phases[1:] {
		out[p.species] = max(out[p.species], 1)
	}
	return out
}

// dimensions is the number of independent directions in which the species with
// long ranges move: the rank of the net changes. Species of few counts (an
// operator site) do not count.
func dimensions(ms []move, phases []phase, b Box, long []bool) int {
	var rows [][]float64
	add := func(terms []model.Term) {
		row := make([]float64, len(b.Low))
		for _, t := range terms {
			if long[t.Species] {
				row[t.Species] = float64(t.Count)
			}
		}
		rows = append(rows, row)
	}
	for _, m := range ms {
		add(m.net)
	}
	for _, p := range phases[1:] {
		add([]model.Term{{Species: p.species, Count: 1}})
	}
	return rank(rows)
}

// rank is the rank of a matrix of small whole numbers, by elimination with
// pivoting.
func rank(rows [][]float64) int {
	r := 0
	for c := 0; len(rows) > 0 && c < len(rows[0]); c++ {
		best := r
		for i := r; i < len(rows); i++ {
			if abs(rows[i][c]) > abs(rows[best][c]) {
				best = i
			}
		}
		if best >= len(rows) || abs(rows[best][c]) < 1e-9 {
			continue
		}
		rows[r], rows[best] = rows[best], rows[r]
		for i := r + 1; i < len(rows); i++ {
			f := rows[i][c] / rows[r][c]
			for j := c; j < len(rows[i]); j++ {
				rows[i][j] -= f * rows[r][j]
			}
		}
		r++
	}
	return r
}

func abs(x float64) float64 { return max(x, -x) }
