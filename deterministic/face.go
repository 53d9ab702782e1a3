package deterministic

import (
	"encoding/binary"
	"math"
	"slices"

	"holdfast/model"
)

// maxFaces bounds the number of faces that are searched.
const maxFaces = 256

// face is one part of the boundary of the positive amounts, or their inside,
// where the rate equations can rest with every species that is not frozen
// present.
type face struct {
	*class
	// loose tells that the reactions that run there have conserved totals that
	// the start does not fix: its resting states, if any, are not isolated.
	loose bool
}

// faces lists the inside (first, where it can hold a resting state) and the
// faces of the network's class that flows cannot leave: sets of absent species
// of which no reaction makes any while they are all absent (siphons; Angeli, De
// Leenheer, Sontag, Math. Biosci. 210 (2007) 598), each enlarged by the species
// that then are lost and not made.
func (s *system) faces(totals []model.Total, high []float64) (out []face, complete bool) {
	probe := newProbe(s, high)
	seen, kept := map[string]bool{}, map[string]bool{}
	queue := [][]bool{make([]bool, s.n)}
	for len(queue) > 0 && len(seen) < maxFaces {
		siphon := queue[0]
		queue = queue[1:]
		if seen[faceKey(siphon)] {
			continue
		}
		seen[faceKey(siphon)] = true
		queue = append(queue, probe.extensions(siphon)...)
		frozen, ok := probe.starve(siphon)
		key := faceKey(frozen)
		if !ok || kept[key] {
			continue
		}
		kept[key] = true
		if f, ok := s.newFace(probe, totals, frozen); ok {
			out = append(out, f)
		}
		queue = append(queue, frozen)
	}
	slices.SortStableFunc(out, func(a, b face) int { return countTrue(a.frozen) - countTrue(b.frozen) })
	return out, len(queue) == 0 && probe.steps <= probeSteps
}

func (s *system) newFace(p *probe, totals []model.Total, frozen []bool) (face, bool) {
	c, ok := newClass(s, totals, frozen)
	if !ok {
		return face{}, false
	}
	runs := p.running(frozen)
	vectors := reactionVectors(s.net, func(r int) bool { return runs[r] })
	return face{c, rank(vectors, s.n) < c.dim()}, true
}

// probe tells which reactions run when some species are absent, by their rates
// at points with all other amounts positive, from a thousandth of the box's end
// upwards and in no special relation.
type probe struct {
	s      *system
	points [12][]float64
	known  map[string]bool // by reaction and which of the species it reads are absent
	steps  int
}

// probeSteps bounds the search for siphons.
const probeSteps = 100_000

func newProbe(s *system, high []float64) *probe {
	p := &probe{s: s, known: map[string]bool{}}
	for k := range p.points {
		p.points[k] = make([]float64, s.n)
		for i := range s.n {
			p.points[k][i] = max(high[i], least/s.unit[i]) * math.Pow(1000, halton(k+1, i)-float64(k%2))
		}
	}
	return p
}

// running tells, by reaction, whether its rate is not 0 with the frozen species
// absent.
func (p *probe) running(frozen []bool) []bool {
	out := make([]bool, len(p.s.changes))
	for r := range out {
		out[r] = p.runs(r, frozen)
	}
	return out
}

func (p *probe) runs(r int, frozen []bool) bool {
	key := make([]byte, 0, 16)
	key = binary.AppendUvarint(key, uint64(r))
	for _, i := range p.s.reads[r] {
		key = append(key, '0')
		if frozen[i] {
			key[len(key)-1] = '1'
		}
	}
	runs, ok := p.known[string(key)]
	if !ok {
		runs = p.evaluate(r, frozen)
		p.known[string(key)] = runs
	}
	return runs
}

// evaluate tells whether the rate is not 0 at some point.
func (p *probe) evaluate(r int, frozen []bool) bool {
	x := make([]float64, p.s.n)
	for _, point := range p.points {
		for _, i := range p.s.reads[r] {
			if x[i] = point[i]; frozen[i] {
				x[i] = 0
			}
		}
		if p.s.net.Flux(r, x) != 0 {
			return true
		}
	}
	return false
}

// starve adds to the frozen species those that are lost and not made while the
// frozen ones are absent: none of these is left at rest. It is false where a
// frozen species is made after all.
func (p *probe) starve(frozen []bool) ([]bool, bool) {
	frozen = slices.Clone(frozen)
	for {
		made, lost := p.balance(frozen)
		grown := false
		for i := range frozen {
			if frozen[i] && made[i] {
				return frozen, false
			}
			if !frozen[i] && lost[i] && !made[i] {
				frozen[i], grown = true, true
			}
		}
		if !grown {
			return frozen, true
		}
	}
}

// balance tells which species some running reaction makes, and which some
// running reaction takes away.
func (p *probe) balance(frozen []bool) (made, lost []bool) {
	made, lost = make([]bool, p.s.n), make([]bool, p.s.n)
	for r, runs := range p.running(frozen) {
		if !runs {
			continue
		}
		for _, c := range p.s.changes[r] {
			if c.amount > 0 {
				made[c.species] = true
			} else {
				lost[c.species] = true
			}
		}
	}
	return made, lost
}

// extensions lists the smallest siphons that hold the frozen species and one
// more each.
func (p *probe) extensions(frozen []bool) [][]bool {
	var out [][]bool
	for i, f := range frozen {
		if f {
			continue
		}
		next := slices.Clone(frozen)
		next[i] = true
		p.complete(next, &out, 0)
	}
	return out
}

// complete adds species to the set until no reaction makes any of it: for each
// running reaction that does, one of the species that its law reads must be
// absent too, each in its turn.
func (p *probe) complete(frozen []bool, out *[][]bool, depth int) {
	if p.steps++; p.steps > probeSteps || len(*out) >= maxFaces || depth > p.s.n {
		return
	}
	runs := p.running(frozen)
	for r, list := range p.s.changes {
		if !runs[r] || !makesFrozen(list, frozen) {
			continue
		}
		for _, k := range p.s.reads[r] {
			if frozen[k] {
				continue
			}
			next := slices.Clone(frozen)
			next[k] = true
			p.complete(next, out, depth+1)
		}
		return
	}
	*out = append(*out, frozen)
}

func makesFrozen(list []change, frozen []bool) bool {
	for _, c := range list {
		if c.amount > 0 && frozen[c.species] {
			return true
		}
	}
	return false
}

func faceKey(frozen []bool) string {
	b := make([]byte, len(frozen))
	for i, f := range frozen {
		if f {
			b[i] = 1
		}
	}
	return string(b)
}

func countTrue(v []bool) int {
	n := 0
	for _, b := range v {
		if b {
			n++
		}
	}
	return n
}
