package branch

import (
	"math"

	"holdfast/model"
)

// setting is everything that knobs can turn, at some values of the knobs, with
// derivatives in the knobs.
type setting struct {
	net    *model.Network
	turned []Knob
	base   []float64 // the totals' values today, in molecules

	constants []float64
	copies    float64
	held      []float64   // the totals, in molecules, without what copies add
	slope     [][]float64 // by knob, one a constant: ∂constant/∂knob
}

func newSetting(n *model.Network, knobs []Knob, totals []model.Total) *setting {
	s := &setting{
		net: n, turned: knobs, base: make([]float64, len(totals)),
		constants: make([]float64, len(n.Constants)), held: make([]float64, len(totals)),
	}
	for i, t := range totals {
		s.base[i] = float64(t.Value)
	}
	for range knobs {
		s.slope = append(s.slope, make([]float64, len(n.Constants)))
	}
	return s
}

// turn sets the knobs to values p.
func (s *setting) turn(p []float64) {
	copy(s.constants, s.net.ConstantValues())
	copy(s.held, s.base)
	s.copies = s.net.Copies
	for i, k := range s.turned {
		switch k.kind {
		case copiesKnob:
			s.copies = p[i]
		case totalKnob:
			s.held[k.total] = p[i]
		default:
			s.turnConstants(k, p[i], s.slope[i])
		}
	}
}

// turnConstants scales the knob's constants so that their product is p.
func (s *setting) turnConstants(k Knob, p float64, slope []float64) {
	if len(k.constants) == 1 {
		s.constants[k.constants[0]] = p
		slope[k.constants[0]] = 1
		return
	}
	parts := float64(len(k.constants))
	factor := math.Pow(p/k.Today(s.net), 1/parts)
	for _, c := range k.constants {
		s.constants[c] *= factor
		slope[c] = s.constants[c] / (parts * p)
	}
}
