package sizing

import (
	"math"

	"holdfast/analysis/hold"
)

// smallest looks for the smallest number of copies that meets the specifications.
func (s *searcher) smallest() error {
	start, err := s.evaluate(s.scale.clamp(float64(s.report.Today)))
	if err != nil {
		return err
	}
	b, err := s.crossing(start, margin)
	if err != nil {
		return err
	}
	if b, err = s.smaller(b); err != nil {
		return err
	}
	if b.meets == nil {
		return s.unmet()
	}
	nan := hold.Value(math.NaN())
	setting := hold.Value(b.meets.Setting)
	s.report.Outcome, s.report.Answer = Met, &Answer{Setting: setting, Short: nan, May: setting, Surely: setting, Steady: setting}
	if b.fails != nil {
		s.report.Answer.Short = hold.Value(b.fails.Setting)
	} else {
		s.report.Outcome = MetAlready
	}
	for _, step := range []func(bracket) error{s.surely, s.may, s.steady} {
		if err := step(b); err != nil {
			return err
		}
	}
	return nil
}

// crossing gives the two neighbouring numbers between which the measure becomes 0 or
// more, sought from start on. Fails is nil where it is so down to the low end of the
// range, meets where it is so nowhere up to the high end.
func (s *searcher) crossing(start *Evaluation, m measure) (b bracket, err error) {
	if m(start) >= 0 {
		w := walk{measure: m, direction: -1, limit: s.scale.low, step: start.Setting / 2}
		b.meets, b.fails, err = s.walk(start, w)
	} else {
		w := walk{measure: m, direction: 1, limit: s.scale.high, step: start.Setting / 2, wanted: true}
		b.fails, b.meets, err = s.walk(start, w)
	}
	if err != nil || b.fails == nil || b.meets == nil {
		return b, err
	}
	return s.narrow(b, m)
}

// mostRestarts is how often a search begins again below a number that ought to have
// failed.
const mostRestarts = 4

// smaller looks below the number that fails: at its neighbours, half-way down, and at the
// low end. Where one of them surely meets the specifications after all, the search goes
// on from there.
func (s *searcher) smaller(b bracket) (bracket, error) {
	for range mostRestarts {
		if b.fails == nil {
			break
		}
		found, err := s.meetsBelow(b.fails.Setting)
		if err != nil {
			return b, err
		}
		if found == nil {
			break
		}
		if b, err = s.crossing(found, margin); err != nil {
			return b, err
		}
	}
	return b, nil
}

// neighbours is how many numbers next to the answer are evaluated on each side.
const neighbours = 2

// meetsBelow gives the lowest of a few numbers below one that surely meets the
// specifications, or nil.
func (s *searcher) meetsBelow(fails float64) (*Evaluation, error) {
	below := []float64{s.scale.low, math.Round(math.Sqrt(s.scale.low * fails))}
	for k := range neighbours {
		below = append(below, fails-1-float64(k))
	}
	var lowest *Evaluation
	for _, n := range below {
		if n < s.scale.low || n >= fails {
			continue
		}
		e, err := s.evaluate(n)
		if err != nil {
			return nil, err
		}
		if e.Verdict == Meets && (lowest == nil || n < lowest.Setting) {
			lowest = e
		}
	}
	return lowest, nil
}

// unmet reports that no number in the range meets the specifications.
func (s *searcher) unmet() error {
	s.report.Outcome = NotMet
	for _, e := range s.order {
		if e.Verdict == Open {
			s.report.Outcome = Undecided
		}
	}
	return nil
}

// edgeStep is the first step from the answer towards the ends of its interval, as a
// share of it.
const edgeStep = 0.05

// surely finds the smallest number whose lower limit meets the specifications, with its
// neighbours above.
func (s *searcher) surely(b bracket) error {
	a := s.report.Answer
	at := b.meets
	for range mostRestarts {
		before, found, err := s.surelyFrom(at)
		if err != nil {
			return err
		}
		if found == nil {
			a.Surely = hold.Value(math.NaN())
			return nil
		}
		if before != nil {
			edge, err := s.narrow(bracket{before, found}, lowerLimit)
			if err != nil {
				return err
			}
			found = edge.meets
		}
		a.Surely = hold.Value(found.Setting)
		if at, err = s.contradicting(found.Setting, 1); at == nil || err != nil {
			return err
		}
	}
	return nil
}

