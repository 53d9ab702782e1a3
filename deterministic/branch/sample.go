package branch

import (
	"context"
	"math"

	"holdfast/deterministic"
	"holdfast/model"
)

// sample is the states found at one setting of the knob.
type sample struct {
	value  float64
	states []deterministic.State
	high   []float64
}

// settings lists the values of the knob to look for states at: today's first, then
// the given number over the range, ends included, evenly spaced or, where the
// range spans more than a decade, evenly in the logarithm.
func settings(k Knob, today float64, count int) []float64 {
	out := []float64{today}
	for i := range count {
		share := float64(i) / float64(count-1)
		v := k.Low + share*(k.High-k.Low)
		if k.Low > 0 && k.High > 10*k.Low {
			v = k.Low * math.Pow(k.High/k.Low, share)
		}
		switch i {
		case 0:
			v = k.Low
		case count - 1:
			v = k.High
		}
		if v != today {
			out = append(out, v)
		}
	}
	return out
}

// survey finds the states at one setting. A network without states there, or one
// that cannot be bound there, gives none and says why in last.
func survey(ctx context.Context, n *model.Network, k Knob, v float64) (s sample, last error) {
	s.value = v
	bound := n
	if v != k.Today(n) {
		var ok bool
		if bound, ok = rebind(n, k, v); !ok {
			return s, nil
		}
	}
	m, err := deterministic.Survey(ctx, bound, deterministic.Options{})
	if m == nil {
		return s, err
	}
	for _, st := range m.States {
		if st.Kind != deterministic.Declared {
			s.states = append(s.states, st)
		}
	}
	s.high = m.High
	return s, nil
}

// surveyAll looks at every setting. Only a cancelled context, or no state anywhere,
// is an error.
func surveyAll(ctx context.Context, n *model.Network, k Knob, values []float64) ([]sample, error) {
	var out []sample
	found := 0
	var last error
	for _, v := range values {
		s, err := survey(ctx, n, k, v)
		if ctx.Err() != nil {
			return nil, ctx.Err()
		}
		if err != nil {
			last = err
		}
		found += len(s.states)
		out = append(out, s)
	}
	if found == 0 {
		return nil, &NoStateError{k.Name, k.Low, k.High, last}
	}
	return out, nil
}

// boxOf gives the edges of the box that holds the samples' boxes, with room, and
// the floors of the amounts in it.
func boxOf(samples []sample, n int) (high, floor []float64) {
	const room = 10
	high = make([]float64, n)
	var states [][]float64
	for _, s := range samples {
		for i, h := range s.high {
			high[i] = max(high[i], room*h)
		}
		for _, st := range s.states {
			states = append(states, st.Amounts)
		}
	}
	floor = floors(states, n)
	for i := range floor {
		if math.IsNaN(floor[i]) {
			floor[i] = 1e-6 * high[i]
		}
		if floor[i] == 0 {
			floor[i] = 1e-6
		}
	}
	return high, floor
}
