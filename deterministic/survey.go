package deterministic

import (
	"cmp"
	"context"
	"fmt"
	"math"
	"slices"
)

// search finds the box and the resting states in it.
func (m *Map) search(ctx context.Context, o Options) (*finder, error) {
	s := m.sys
	f := &finder{ctx: ctx, w: newWorkspace(s), options: o, whole: m.class, scanned: true}
	b := findBox(s, m.class)
	f.setBox(b)
	if err := f.openEnds(b); err != nil {
		return nil, err
	}
	m.Low, m.High, m.Basis = b.low, b.high, b.basis
	list, complete := s.faces(m.Totals, f.high)
	if !complete {
		m.warn("faces where species are absent: only the first %d were searched", maxFaces)
	}
	for _, face := range slices.Backward(list) { // the inside last: its search counts the rest
		f.searchFace(face.class)
		f.loosen(face)
	}
	f.plant(list)
	f.farFlows()
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	m.limit, m.resolution = f.limit, f.resolution
	return f, nil
}

// setBox derives the scales of the search from the box.
func (f *finder) setBox(b *box) {
	n := f.whole.n
	f.low, f.high = b.low, b.high
	f.floor, f.resolution, f.limit = make([]float64, n), make([]float64, n), make([]float64, n)
	for i, high := range b.high {
		unit := f.w.sys.unit[i]
		start := f.w.sys.net.Species[i].Start
		if math.IsInf(high, 1) {
			high = max(1, start) // until openEnds has found better
		}
		f.floor[i] = 1e-14 * high
		f.resolution[i] = 1e-3 * min(1/unit, high)
		f.limit[i] = 1e6 * max(high, start, 1/unit)
	}
}

func (m *Map) warn(format string, a ...any) {
	m.Warnings = append(m.Warnings, fmt.Sprintf(format, a...))
}

// states turns the found candidates into the Map's States, sorted and named.
func (m *Map) states(f *finder) {
	sorted := slices.Clone(f.found)
	slices.SortFunc(sorted, m.order)
	m.roots = sorted
	for _, c := range sorted {
		m.States = append(m.States, m.state(f.w, c))
	}
	m.nameStates()
	for i := range m.States {
		m.names = append(m.names, m.States[i].Name)
	}
	sum, ok := f.indexSum(m.class)
	m.Search = Search{
		Starts: f.starts, Flows: f.flows, Checked: ok, Balanced: ok && sum == 1, Scanned: m.class.dim() == 1 && f.scanned,
	}
}

// order sorts states: stable, saddles, unstable, degenerate; each by the readout,
// then by the other species in turn.
func (m *Map) order(a, b *candidate) int {
	rank := func(k Kind) int {
		if k == StableFocus {
			return int(StableNode)
		}
		return int(k)
	}
	r := m.Network.Readout
	return cmp.Or(cmp.Compare(rank(a.kind), rank(b.kind)), cmp.Compare(a.x[r], b.x[r]), slices.Compare(a.x, b.x))
}

func (m *Map) state(w *workspace, c *candidate) State {
	s := State{
		Kind: c.kind, Amounts: slices.Clone(c.x), Molecules: make([]float64, len(c.x)),
		Eigenvalues: c.values, UnstableDirections: c.unstable, SlowRate: slowRate(c.values), Quality: c.quality,
	}
	for i, x := range c.x {
		s.Molecules[i] = x * m.sys.unit[i]
	}
	if c.kind == Degenerate {
		s.SlowRate = 0
	}
	if c.kind.Stable() {
		_, s.Covariance, _ = w.covariance(m.class, c.x)
	}
	return s
}

// noStates explains a search that found no stable state, and warns of what it met
// besides stable states.
func (m *Map) noStates(f *finder) error {
	if countKind(m.States, Kind.Stable) > 0 {
		m.warnBeyond(f)
		return nil
	}
	degenerate := countKind(m.States, func(k Kind) bool { return k == Degenerate })
	switch {
	case f.drifting != nil:
		return f.drifting
	case len(f.ranAway) > 0:
		i := f.ranAway[0]
		return &RunawayError{m.Network.Species[i].Name, f.limit[i]}
	case degenerate > 0:
		at := m.States[len(m.States)-1].Amounts
		if kink := m.kinkAt(at); kink != "" {
			return fmt.Errorf("%w whose stability is known: at %v, %s; move a constant a little", ErrNoRestingState, at, kink)
		}
		return fmt.Errorf("%w: the design sits on a fold or branch point, at %v; move a constant a little", ErrNoRestingState, at)
	case f.unsettled > 0:
		return fmt.Errorf("%w: amounts keep moving, as in an oscillator", ErrNoRestingState)
	}
	return fmt.Errorf("%w on the conserved totals of the start; check the laws", ErrNoRestingState)
}

// warnBeyond warns of flows that ran away or kept moving, and of continua.
func (m *Map) warnBeyond(f *finder) {
	if len(f.ranAway) > 0 {
		m.warn("from large amounts %s grows without bound: a run that gets there will not come back", m.Network.Species[f.ranAway[0]].Name)
	}
	if f.unsettled > 0 {
		m.warn("some flows keep moving, as in an oscillator: dwell times from such a motion are not covered by the resting states")
	}
	if f.drifting != nil {
		m.warn("%v", f.drifting)
	}
}
