package lattice

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"holdfast/model"
)

// A Box bounds the counts of every species, both ends included.
type Box struct{ Low, High []int64 }

// String gives the ranges, species by species.
func (b Box) String() string {
	var s strings.Builder
	for i := range b.Low {
		if i > 0 {
			s.WriteString(" × ")
		}
		s.WriteString(fmt.Sprintf("[%d, %d]", b.Low[i], b.High[i]))
	}
	return s.String()
}

func (b Box) clone() Box { return Box{slices.Clone(b.Low), slices.Clone(b.High)} }

// volume is the number of lattice points of the box, as a float since it may be
// huge.
func (b Box) volume() float64 {
	v := 1.0
	for i := range b.Low {
		v *= float64(b.High[i] - b.Low[i] + 1)
	}
	return v
}

// firstBox is the smallest box that holds, for every state, its centre and the
// given number of standard deviations on either side, and the starts and finite
// bounds of every core. A state without a covariance counts as having that of a
// Poisson law.
func firstBox(p *Problem, deviations float64) Box {
	n := len(p.Network.Species)
	b := Box{make([]int64, n), make([]int64, n)}
	for s := range n {
		low, high := math.Inf(1), 0.0
		for _, st := range p.noises() {
			sd := math.Sqrt(st.variance(s))
			low = min(low, st.Center[s]-deviations*sd)
			high = max(high, st.Center[s]+deviations*sd+6)
		}
		b.Low[s] = max(0, int64(min(low, 1e15)))
		b.High[s] = int64(math.Ceil(min(high, 1e15)))
	}
	for i := range p.Cores {
		b.cover(&p.Cores[i])
	}
	if len(p.Low) == n {
		copy(b.Low, p.Low)
	}
	if len(p.High) == n {
		copy(b.High, p.High)
	}
	for _, start := range p.starts() {
		b.hold(start)
	}
	return b
}

func (b Box) cover(c *model.Core) {
	b.hold(c.Start)
	for s, k := range c.High {
		if k < math.MaxInt32 && c.Shape != nil {
			b.High[s] = max(b.High[s], k)
			b.Low[s] = min(b.Low[s], max(0, c.Low[s]))
		}
	}
}

func (b Box) hold(counts []int64) {
	for s, k := range counts {
		b.Low[s] = min(b.Low[s], k)
		b.High[s] = max(b.High[s], k)
	}
}

// noises gives the states' centres and covariances, or the starts where none
// were given.
func (p *Problem) noises() []Noise {
	if len(p.States) > 0 {
		return p.States
	}
	var out []Noise
	for _, start := range p.starts() {
		center := make([]float64, len(start))
		for s, k := range start {
			center[s] = float64(k)
		}
		out = append(out, Noise{Center: center})
	}
	return out
}

func (n Noise) variance(s int) float64 {
	size := len(n.Center)
	if len(n.Covariance) == size*size {
		return max(n.Covariance[s*size+s], 0)
	}
	return n.Center[s] + 1
}
