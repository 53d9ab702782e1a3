package lattice

import (
	"encoding/binary"

	"holdfast/model"
)

// Where a transition can lead besides a node.
const (
	outside = -1 // out of the box
	unknown = -2 // to counts inside the box that are not on the lattice
)

// An edgeFinder lists the transitions of a node reaction by reaction, with the
// derivatives of their rates in the constants and in copies.
type edgeFinder struct {
	*solver
	moves  []move
	phases []phase
	bursts []model.Term // by phase
	point  []int64
	target []int64
	slope  []float64
	tables map[int][][]float64 // slopes by count, of reactions that read one species
	nodes  map[string]int32    // filled when first needed
	key    []byte
}

// prepare lists the moves.
func (e *edgeFinder) prepare() {
	n := e.problem.Network
	e.moves, e.phases = moves(n)
	e.point, e.target = make([]int64, e.species), make([]int64, e.species)
	e.slope = make([]float64, e.parameters())
	e.tables = map[int][][]float64{}
	e.bursts = burstsByPhase(n, e.moves, e.phases)
}

// burstsByPhase gives one of the bursts that each phase stands for.
func burstsByPhase(n *model.Network, ms []move, phases []phase) []model.Term {
	out := make([]model.Term, len(phases))
	for r := range ms {
		for i, p := 0, ms[r].phase; p != 0; i, p = i+1, phases[p].next {
			out[p] = n.Reactions[r].Bursts[i]
		}
	}
	return out
}

// each visits the transitions of node i whose rates have a derivative.
func (e *edgeFinder) each(i int, visit func(to int32, slope []float64)) {
	if e.moves == nil {
		e.prepare()
	}
	for s, k := range e.solver.point(i) {
		e.point[s] = int64(k)
	}
	if p := int(e.phase[i]); p != 0 {
		e.burst(i, p, visit)
		return
	}
	for r := range e.moves {
		m := &e.moves[r]
		if m.idle {
			continue
		}
		if slope := e.slopeOf(r, m); !allZero(slope) {
			copy(e.target, e.point)
			for _, t := range m.net {
				e.target[t.Species] += int64(t.Count)
			}
			visit(e.find(i, m.phase), slope)
		}
	}
}

// burst visits the two ways out of a burst under way: with mean m it goes on with the
// probability m/(1+m), whose derivative is 1/(1+m)².
func (e *edgeFinder) burst(i, number int, visit func(to int32, slope []float64)) {
	p, term := e.phases[number], e.bursts[number]
	e.slope[len(e.slope)-1] = 0
	e.problem.Network.BurstConstants(term, e.slope[:len(e.slope)-1])
	if allZero(e.slope) {
		return
	}
	copy(e.target, e.point)
	e.target[p.species]++
	for k := range e.slope {
		e.slope[k] /= (1 + term.Burst) * (1 + term.Burst)
	}
	visit(e.find(i, number), e.slope)
	e.target[p.species]--
	for k := range e.slope {
		e.slope[k] = -e.slope[k]
	}
	visit(e.find(i, p.next), e.slope)
}

// slopeOf gives the derivatives of reaction r's propensity at the point.
func (e *edgeFinder) slopeOf(r int, m *move) []float64 {
	fill := func(slope []float64) []float64 {
		last := len(slope) - 1
		slope[last] = e.problem.Network.PropensityConstants(r, e.point, slope[:last])
		return slope
	}
	if m.species < 0 {
		return fill(e.slope)
	}
	k := int(e.point[m.species] - e.box.Low[m.species])
	table := e.tables[r]
	for len(table) <= k {
		table = append(table, nil)
	}
	if table[k] == nil {
		table[k] = fill(make([]float64, len(e.slope)))
	}
	e.tables[r] = table
	return table[k]
}

func allZero(v []float64) bool {
	for _, x := range v {
		if x != 0 {
			return false
		}
	}
	return true
}

// find gives the node at the target: most often a successor of node i.
func (e *edgeFinder) find(i, phase int) int32 {
	for _, j := range e.successors(i) {
		if int(e.phase[j]) == phase && e.isAt(int(j)) {
			return j
		}
	}
	for s, k := range e.target {
		if k < e.box.Low[s] || k > e.box.High[s] {
			return outside
		}
	}
	if e.nodes == nil {
		e.index()
	}
	if j, ok := e.nodes[string(e.keyOf(e.target, phase))]; ok {
		return j
	}
	return unknown
}

func (e *edgeFinder) isAt(j int) bool {
	for s, k := range e.solver.point(j) {
		if int64(k) != e.target[s] {
			return false
		}
	}
	return true
}

// index lists all nodes by their counts.
func (e *edgeFinder) index() {
	e.nodes = map[string]int32{}
	counts := make([]int64, e.species)
	for i := range e.solver.nodes() {
		for s, k := range e.solver.point(i) {
			counts[s] = int64(k)
		}
		e.nodes[string(e.keyOf(counts, int(e.phase[i])))] = int32(i)
	}
}

func (e *edgeFinder) keyOf(counts []int64, phase int) []byte {
	e.key = append(e.key[:0], byte(phase))
	for _, k := range counts {
		e.key = binary.AppendVarint(e.key, k)
	}
	return e.key
}
