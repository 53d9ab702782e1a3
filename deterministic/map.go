package deterministic

import (
	"context"
	"fmt"
	"sync"

	"holdfast/model"
)

// Options steers a Survey. The zero value is right for nearly all designs.
type Options struct {
	// Starts is the most Newton starts on the inside of the amounts and on each of
	// its faces; 0: as many as needed, up to 4096.
	Starts int
	// CoreShare is the share of a state's linear-noise law that its core holds
	// before it is shrunk, between 0 and 1; 0: 0.6827, one standard deviation's share.
	CoreShare float64
	// Seeds are further Newton starts, amounts by species, each near a state that is
	// known to exist. An amount of exactly 0 stays 0.
	Seeds [][]float64
}

// check refuses settings that make no sense.
func (o *Options) check() error {
	if o.Starts < 0 {
		return fmt.Errorf("starts = %d: must not be below 0", o.Starts)
	}
	if !(o.CoreShare >= 0 && o.CoreShare < 1) {
		return fmt.Errorf("core share = %v: must be a part of 1, not below 0", o.CoreShare)
	}
	return nil
}

// A Search says how the list of states was found: how far it can be trusted.
type Search struct {
	// Starts counts Newton starts and points of scans, Flows the flows followed.
	Starts, Flows int
	// Balanced tells that the states' indices add up to 1, as they must when all
	// are found and none is degenerate. Checked is false where that does not apply.
	Balanced, Checked bool
	// Scanned tells that the class has one dimension and was scanned along it.
	Scanned bool
}

// A Map is the result of a Survey. It is immutable and safe for concurrent use.
type Map struct {
	Network *model.Network
	// Low and High bound the amounts of every resting state on the class, one value
	// a species; Basis says why High holds.
	Low, High []float64
	Basis     []Basis
	// States lists the states that have a core first: the stable resting states by
	// the readout ascending, then the declared ones that are no resting state. Then
	// come stable resting states that declared cores have displaced, saddles,
	// unstable and degenerate ones.
	States []State
	// Cores has one core for each of Stable(), in the same order.
	Cores []model.Core
	// Totals are the conserved totals that the states share with the start.
	Totals []model.Total
	// Search says how the states were found.
	Search Search
	// Warnings are for the reader, one sentence each.
	Warnings []string

	sys   *system
	class *class
	roots []*candidate // the resting states, in the order in which they were named
	names []string     // their names

	sinksOnce sync.Once
	sinks     []sink

	limit, resolution []float64
}

// Stable lists the states that have a core: the stable resting states and the
// declared ones, in the order of Cores.
func (m *Map) Stable() []State { return m.States[:len(m.Cores)] }

// Survey finds the resting states of the network on the compatibility class of
// its start (StartCounts), their types, linear noise and cores.
//
// With one stable state only it gives the Map together with a *OneStateError,
// with states whose cores fall on one lattice point together with an
// *IndistinctError. Other errors are ErrNoRestingState, *RunawayError,
// *ContinuumError, *CoreError, *RateError, and ctx's.
func Survey(ctx context.Context, net *model.Network, o Options) (*Map, error) {
	if err := o.check(); err != nil {
		return nil, err
	}
	s := newSystem(net)
	totals := net.Conserved()
	whole, ok := newClass(s, totals, make([]bool, s.n))
	if !ok {
		return nil, ErrNoRestingState // cannot be: the start is on its own class
	}
	m := &Map{Network: net, Totals: totals, sys: s, class: whole}
	f, err := m.search(ctx, o)
	if err != nil {
		return nil, err
	}
	m.states(f)
	if err := m.checkRates(); err != nil {
		return nil, err
	}
	if err := m.noStates(f); err != nil {
		return nil, err
	}
	return m, m.finish(o)
}