// surelyFrom goes up from a number to one whose lower limit meets the specifications;
// before is nil where the number itself does.
func (s *searcher) surelyFrom(at *Evaluation) (before, found *Evaluation, err error) {
	if lowerLimit(at) >= 0 {
		return nil, at, nil
	}
	return s.walk(at, walk{measure: lowerLimit, direction: 1, limit: s.scale.high, step: edgeStep * at.Setting, wanted: true})
}

// contradicting evaluates the neighbours of an end of the interval on its outer side,
// and gives the farthest that belongs inside, if any does.
func (s *searcher) contradicting(edge, direction float64) (*Evaluation, error) {
	var out *Evaluation
	for k := 1; k <= neighbours; k++ {
		n := edge + direction*float64(k)
		if n < s.scale.low || n > s.scale.high {
			break
		}
		e, err := s.evaluate(n)
		if err != nil {
			return nil, err
		}
		if direction > 0 && e.Verdict == Open || direction < 0 && e.Verdict != Fails {
			out = e
		}
	}
	return out, nil
}

// may finds the smallest number whose upper limit meets the specifications, with its
// neighbours below.
func (s *searcher) may(b bracket) error {
	if b.fails == nil {
		return nil
	}
	a := s.report.Answer
	at := b.fails
	for range mostRestarts {
		if upperLimit(at) >= 0 {
			w := walk{measure: upperLimit, direction: -1, limit: s.scale.low, step: edgeStep * at.Setting}
			last, fails, err := s.walk(at, w)
			if err != nil {
				return err
			}
			if fails == nil {
				a.May = hold.Value(last.Setting)
				return nil
			}
			edge, err := s.narrow(bracket{fails, last}, upperLimit)
			if err != nil {
				return err
			}
			a.May, at = hold.Value(edge.meets.Setting), edge.fails
		}
		inside, err := s.contradicting(at.Setting, -1)
		if inside == nil || err != nil {
			return err
		}
		at = inside
	}
	return nil
}

// steady sees whether numbers above the answer fail again, and finds the number from
// which on none does.
func (s *searcher) steady(b bracket) error {
	a := s.report.Answer
	for range mostRestarts {
		last, above := s.lastFailing(b.meets.Setting)
		if last == nil {
			return nil
		}
		if above == nil {
			var err error
			w := walk{measure: margin, direction: 1, limit: s.scale.high, step: math.Max(edgeStep*last.Setting, 1), wanted: true}
			if last, above, err = s.walk(last, w); err != nil {
				return err
			}
		}
		if above == nil {
			a.Steady = hold.Value(math.NaN())
			s.warn("the dwell time is not monotone in copies: above %s, %s fails again, and nothing above it meets the specifications", value(a.Setting), short(last.Setting))
			return nil
		}
		edge, err := s.narrow(bracket{last, above}, margin)
		if err != nil {
			return err
		}
		a.Steady = hold.Value(edge.meets.Setting)
		if next, _ := s.lastFailing(edge.meets.Setting); next == nil {
			s.warn("the dwell time is not monotone in copies: %s meets the specifications, but numbers above it fail again, up to %s", value(a.Setting), short(edge.fails.Setting))
			return nil
		}
	}
	return nil
}

// lastFailing gives the largest number above n that surely fails, and the next one
// evaluated above that which meets.
func (s *searcher) lastFailing(n float64) (last, above *Evaluation) {
	for _, e := range s.sorted() {
		switch {
		case e.Setting <= n:
		case e.Verdict == Fails:
			last, above = e, nil
		case last != nil && above == nil && margin(e) >= 0:
			above = e
		}
	}
	return last, above
}

func value(v hold.Value) string { return short(float64(v)) }
