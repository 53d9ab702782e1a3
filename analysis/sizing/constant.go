package sizing

import (
	"math"

	"holdfast/analysis/hold"
)

// sidewaySteps is into how many steps the range on each side of today's setting is
// parted when a first setting that meets the specifications is looked for.
const sidewaySteps = 4

// nearest looks for the setting of a constant nearest to today's that meets the
// specifications, and for the window about it.
func (s *searcher) nearest() error {
	today := float64(s.report.Today)
	start, err := s.evaluate(s.scale.clamp(today))
	if err != nil {
		return err
	}
	if margin(start) >= 0 {
		return s.already(start)
	}
	sides, err := s.scout(start)
	if err != nil {
		return err
	}
	var best *side
	for _, d := range sides {
		if d.end != nil && (best == nil || s.distance(d.end, start) < s.distance(best.end, start)) {
			best = d
		}
	}
	if best == nil {
		return s.unmet()
	}
	far, err := s.end(best.meets, best.direction)
	if err != nil {
		return err
	}
	s.report.Outcome = Met
	s.report.Answer = &Answer{
		Setting: best.end.Setting, Short: best.end.short, May: best.end.May, Surely: best.end.Surely, Steady: best.end.Setting,
	}
	s.report.Window = newWindow(best.end, far, best.direction)
	return nil
}

// already reports that today's setting meets the specifications, and the window.
func (s *searcher) already(start *Evaluation) error {
	low, err := s.end(start, -1)
	if err != nil {
		return err
	}
	high, err := s.end(start, 1)
	if err != nil {
		return err
	}
	today, nan := hold.Value(start.Setting), hold.Value(math.NaN())
	s.report.Outcome = MetAlready
	s.report.Answer = &Answer{Setting: today, Short: nan, May: today, Surely: today, Steady: today}
	if lowerLimit(start) < 0 {
		s.report.Answer.Surely = nan
	}
	s.report.Window = &Window{Low: low.End, High: high.End}
	return nil
}

func newWindow(near, far *ending, direction float64) *Window {
	if direction > 0 {
		return &Window{Low: near.End, High: far.End}
	}
	return &Window{Low: far.End, High: near.End}
}

// A side is one of the two directions from today's setting.
type side struct {
	direction float64
	last      *Evaluation // the last that does not meet the specifications
	meets     *Evaluation // the first that does
	end       *ending     // of its window, towards today's setting
}

// distance is how far an end lies from today's setting, as a coordinate.
func (s *searcher) distance(e *ending, start *Evaluation) float64 {
	return math.Abs(s.scale.coordinate(float64(e.Setting)) - s.at(start))
}

// scout looks on both sides of today's setting for one that meets the specifications,
// nearer ones first; where none does, about the best.
func (s *searcher) scout(start *Evaluation) ([]*side, error) {
	sides := []*side{{direction: -1, last: start}, {direction: 1, last: start}}
	for step := 1; step <= sidewaySteps; step++ {
		for i, d := range sides {
			if err := s.lookAt(d, start, step, s.nearer(sides[1-i], start)); err != nil {
				return nil, err
			}
		}
	}
	if sides[0].meets == nil && sides[1].meets == nil {
		if err := s.climb(start, sides); err != nil {
			return nil, err
		}
	}
	for _, d := range sides {
		if d.meets != nil {
			var err error
			if d.end, err = s.close(d.meets, d.last, -d.direction); err != nil {
				return nil, err
			}
		}
	}
	return sides, nil
}

// nearer is how far to look on one side once the other has met the specifications.
func (s *searcher) nearer(other *side, start *Evaluation) float64 {
	if other.meets == nil {
		return math.Inf(1)
	}
	return math.Abs(s.at(other.meets) - s.at(start))
}

// lookAt evaluates a step of one side, unless that has met the specifications or the step
// is farther than within.
func (s *searcher) lookAt(d *side, start *Evaluation, step int, within float64) error {
	if d.meets != nil {
		return nil
	}
	limit := s.scale.low
	if d.direction > 0 {
		limit = s.scale.high
	}
	if start.Setting == limit {
		return nil
	}
	from, to := s.at(start), s.scale.coordinate(limit)
	if math.Abs(to-from)*float64(step)/sidewaySteps > within {
		return nil
	}
	e, err := s.evaluate(s.scale.setting(from + (to-from)*float64(step)/sidewaySteps))
	if err != nil {
		return err
	}
	if margin(e) >= 0 {
		d.meets = e
	} else {
		d.last = e
	}
	return nil
}

// golden is the share of an interval at which golden-section search looks next (Kiefer,
// Proc. Am. Math. Soc. 4 (1953) 502), mostClimbs how often it looks, and leastClimbs how
// often even where there is no hope, so that the best setting is one worth to print.
const (
	golden      = 0.3819660112501051
	mostClimbs  = 10
	leastClimbs = 3
)

// climb looks for the largest margin between the neighbours of the best setting, until
// one meets the specifications.
func (s *searcher) climb(start *Evaluation, sides []*side) error {
	best := s.best()
	if math.IsInf(margin(best), 0) {
		return nil
	}
	left, right := s.about(best)
	for look := range mostClimbs {
		a, m, b := s.at(left), s.at(best), s.at(right)
		if b-a <= edgeSteps*s.scale.tolerance(m) || look >= leastClimbs && s.ceiling(left, best, right) < 0 {
			return nil
		}
		x := m - golden*(m-a)
		if b-m > m-a {
			x = m + golden*(b-m)
		}
		e, err := s.evaluate(s.scale.setting(x))
		switch {
		case err != nil:
			return err
		case e == left || e == best || e == right:
			return nil
		case margin(e) >= 0:
			s.meetAt(e, start, sides)
			return nil
		}
		if margin(e) > margin(best) {
			best = e
		}
		left, right = s.about(best)
	}
	return nil
}

// ceiling is what the margin may reach between the neighbours of the best setting, if it
// goes on as steeply as it came.
func (s *searcher) ceiling(left, best, right *Evaluation) float64 {
	most := margin(best)
	for _, o := range []*Evaluation{left, right} {
		if o != best {
			most = math.Max(most, 2*margin(best)-margin(o))
		}
	}
	return most
}

// about gives the evaluated neighbours of one; itself at an end of what was evaluated.
func (s *searcher) about(e *Evaluation) (left, right *Evaluation) {
	left, right = e, e
	for _, o := range s.sorted() {
		if o.Setting < e.Setting {
			left = o
		}
		if o.Setting > e.Setting {
			return left, o
		}
	}
	return left, right
}

// meetAt notes a setting that meets the specifications, with its neighbour towards
// today's.
func (s *searcher) meetAt(e, start *Evaluation, sides []*side) {
	left, right := s.about(e)
	if e.Setting < start.Setting {
		sides[0].meets, sides[0].last = e, right
		return
	}
	sides[1].meets, sides[1].last = e, left
}
