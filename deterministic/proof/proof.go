package proof

import (
	"context"
	"errors"
	"fmt"
	"math"
	"runtime"
	"slices"

	"holdfast/deterministic/proof/interval"
	"holdfast/model"
)

// A Problem asks for all resting states of a network in a box.
type Problem struct {
	Network *model.Network
	// Low and High bound the box, in amounts, one a species, neither below 0. Nil:
	// the box that Enclose gives, so that the list is that of all states with
	// non-negative amounts; it is an error if there is none.
	Low, High []float64
	// Totals are the values of the conserved totals, in molecules, in the order of
	// Network.Conserved. Nil: those at the start.
	Totals []float64
	// MaxBoxes limits the work; the default, for 0, is 200,000 boxes.
	MaxBoxes int
	// Width is the width at which a box that can neither be excluded nor proved to
	// hold one state is given up, as a share of its amounts (of a millionth of the
	// largest, for amounts below that). The default, for 0, is 1e-8.
	Width float64
	// Threads is the number of goroutines; the default, for 0, is one a processor.
	// The result does not depend on it.
	Threads int
}

// ErrUnbounded tells that no box is known to hold all resting states, and none was
// given.
var ErrUnbounded = errors.New("no bound was found for the amounts at rest: give the box to be searched")

// ErrLarge tells that the network is beyond what a proof may take on.
var ErrLarge = errors.New("the network is too large for a proof")

// A search grows exponentially with the species that curve the rates, so that far
// fewer than these can be hoped for.
const mostSpecies, mostReactions = 32, 256

// Prove finds every resting state of the network in a box, by interval branch and
// prune, and proves that there are no others. An error means that the problem is
// not posed well; a proof that does not succeed is a Result that is not Complete.
func Prove(ctx context.Context, p Problem) (*Result, error) {
	t, err := newTask(p)
	if err != nil {
		return nil, err
	}
	low, high, all, err := p.box(t)
	if err != nil {
		return nil, err
	}
	if t.system == nil {
		return t.unposed(low, high), nil
	}
	start := make(box, len(t.system.species))
	for k, i := range t.system.species {
		start[k] = iv{Lo: low[i], Hi: high[i]}
	}
	t.bounds, t.reach = start, reach(start)
	out := t.search(ctx, slices.Clone(start), p.limit(), p.threads())
	return out.result(low, high, all), nil
}

func (p *Problem) limit() int {
	if p.MaxBoxes <= 0 {
		return 200_000
	}
	return p.MaxBoxes
}

func (p *Problem) threads() int {
	if p.Threads <= 0 {
		return runtime.GOMAXPROCS(0)
	}
	return p.Threads
}

// reach is the box widened by a hundredth, not below 0.
func reach(b box) box {
	out := make(box, len(b))
	for i, a := range b {
		r := a.Width()/100 + a.Mag()/1000
		out[i] = a.Add(iv{Lo: -r, Hi: r})
		out[i].Lo = max(out[i].Lo, 0)
	}
	return out
}

func newTask(p Problem) (*task, error) {
	if p.Network == nil {
		return nil, errors.New("no network")
	}
	if n := len(p.Network.Species); n > mostSpecies || len(p.Network.Reactions) > mostReactions {
		return nil, fmt.Errorf("%w: %d species and %d reactions; a proof takes at most %d and %d", ErrLarge, n, len(p.Network.Reactions), mostSpecies, mostReactions)
	}
	t := &task{network: p.Network, totals: p.Network.Conserved(), width: p.Width, faces: map[string]*system{}}
	if t.width == 0 {
		t.width = 1e-8
	}
	if !(t.width > 0 && t.width < 1) {
		return nil, fmt.Errorf("width %v: must be between 0 and 1", p.Width)
	}
	t.values = p.Totals
	if t.values == nil {
		for _, c := range t.totals {
			t.values = append(t.values, float64(c.Value))
		}
	}
	if len(t.values) != len(t.totals) {
		return nil, fmt.Errorf("%d totals for a network that conserves %d", len(t.values), len(t.totals))
	}
	for _, v := range t.values {
		if math.IsNaN(v) || math.IsInf(v, 0) {
			return nil, fmt.Errorf("a total is %v; it must be a finite number", v)
		}
	}
	s, ok, err := newSystem(p.Network, t.totals, t.values, nil, none)
	if ok {
		t.system = s
	}
	return t, err
}

// box gives the box to be searched; all tells that no state lies outside.
func (p *Problem) box(t *task) (low, high []float64, all bool, err error) {
	most, bounded := t.enclosure()
	if p.Low == nil && p.High == nil {
		if !bounded {
			return nil, nil, false, ErrUnbounded
		}
		for _, a := range most {
			low, high = append(low, a.Lo), append(high, a.Hi)
		}
		return low, high, true, nil
	}
	if err := p.check(); err != nil {
		return nil, nil, false, err
	}
	all = bounded
	for i, a := range most {
		all = all && a.In(interval.Interval{Lo: p.Low[i], Hi: p.High[i]})
	}
	return p.Low, p.High, all, nil
}

func (p *Problem) check() error {
	names := p.Network.Species
	if len(p.Low) != len(names) || len(p.High) != len(names) {
		return fmt.Errorf("the box has %d lower and %d upper bounds for %d species", len(p.Low), len(p.High), len(names))
	}
	for i, s := range names {
		if !(p.Low[i] >= 0 && p.Low[i] <= p.High[i]) || math.IsInf(p.High[i], 0) {
			return fmt.Errorf("%s from %v to %v: bounds must be finite, not below 0, and in order", s.Name, p.Low[i], p.High[i])
		}
	}
	return nil
}
