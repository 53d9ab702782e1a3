package branch

import "slices"

// branchOff traces the branches through a crossing that are not known yet.
func (b *builder) branchOff(c *crossing) error {
	for _, d := range c.directions {
		forth, err := b.leave(c, d, 1)
		if err != nil {
			return err
		}
		back, err := b.leave(c, d, -1)
		if err != nil {
			return err
		}
		if len(forth.spots)+len(back.spots) == 0 {
			continue
		}
		m := c.mark(b.f)
		m.Turns = c.kind == Pitchfork && abs(d[b.f.n]) < flatKnob
		middle := spot{u: c.u, weight: c.weight, values: b.f.eigenvalues(c.u, c.weight), mark: &m, meeting: c}
		b.keep(traced{spots: join(back, middle, forth)})
	}
	return nil
}

// leaveStep is how far from a crossing a new branch is entered.
const leaveStep = 0.01

// leave traces the half of a branch that leaves the crossing in direction d or, for
// sign −1, the other way. It gives no spots where that is outside, or known.
func (b *builder) leave(c *crossing, d []float64, sign float64) (*path, error) {
	none := &path{}
	p := &place{u: c.u, weight: c.weight, tangent: make([]float64, len(d))}
	for j, v := range d {
		p.tangent[j] = sign * v
	}
	u := p.step(leaveStep)
	guess := slices.Clone(u)
	if _, ok := b.correct(u, c.weight, d); !ok || distance(u, guess, c.weight) > driftShare*leaveStep || b.outside(u) {
		return none, nil
	}
	if _, known := b.covered(u); known {
		return none, nil
	}
	start, ok := b.at(u, b.ruler.weights(u), p.tangentIn(b.ruler.weights(u)))
	if !ok {
		return none, nil
	}
	out, err := b.trace(start)
	if err != nil {
		return none, err
	}
	out.spots = append([]spot{b.spotAt(u, start.weight)}, out.spots...)
	if len(out.spots) == 1 {
		out.spots[0].mark = out.last.mark
	}
	return out, nil
}

func (b *builder) outside(u []float64) bool {
	for i := range b.f.n {
		if u[i] < -1e-9*b.ruler.floor[i] || u[i] > b.high[i] {
			return true
		}
	}
	return u[b.f.n] < b.knob.Low || u[b.f.n] > b.knob.High
}

func abs(x float64) float64 { return max(x, -x) }
