package sizing

import "math"

// A walk goes outward from an evaluation to where the measure changes its sign.
type walk struct {
	measure   measure
	direction float64 // +1 up, −1 down
	limit     float64 // the last setting to look at
	step      float64 // the first, as a coordinate
	wanted    bool    // whether the measure is to become 0 or more
}

const (
	// mostUnseen is how many settings on end without any flip seen, and without an
	// answer, end a walk: farther out there is still less to see.
	mostUnseen = 2
	// mostVanished is how many copy numbers on end without a switch end a walk: copies
	// alone make no second state, but for species whose number does not scale.
	mostVanished = 4
)

// walk evaluates settings from one that is not as wanted on, and gives the last two: the
// second is nil where none is as wanted up to the limit.
func (s *searcher) walk(from *Evaluation, w walk) (before, found *Evaluation, err error) {
	limit := s.scale.coordinate(w.limit)
	unseen, vanished, step := 0, 0, w.step
	for before = from; before.Setting != w.limit; {
		next := s.scale.setting(s.at(before) + w.direction*s.stride(before, step, w.direction))
		if (limit-s.scale.coordinate(next))*w.direction < 0 || next == before.Setting {
			next = w.limit
		}
		e, err := s.evaluate(next)
		if err != nil {
			return before, nil, err
		}
		if w.measure(e) >= 0 == w.wanted {
			return before, e, nil
		}
		unseen, vanished = onEnd(unseen, e.unseen), onEnd(vanished, e.Vanished != "")
		if unseen == mostUnseen || vanished == mostVanished && s.scale.whole {
			return e, nil, nil
		}
		step = s.predict(before, e, w, step)
		before = e
	}
	return before, nil, nil
}

// onEnd counts how often something was so on end.
func onEnd(before int, again bool) int {
	if again {
		return before + 1
	}
	return 0
}

// stride keeps a step down in copies from going below half of them: the secant tells
// little of so far, and small numbers lie close together.
func (s *searcher) stride(from *Evaluation, step, direction float64) float64 {
	if s.scale.whole {
		step = math.Max(step, 1)
		if direction < 0 {
			step = math.Min(step, math.Max(from.Setting/2, 1))
		}
	}
	return step
}

// overshoot is by how much a predicted step is lengthened, so that it lands on the far
// side of the root more often than not; the next is between a quarter and twice the
// last.
const overshoot = 1.1

// predict gives the step to where the secant through two evaluations has its root.
func (s *searcher) predict(before, e *Evaluation, w walk, step float64) float64 {
	slope := (w.measure(e) - w.measure(before)) / (s.at(e) - s.at(before))
	to := -w.measure(e) / slope * w.direction
	if !(to > 0) || math.IsInf(to, 0) {
		return 2 * step
	}
	return math.Min(math.Max(overshoot*to, step/4), 2*step)
}
