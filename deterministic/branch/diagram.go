package branch

import (
	"context"
	"fmt"
	"math"
	"slices"

	"holdfast/deterministic"
	"holdfast/model"
)

// Options steers Follow and FoldCurves. The zero value is right for nearly all
// designs.
type Options struct {
	// Samples is the number of settings over the knob's range, ends included, at
	// which states are looked for besides today's; 0: 5.
	Samples int
	// High is the upper edge of the box of amounts, one value a species; nil: ten
	// times the boxes that hold all states at the samples.
	High []float64
	// Steps is the most steps along one branch in one direction; 0: 4000.
	Steps int
}

func (o Options) withDefaults() Options {
	if o.Samples == 0 {
		o.Samples = 5
	}
	o.Samples = max(o.Samples, 2)
	if o.Steps == 0 {
		o.Steps = 4000
	}
	return o
}

// Follow gives all branches of resting states of the network over the knob's range
// that have a state at one of the samples or cross such a branch, with their
// special points, and the window of each stable state of today.
//
// Errors are *OutsideError where today's setting is not in the range,
// *NoStateError, and ctx's.
func Follow(ctx context.Context, n *model.Network, k Knob, o Options) (*Diagram, error) {
	o = o.withDefaults()
	today := k.Today(n)
	if today < k.Low || today > k.High {
		return nil, &OutsideError{k.Name, today, k.Low, k.High}
	}
	samples, err := surveyAll(ctx, n, k, settings(k, today, o.Samples))
	if err != nil {
		return nil, err
	}
	b := newBuilder(ctx, n, k, samples, o)
	if err := b.build(samples); err != nil {
		return nil, err
	}
	return b.diagram(today, samples[0]), nil
}

// traced is a branch as traced.
type traced struct {
	spots  []spot
	closed bool
}

// anchor is a state's place on a branch: between spots at and at+1.
type anchor struct{ branch, at int }

// builder gathers branches.
type builder struct {
	*tracer
	branches []traced
	meetings []*crossing
	warnings []string
}

func newBuilder(ctx context.Context, n *model.Network, k Knob, samples []sample, o Options) *builder {
	f := newField(n, k)
	high, floor := boxOf(samples, f.n)
	if o.High != nil {
		high = o.High
	}
	line := follower{corrector: newCorrector(f), ruler: newRuler(floor, []Knob{k}), turns: []int{f.n}, most: o.Steps}
	return &builder{tracer: &tracer{frame: frame{line, f, []Knob{k}, high}, ctx: ctx, knob: k, kinks: f.kinks()}}
}

// build traces the branches of all states, then those that cross them.
func (b *builder) build(samples []sample) error {
	for _, s := range samples {
		for _, st := range s.states {
			if _, _, err := b.place(st.Amounts, s.value); err != nil {
				return err
			}
		}
	}
	for i := 0; i < len(b.meetings); i++ {
		if err := b.branchOff(b.meetings[i]); err != nil {
			return err
		}
	}
	return nil
}

// place finds a state's place on the branches, tracing a new one if need be; ok is
// false where the state is degenerate.
func (b *builder) place(x []float64, value float64) (a anchor, ok bool, err error) {
	u := append(slices.Clone(x), value)
	if !b.hold(u, b.ruler.weights(u), b.f.n, value) {
		return a, false, nil
	}
	if a, ok := b.covered(u); ok {
		return a, true, nil
	}
	direction := make([]float64, len(u))
	direction[b.f.n] = 1
	start, ok := b.at(u, b.ruler.weights(u), direction)
	if !ok {
		return a, false, nil
	}
	index, err := b.both(start)
	return anchor{len(b.branches) - 1, index}, true, err
}

// both traces a branch to both sides of its start and gives the index before which,
// or at which, the start stands.
func (b *builder) both(start *place) (int, error) {
	forth, err := b.trace(start)
	if err != nil {
		return 0, err
	}
	middle := b.spotAt(start.u, start.weight)
	if forth.closed {
		middle.mark = b.endMark(start.u, Closed, "")
		b.keep(traced{append(append([]spot{middle}, forth.spots...), middle), true})
		return 0, nil
	}
	back, err := b.trace(start.reversed())
	if err != nil {
		return 0, err
	}
	b.keep(traced{spots: join(back, middle, forth)})
	return max(min(len(back.spots), len(back.spots)+len(forth.spots)-1), 0), nil
}

