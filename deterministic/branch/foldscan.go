package branch

import (
	"context"
	"slices"

	"holdfast/model"
)

// scan is what was found along lines in the plane of the two knobs.
type scan struct {
	folds   [][]float64 // amounts, first knob, second knob
	samples []sample
	last    error // of a line without states
}

// search follows the first knob at the samples of the second, and the second at
// today's value and both ends of the first: so every curve that comes to the edge of
// the plane is met.
func (d *FoldDiagram) search(ctx context.Context, n *model.Network, o Options) (scan, error) {
	var found scan
	for _, v := range settings(d.Second, d.Today[1], o.Samples) {
		if err := found.line(ctx, n, d.First, d.Second, v, o, false); err != nil {
			return found, err
		}
	}
	for _, v := range settings(d.First, d.Today[0], 2) {
		if err := found.line(ctx, n, d.Second, d.First, v, o, true); err != nil {
			return found, err
		}
	}
	if len(found.samples) == 0 {
		return found, found.last
	}
	return found, nil
}

// line follows one knob with the other held near v, and adds the folds; swapped says
// that the followed knob is the second. A line without states adds nothing.
func (s *scan) line(ctx context.Context, n *model.Network, k, held Knob, v float64, o Options, swapped bool) error {
	turned, ok := rebind(n, held, v)
	if !ok {
		return nil
	}
	samples, err := surveyAll(ctx, turned, k, settings(k, k.Today(n), o.Samples))
	if ctx.Err() != nil {
		return ctx.Err()
	}
	if err != nil {
		s.last = err
		return nil
	}
	b := newBuilder(ctx, turned, k, samples, o)
	if err := b.build(samples); err != nil {
		return err
	}
	s.samples = append(s.samples, samples...)
	for _, u := range b.folds() {
		u = append(u, held.Today(turned))
		if last := len(u) - 1; swapped {
			u[last-1], u[last] = u[last], u[last-1]
		}
		s.folds = append(s.folds, u)
	}
	return nil
}

// folds lists the folds of the branches, amounts and knob.
func (b *builder) folds() [][]float64 {
	var out [][]float64
	for _, t := range b.branches {
		for _, s := range t.spots {
			if s.mark != nil && s.mark.Kind == Fold {
				out = append(out, slices.Clone(s.u))
			}
		}
	}
	return out
}
