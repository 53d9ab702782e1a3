package levers

import (
	"context"
	"math"

	"holdfast/analysis/hold"
	"holdfast/deterministic/branch"
)

// reach is how far a constant is turned in search of a fold, as a factor.
const reach = 10

// findLosses follows the stable states as each parameter is turned, down to a tenth and
// up to ten times today's value.
func (j *job) findLosses(ctx context.Context) error {
	j.losses = make([][2]*Loss, j.parameters())
	for k := range j.losses {
		name, value := j.parameter(k)
		if value == 0 || !j.read(k) || !j.movesStates(k) {
			continue
		}
		j.tell("following the states in "+name, float64(k)/float64(len(j.losses)))
		d, err := j.follow(ctx, name, value)
		if ctx.Err() != nil {
			return context.Cause(ctx)
		}
		if err != nil {
			j.warn("%s: the way to the nearest fold is not known: %v", name, err)
			continue
		}
		j.losses[k] = nearest(d)
	}
	return nil
}

// movesStates tells whether the states' amounts depend on the parameter: copies move
// them only beside species whose count is fixed, or where totals are conserved.
func (j *job) movesStates(k int) bool {
	if k < len(j.network.Constants) {
		return true
	}
	for _, s := range j.network.Species {
		if s.Fixed {
			return true
		}
	}
	return false
}

func (j *job) follow(ctx context.Context, name string, value float64) (*branch.Diagram, error) {
	knob, err := branch.NewKnob(j.network, name, value/reach, value*reach)
	if err != nil {
		return nil, err
	}
	return branch.Follow(ctx, j.network, knob, branch.Options{})
}

// nearest gives the first loss of a state below and above today.
func nearest(d *branch.Diagram) (out [2]*Loss) {
	for i := range d.Windows {
		w := &d.Windows[i]
		for side, e := range [2]*branch.End{&w.Low, &w.High} {
			kind := e.Mark.Kind
			if math.IsNaN(e.Knob) || kind.Ends() && kind != branch.Emptied {
				continue
			}
			way := 100 * (e.Knob/d.Today - 1)
			if out[side] == nil || math.Abs(way) < math.Abs(float64(out[side].Percent)) {
				out[side] = &Loss{w.State, kind.String(), hold.Value(e.Knob), hold.Value(way)}
			}
		}
	}
	return out
}