// join puts two paths from one start together; where a path could not leave the
// start, its end mark is the start's.
func join(back *path, middle spot, forth *path) []spot {
	spots := slices.Clone(back.spots)
	slices.Reverse(spots)
	if len(back.spots) == 0 && middle.mark == nil {
		middle.mark = back.last.mark
	}
	if len(forth.spots) == 0 && middle.mark == nil {
		middle.mark = forth.last.mark
	}
	return append(append(spots, middle), forth.spots...)
}

// reversed is the place with its tangent the other way.
func (p *place) reversed() *place {
	q := *p
	q.tangent = make([]float64, len(p.tangent))
	for j, v := range p.tangent {
		q.tangent[j] = -v
	}
	q.sign = -p.sign
	return &q
}

// keep takes in a branch and notes where others cross it.
func (b *builder) keep(t traced) {
	b.branches = append(b.branches, t)
	for _, s := range t.spots {
		if s.meeting != nil {
			b.meet(s.meeting)
		}
		if s.mark != nil && s.mark.Kind == Lost {
			b.warnings = append(b.warnings, fmt.Sprintf("a branch could not be followed beyond %s = %g: %s", b.knob.Name, s.mark.Knob, s.mark.Text))
		}
		if s.mark != nil && s.mark.Kind == Kink {
			b.warnings = append(b.warnings, fmt.Sprintf("at %s = %g %s", b.knob.Name, s.mark.Knob, s.mark.Text))
		}
		if s.mark != nil && s.mark.Kind == BoxEdge {
			b.warnings = append(b.warnings, fmt.Sprintf("a branch leaves the box at %s = %g, where %s reaches %g", b.knob.Name, s.mark.Knob, s.mark.Species, s.mark.Amounts[b.f.net.SpeciesIndex(s.mark.Species)]))
		}
	}
}

func (b *builder) meet(c *crossing) {
	for _, o := range b.meetings {
		if distance(o.u, c.u, c.weight) < closeBy {
			return
		}
	}
	b.meetings = append(b.meetings, c)
}

// covered tells whether u is on a branch already, and where.
func (b *builder) covered(u []float64) (anchor, bool) {
	for k, t := range b.branches {
		for i := range len(t.spots) - 1 {
			if b.passes(t.spots[i].u, t.spots[i+1].u, u) {
				return anchor{k, i}, true
			}
		}
	}
	return anchor{}, false
}

// branchOff traces the branches through a crossing that are not known yet.
func (b *builder) branchOff(c *crossing) error {
	for _, d := range c.directions {
		forth, err := b.leave(c, d, 1)
		if err != nil {
			return err
		}
		back, err := b.leave(c, d, -1)
		if err != nil {
			return err
		}
		if len(forth.spots)+len(back.spots) == 0 {
			continue
		}
		m := c.mark(b.f)
		m.Turns = c.kind == Pitchfork && abs(d[b.f.n]) < flatKnob
		middle := spot{u: c.u, weight: c.weight, values: b.f.eigenvalues(c.u, c.weight), mark: &m, meeting: c}
		b.keep(traced{spots: join(back, middle, forth)})
	}
	return nil
}

// leaveStep is how far from a crossing a new branch is entered.
const leaveStep = 0.01

// leave traces the half of a branch that leaves the crossing in direction d or, for
// sign −1, the other way. It gives no spots where that is outside, or known.
func (b *builder) leave(c *crossing, d []float64, sign float64) (*path, error) {
	none := &path{}
	p := &place{u: c.u, weight: c.weight, tangent: make([]float64, len(d))}
	for j, v := range d {
		p.tangent[j] = sign * v
	}
	u := p.step(leaveStep)
	guess := slices.Clone(u)
	if _, ok := b.correct(u, c.weight, d); !ok || distance(u, guess, c.weight) > driftShare*leaveStep || b.outside(u) {
		return none, nil
	}
	if _, known := b.covered(u); known {
		return none, nil
	}
	start, ok := b.at(u, b.ruler.weights(u), p.tangentIn(b.ruler.weights(u)))
	if !ok {
		return none, nil
	}
	out, err := b.trace(start)
	if err != nil {
		return none, err
	}
	out.spots = append([]spot{b.spotAt(u, start.weight)}, out.spots...)
	if len(out.spots) == 1 {
		out.spots[0].mark = out.last.mark
	}
	return out, nil
}

