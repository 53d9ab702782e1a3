package branch

import (
	"context"
	"math"

	"holdfast/deterministic"
	"holdfast/model"
)

// A Refiner gives points of a diagram's branches between those that are there. It
// holds scratch: one a goroutine.
type Refiner struct {
	diagram *Diagram
	b       *builder
}

// NewRefiner gives the refiner of a diagram that Follow made of the network.
func NewRefiner(n *model.Network, d *Diagram) *Refiner {
	var s sample
	for _, b := range d.Branches {
		for i := range b.Points {
			s.states = append(s.states, deterministic.State{Amounts: b.Points[i].Amounts})
		}
	}
	o := Options{High: d.High}.withDefaults()
	return &Refiner{d, newBuilder(context.Background(), n, d.Knob, []sample{s}, o)}
}

// Between gives the point at a value of the knob on the piece of a branch from its
// point i to the next, between whose knobs the value must lie; ok is false where
// the equations of rest do not lead there.
func (r *Refiner) Between(branch, i int, value float64) (p Point, ok bool) {
	points := r.diagram.Branches[branch].Points
	from, to := &points[i], &points[i+1]
	if !((value-from.Knob)*(to.Knob-value) >= 0) {
		return Point{}, false
	}
	u := make([]float64, 0, len(from.Amounts)+1)
	share := shareBetween(from, to, value)
	for j, x := range from.Amounts {
		u = append(u, x+share*(to.Amounts[j]-x))
	}
	u = append(u, value)
	guess := append([]float64(nil), u...)
	weight := r.b.ruler.weights(u)
	if !r.b.hold(u, weight, r.b.f.n, value) || distance(u, guess, weight) > sagitta {
		return Point{}, false
	}
	return r.b.point(r.b.spotAt(u, r.b.ruler.weights(u))), true
}

// shareBetween is the share of the way from one point to the next at which to look
// for a value of the knob. Near a fold the amounts go with the root of the knob's
// distance from it.
func shareBetween(from, to *Point, value float64) float64 {
	span := to.Knob - from.Knob
	if span == 0 {
		return 0
	}
	share := (value - from.Knob) / span
	switch {
	case to.SlowRate == 0:
		return 1 - math.Sqrt(max(1-share, 0))
	case from.SlowRate == 0:
		return math.Sqrt(max(share, 0))
	}
	return share
}
