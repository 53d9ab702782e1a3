package branch

import (
	"context"
	"slices"

	"holdfast/model"
)

// Follow gives all branches of resting states of the network over the knob's range
// that have a state at one of the samples or cross such a branch, with their
// special points, and the window of each stable state of today.
//
// Errors are *OutsideError where today's setting is not in the range, *BoxError,
// *NoStateError, and ctx's.
func Follow(ctx context.Context, n *model.Network, k Knob, o Options) (*Diagram, error) {
	o = o.withDefaults()
	today := k.Today(n)
	if today < k.Low || today > k.High {
		return nil, &OutsideError{k.Name, today, k.Low, k.High}
	}
	if err := o.checkBox(n); err != nil {
		return nil, err
	}
	samples, err := surveyAll(ctx, n, k, settings(k, today, o.Samples))
	if err != nil {
		return nil, err
	}
	b := newBuilder(ctx, n, k, samples, o)
	if err := b.build(samples); err != nil {
		return nil, err
	}
	return b.diagram(today, samples[0]), nil
}

// diagram turns what was traced into the result.
func (b *builder) diagram(today float64, now sample) *Diagram {
	d := &Diagram{Knob: b.knob, Today: today, High: b.high, Warnings: b.warnings}
	for _, t := range b.branches {
		d.Branches = append(d.Branches, b.branch(t))
	}
	for _, s := range now.states {
		if s.Kind.Stable() {
			d.Windows = append(d.Windows, b.window(s, today))
		}
	}
	return d
}

func (b *builder) branch(t traced) Branch {
	var out Branch
	for i, s := range t.spots {
		out.Points = append(out.Points, b.point(s))
		if s.mark != nil {
			m := *s.mark
			m.Index = i
			out.Marks = append(out.Marks, m)
		}
	}
	return out
}

// point gives the public form of a spot.
func (b *builder) point(s spot) Point {
	p := Point{Knob: s.u[b.f.n], Amounts: slices.Clone(s.u[:b.f.n]), Eigenvalues: s.values, SlowRate: slowRate(s.values), Unstable: unstable(s.values)}
	if s.singular() {
		p.SlowRate = 0
		return p
	}
	p.Stable = p.Unstable == 0 && (s.values != nil || len(b.f.independent) == 0)
	if p.Stable {
		p.Covariance = b.f.covariance(s.u, s.weight)
	}
	return p
}

// singular tells whether an eigenvalue of the spot is 0, or a pair imaginary.
func (s *spot) singular() bool {
	if s.mark != nil && s.mark.Kind <= Crossing {
		return true
	}
	size := 0.0
	for _, v := range s.values {
		size = max(size, abs(real(v)))
	}
	return len(s.values) > 0 && slowRate(s.values) <= 1e-13*size
}