func (b *builder) outside(u []float64) bool {
	for i := range b.f.n {
		if u[i] < -1e-9*b.ruler.floor[i] || u[i] > b.high[i] {
			return true
		}
	}
	return u[b.f.n] < b.knob.Low || u[b.f.n] > b.knob.High
}

func abs(x float64) float64 { return max(x, -x) }

// diagram turns what was traced into the result.
func (b *builder) diagram(today float64, now sample) *Diagram {
	d := &Diagram{Knob: b.knob, Today: today, High: b.high, Warnings: b.warnings}
	for _, t := range b.branches {
		d.Branches = append(d.Branches, b.branch(t))
	}
	for _, s := range now.states {
		if s.Kind.Stable() {
			d.Windows = append(d.Windows, b.window(s, today))
		}
	}
	return d
}

func (b *builder) branch(t traced) Branch {
	var out Branch
	for i, s := range t.spots {
		out.Points = append(out.Points, b.point(s))
		if s.mark != nil {
			m := *s.mark
			m.Index = i
			out.Marks = append(out.Marks, m)
		}
	}
	return out
}

// point gives the public form of a spot.
func (b *builder) point(s spot) Point {
	p := Point{Knob: s.u[b.f.n], Amounts: slices.Clone(s.u[:b.f.n]), Eigenvalues: s.values, SlowRate: slowRate(s.values), Unstable: unstable(s.values)}
	if s.singular() {
		p.SlowRate = 0
		return p
	}
	p.Stable = p.Unstable == 0 && (s.values != nil || len(b.f.independent) == 0)
	if p.Stable {
		p.Covariance = b.f.covariance(s.u, s.weight)
	}
	return p
}

// singular tells whether an eigenvalue of the spot is 0, or a pair imaginary.
func (s *spot) singular() bool {
	if s.mark != nil && s.mark.Kind <= Crossing {
		return true
	}
	size := 0.0
	for _, v := range s.values {
		size = max(size, abs(real(v)))
	}
	return len(s.values) > 0 && slowRate(s.values) <= 1e-9*size
}

// window walks from a state of today to both sides.
func (b *builder) window(s deterministic.State, today float64) Window {
	w := Window{State: s.Name, Amounts: slices.Clone(s.Amounts), Branch: -1}
	a, ok, _ := b.place(s.Amounts, today)
	if !ok {
		b.warnings = append(b.warnings, fmt.Sprintf("state %s could not be placed on a branch", s.Name))
		return w
	}
	w.Branch = a.branch
	spots := b.branches[a.branch].spots
	up := b.endOf(spots, a.at, 1, today)
	down := b.endOf(spots, a.at+1, -1, today)
	w.Low, w.High = down, up
	if spots[a.at].u[b.f.n] > spots[min(a.at+1, len(spots)-1)].u[b.f.n] {
		w.Low, w.High = up, down
	}
	return w
}

// endOf walks from spot i, itself left out, to where the stable state ends.
func (b *builder) endOf(spots []spot, i, step int, today float64) End {
	last := i
	for j := i + step; j >= 0 && j < len(spots); j += step {
		last = j
		s := &spots[j]
		if s.mark == nil && unstable(s.values) > 0 || s.mark != nil && b.stops(spots, j, step) {
			break
		}
	}
	m := spots[last].mark
	if m == nil {
		m = b.endMark(spots[last].u, Lost, "")
	}
	e := End{Mark: *m, Knob: m.Knob, Distance: math.NaN()}
	if today != 0 {
		e.Distance = 100 * abs(m.Knob-today) / today
	}
	e.Mark.Index = last
	return e
}

// stops tells whether a stable state ends at the mark of spot j.
func (b *builder) stops(spots []spot, j, step int) bool {
	m := spots[j].mark
	if m.Kind.Ends() || m.Turns {
		return true
	}
	for k := j + step; k >= 0 && k < len(spots); k += step {
		if spots[k].mark == nil {
			return unstable(spots[k].values) > 0
		}
	}
	return true
}
