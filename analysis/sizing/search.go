package sizing

import (
	"cmp"
	"context"
	"slices"

	"holdfast/model"
)

// A searcher looks for the answer on one knob.
type searcher struct {
	*evaluator
	scale  scale
	report *Report
}

func (s *searcher) evaluate(setting float64) (*Evaluation, error) { return s.evaluator.at(setting) }

// Run looks for the smallest copies, or for the setting of a constant nearest to
// today's, that meets the specifications.
//
// Errors are a *KnobError, a *SpecError for a state that the design does not have, a
// *hold.OptionError, those of hold.Run at the first setting, those of the records, and
// that of ctx. Settings at which the switch has vanished are evaluations that fail.
func Run(ctx context.Context, network *model.Network, o Options) (*Report, error) {
	o, err := o.complete(network)
	if err != nil {
		return nil, err
	}
	whole := network.ConstantIndex(o.Knob.Name) < 0
	s := &searcher{
		evaluator: &evaluator{ctx: ctx, network: network, options: o, known: map[float64]*Evaluation{}},
		scale:     newScale(o.Knob, whole, o.Tolerance),
	}
	s.report = newReport(network, o, s.setting(network))
	if whole {
		err = s.smallest()
	} else {
		err = s.nearest()
	}
	if err != nil {
		return nil, err
	}
	s.finish()
	return s.report, s.write()
}

// finish puts the evaluations into the report, by setting.
func (s *searcher) finish() {
	for _, e := range s.sorted() {
		s.report.Evaluations = append(s.report.Evaluations, *e)
		if e.Failure != "" {
			s.warn("%s %s could not be evaluated and counts as failing: %s", s.options.Knob.Name, short(e.Setting), e.Failure)
		}
	}
	best := s.best()
	s.report.Best = *best
}

// sorted gives the evaluations by setting.
func (s *searcher) sorted() []*Evaluation {
	out := slices.Clone(s.order)
	slices.SortFunc(out, func(a, b *Evaluation) int { return cmp.Compare(a.Setting, b.Setting) })
	return out
}

// best gives the evaluation of the largest margin.
func (s *searcher) best() *Evaluation {
	return slices.MaxFunc(s.sorted(), func(a, b *Evaluation) int { return cmp.Compare(a.Margin, b.Margin) })
}
