package deterministic

import (
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
