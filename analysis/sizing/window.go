package sizing

import (
	"fmt"
	"math"

	"holdfast/analysis/hold"
	"holdfast/deterministic"
	"holdfast/deterministic/branch"
)

// An ending is an end of a window with the setting just beyond that fails.
type ending struct {
	End
	short hold.Value
}

// windowSteps is into how many first steps the range is parted when the end of a window
// is looked for.
const windowSteps = 8

// end looks from a setting that meets the specifications for the end of its window.
func (s *searcher) end(from *Evaluation, direction float64) (*ending, error) {
	limit := s.scale.low
	if direction > 0 {
		limit = s.scale.high
	}
	step := (s.scale.coordinate(s.scale.high) - s.scale.coordinate(s.scale.low)) / windowSteps
	meets, fails, err := s.walk(from, walk{measure: margin, direction: direction, limit: limit, step: step})
	if err != nil {
		return nil, err
	}
	if fails == nil {
		edge := hold.Value(meets.Setting)
		return &ending{End{Setting: edge, Surely: edge, May: edge, By: ByRange}, hold.Value(math.NaN())}, nil
	}
	return s.close(meets, fails, direction)
}

// close finds the end of a window between a setting that meets the specifications and
// one, in the given direction, that does not.
func (s *searcher) close(meets, fails *Evaluation, direction float64) (*ending, error) {
	if fails.Vanished != "" {
		inside, outside := s.vanishing(meets.Setting, fails.Setting)
		e, err := s.evaluate(s.setBack(meets.Setting, inside))
		if err != nil {
			return nil, err
		}
		if margin(e) >= 0 {
			edge := hold.Value(e.Setting)
			text := s.vanishText(meets.Setting, inside, outside)
			return &ending{End{Setting: edge, Surely: edge, May: edge, By: ByVanish, Text: text}, hold.Value(outside)}, nil
		}
		fails = e
	}
	b, err := s.narrow(bracket{fails, meets}, margin)
	if err != nil {
		return nil, err
	}
	edge := hold.Value(b.meets.Setting)
	out := &ending{End{Setting: edge, Surely: edge, May: edge, By: BySpec}, hold.Value(b.fails.Setting)}
	if c := b.fails.Binding(); c != nil {
		out.Text = s.options.Specs[c.Spec].String() + " fails beyond"
		if s.options.Specs[c.Spec].State == Every {
			out.Text = fmt.Sprintf("%s fails beyond, for %s", s.options.Specs[c.Spec], c.State)
		}
	}
	return out, s.limits(out, b, direction)
}

// edgeSteps is the first step from an end of a window to the ends of its interval, in
// tolerances.
const edgeSteps = 4

// limits sets the interval of an end: where the lower and the upper limit of what was
// found cross what was asked.
func (s *searcher) limits(out *ending, b bracket, direction float64) (err error) {
	inward, outward := s.scale.high, s.scale.low
	if direction > 0 {
		inward, outward = outward, inward
	}
	if lowerLimit(b.meets) < 0 {
		w := walk{measure: lowerLimit, direction: -direction, limit: inward, wanted: true}
		if out.Surely, err = s.limit(b.meets, w, math.NaN()); err != nil {
			return err
		}
	}
	if upperLimit(b.fails) >= 0 {
		w := walk{measure: upperLimit, direction: direction, limit: outward}
		out.May, err = s.limit(b.fails, w, outward)
	}
	return err
}

// limit walks from the end of a window to where a limit crosses what was asked, and on
// from neighbours beyond that contradict it; none is what it is where it does so nowhere.
func (s *searcher) limit(root *Evaluation, w walk, none float64) (hold.Value, error) {
	from := root
	w.step = edgeSteps * s.scale.tolerance(s.at(root))
	for range mostRestarts {
		before, found, err := s.walk(from, w)
		if err != nil || found == nil {
			return hold.Value(none), err
		}
		b := bracket{fails: before, meets: found}
		if !w.wanted {
			b = bracket{fails: found, meets: before}
		}
		if b, err = s.narrow(b, w.measure); err != nil {
			return 0, err
		}
		outer := b.fails
		if w.wanted {
			outer = b.meets
		}
		again, err := s.beyond(outer, math.Abs(s.at(outer)-s.at(root))/2, w)
		if again == nil || err != nil {
			return hold.Value(b.meets.Setting), err
		}
		from = again
	}
	return hold.Value(none), nil
}

// beyond evaluates neighbours of the end of an interval on its outer side, so far
// apart, and gives the farthest that belongs inside, if any does.
func (s *searcher) beyond(outer *Evaluation, apart float64, w walk) (*Evaluation, error) {
	var out *Evaluation
	for k := 1; k <= neighbours; k++ {
		setting := s.scale.setting(s.at(outer) + w.direction*apart*float64(k))
		if setting == outer.Setting || setting == w.limit {
			break
		}
		e, err := s.evaluate(setting)
		if err != nil {
			return nil, err
		}
		if w.measure(e) >= 0 != w.wanted {
			out = e
		}
	}
	return out, nil
}

// setBack goes from where a switch vanishes back towards a setting that meets the
// specifications by the tolerance: at the very edge fluctuations are without bound, and
// an evaluation would take for ever.
func (s *searcher) setBack(meets, inside float64) float64 {
	from, to := s.scale.coordinate(inside), s.scale.coordinate(meets)
	back := s.scale.tolerance(from)
	if back >= math.Abs(to-from) {
		return meets
	}
	return s.scale.setting(from + math.Copysign(back, to-from))
}

// vanishing bisects, by surveys alone, between a setting with a switch and one without,
// down to the last digit that is set.
func (s *searcher) vanishing(with, without float64) (inside, outside float64) {
	for {
		middle := s.scale.setting((s.scale.coordinate(with) + s.scale.coordinate(without)) / 2)
		if middle == with || middle == without || s.ctx.Err() != nil {
			return with, without
		}
		if s.isSwitch(middle) {
			with = middle
		} else {
			without = middle
		}
	}
}

// isSwitch tells whether the states that are asked for exist at a setting.
func (s *searcher) isSwitch(setting float64) bool {
	n, err := s.bind(setting)
	if err != nil {
		return false
	}
	m, err := deterministic.Survey(s.ctx, n, deterministic.Options{})
	if err != nil {
		return false
	}
	for _, spec := range s.options.Specs {
		found := spec.State == Every
		for i := range m.Stable() {
			found = found || m.Stable()[i].Name == spec.State
		}
		if !found {
			return false
		}
	}
	return true
}

// samePlace is how near, relative to its value, a fold must lie to where the switch
// vanishes to be what makes it vanish.
const samePlace = 1e-4

// vanishText says how the switch vanishes between two settings: by the special point
// of its branches that lies there, followed from a setting where it is a switch.
func (s *searcher) vanishText(from, inside, outside float64) string {
	text := "the switch vanishes beyond"
	n, err := s.bind(from)
	if err != nil {
		return text
	}
	k, err := branch.NewKnob(n, s.options.Knob.Name, s.scale.low, s.scale.high)
	if err != nil {
		return text
	}
	d, err := branch.Follow(s.ctx, n, k, branch.Options{})
	if err != nil {
		return text
	}
	for _, w := range d.Windows {
		for _, e := range []branch.End{w.Low, w.High} {
			if !e.Mark.Kind.Ends() && math.Abs(e.Knob-(inside+outside)/2) <= samePlace*e.Knob {
				return fmt.Sprintf("%s: %s ends in a %s at %.10g", text, w.State, e.Mark.Kind, e.Knob)
			}
		}
	}
	return text
}
