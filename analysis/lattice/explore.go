package lattice

import (
	"context"
	"math"

	"holdfast/model"
)

// tablePerNode is how many table entries of 4 bytes a node allowed may cost while
// the lattice is explored.
const tablePerNode = 24

// An explorer builds a chain by breadth-first search, so that conserved totals,
// parities and whatever else cannot be reached drop out.
type explorer struct {
	*chain
	network *model.Network
	box     Box
	moves   []move
	phases  []phase
	seen    finder
	limit   int  // nodes allowed
	shallow bool // it is known that there are three dimensions at most
	point   []int64
	target  []int64
}

// explore lists the nodes that can be reached from the starts inside the box. It
// gives errTooMany or errTooDeep with the chain so far when there are more than
// limit, or more than smallLattice in more than three dimensions.
func explore(ctx context.Context, n *model.Network, b Box, starts [][]int64, limit int) (*chain, error) {
	ms, phases := moves(n)
	size := len(n.Species)
	e := &explorer{
		chain:   &chain{species: size, first: []int{0}, jumps: jumps(size, ms, phases)},
		network: n, box: b, moves: ms, phases: phases, limit: limit,
		seen:  newFinder(b, len(phases), tablePerNode*float64(limit)),
		point: make([]int64, size), target: make([]int64, size),
	}
	for _, s := range starts {
		e.starts = append(e.starts, e.node(s, 0))
	}
	for i := 0; i < e.nodes(); i++ {
		if i%4096 == 0 && ctx.Err() != nil {
			return nil, ctx.Err()
		}
		if err := e.tooMuch(); err != nil {
			return e.chain, err
		}
		if err := e.expand(i); err != nil {
			return nil, err
		}
	}
	e.rank = dimensions(ms, phases, b, e.long())
	return e.chain, nil
}

// smallLattice is how many nodes are served in any number of dimensions.
const smallLattice = 20000

// tooMuch ends an exploration that nothing could come of.
func (e *explorer) tooMuch() error {
	if e.nodes() > e.limit {
		return errTooMany
	}
	if e.shallow || e.nodes() <= smallLattice {
		return nil
	}
	e.shallow = true // by now every species has shown its range
	if e.rank = dimensions(e.moves, e.phases, e.box, e.long()); e.rank > 3 {
		return errTooDeep
	}
	return nil
}

// node gives the number of the node, new or old.
func (e *explorer) node(counts []int64, phase int) int32 {
	i, old := e.seen.find(counts, phase, int32(e.nodes()))
	if old {
		return i
	}
	for _, k := range counts {
		e.counts = append(e.counts, int32(k))
	}
	e.phase = append(e.phase, uint8(phase))
	return i
}

// expand lists the transitions out of node i.
func (e *explorer) expand(i int) error {
	for s, k := range e.chain.point(i) {
		e.point[s] = int64(k)
	}
	e.exit = append(e.exit, 0)
	if p := e.phase[i]; p != 0 {
		e.burst(i, e.phases[p], int(p))
		e.first = append(e.first, len(e.to))
		return nil
	}
	for r := range e.moves {
		m := &e.moves[r]
		if m.idle {
			continue
		}
		a := e.propensity(r, m)
		if !(a >= 0) || math.IsInf(a, 1) {
			return e.badRate(r, a)
		}
		if a > 0 {
			copy(e.target, e.point)
			for _, t := range m.net {
				e.target[t.Species] += int64(t.Count)
			}
			e.step(i, m.phase, a)
		}
	}
	e.first = append(e.first, len(e.to))
	return nil
}

// burst lists the two ways out of a burst under way.
func (e *explorer) burst(i int, p phase, number int) {
	copy(e.target, e.point)
	e.target[p.species]++
	e.step(i, number, p.again)
	e.target[p.species]--
	e.step(i, p.next, 1-p.again)
}

// step adds the transition from node i to the target, or to its exits.
func (e *explorer) step(i, phase int, rate float64) {
	for s, k := range e.target {
		face := -1
		if k < e.box.Low[s] {
			face = 2 * s
		} else if k > e.box.High[s] {
			face = 2*s + 1
		}
		if face >= 0 {
			e.exit[i] += rate
			e.exits = append(e.exits, exit{int32(i), face, rate})
			return
		}
	}
	j := e.node(e.target, phase)
	for k := e.first[i]; k < len(e.to); k++ {
		if e.to[k] == j {
			e.rate[k] += rate
			return
		}
	}
	e.to = append(e.to, j)
	e.rate = append(e.rate, rate)
}

// propensity evaluates reaction r at the point, from its table where its law
// reads one species only.
func (e *explorer) propensity(r int, m *move) float64 {
	if m.species < 0 {
		return e.network.Propensity(r, e.point)
	}
	k := int(e.point[m.species] - e.box.Low[m.species])
	for len(m.table) <= k {
		m.table = append(m.table, math.NaN())
	}
	if math.IsNaN(m.table[k]) {
		m.table[k] = e.network.Propensity(r, e.point)
	}
	return m.table[k]
}

func (e *explorer) badRate(r int, value float64) error {
	err := &RateError{Reaction: e.network.Reactions[r].Name, Value: value, Counts: append([]int64(nil), e.point...)}
	for _, s := range e.network.Species {
		err.Species = append(err.Species, s.Name)
	}
	return err
}
