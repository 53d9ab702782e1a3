package separatrix

import (
	"math"

	"holdfast/model"
)

// flow is the rate equations laid out for repeated evaluation, in reversed time
// and at unit speed in the local measure: each species' change counts relative to
// its amount or, where that is larger, to a hundredth of the box.
type flow struct {
	net     *model.Network
	changes [][]change // by reaction
	floor   []float64
	x       []float64 // scratch
}

// change is what one firing per unit of time of a reaction adds to a species.
type change struct {
	species int
	amount  float64
}

// localShare is the share of the box below which amounts are measured by the box.
const localShare = 0.01

func newFlow(n *model.Network, b box) *flow {
	f := &flow{net: n, changes: make([][]change, len(n.Reactions)), x: make([]float64, len(n.Species))}
	for r := range n.Reactions {
		for i := range n.Species {
			if a := n.AmountChange(r, i); a != 0 {
				f.changes[r] = append(f.changes[r], change{i, a})
			}
		}
	}
	for i := range n.Species {
		f.floor = append(f.floor, localShare*(b.high[i]-b.low[i]))
	}
	return f
}

// drift writes dx/dt at x, amounts below 0 taken as 0.
func (f *flow) drift(x, dx []float64) {
	for i, v := range x {
		f.x[i] = max(v, 0)
	}
	clear(dx)
	for r, list := range f.changes {
		if len(list) == 0 {
			continue
		}
		v := f.net.Flux(r, f.x)
		for _, c := range list {
			dx[c.species] += c.amount * v
		}
	}
}

// unit is what species i's change is measured by at amount v.
func (f *flow) unit(i int, v float64) float64 { return max(math.Abs(v), f.floor[i]) }

// length is that of the change d at x in the local measure.
func (f *flow) length(x, d []float64) float64 {
	sum := 0.0
	for i, v := range d {
		e := v / f.unit(i, x[i])
		sum += e * e
	}
	return math.Sqrt(sum)
}

// backward writes the direction of reversed flow at x, of length 1.
func (f *flow) backward(x, dx []float64) {
	f.drift(x, dx)
	scale := -1 / f.length(x, dx)
	for i := range dx {
		dx[i] *= scale
	}
}
