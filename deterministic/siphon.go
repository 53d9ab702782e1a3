package deterministic

import (
	"encoding/binary"
	"math"
	"slices"
)

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
