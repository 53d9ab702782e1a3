package branch

import (
	"context"
	"fmt"
	"slices"

	"holdfast/deterministic"
	"holdfast/model"
)

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

// build traces the branches of all states, today's first, then those that cross them.
func (b *builder) build(samples []sample) error {
	for i, s := range samples {
		for _, st := range s.states {
			_, ok, err := b.place(st.Amounts, s.value)
			if err != nil {
				return err
			}
			if st.Kind == deterministic.Degenerate && i == 0 {
				b.say("%s", b.degenerate(append(slices.Clone(st.Amounts), s.value)))
			}
			if !ok && st.Kind != deterministic.Degenerate {
				b.say("state %s at %s = %.6g could not be followed: %s", st.Name, b.knob.Name, s.value, b.reason(st.Amounts, s.value))
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

// degenerate says what a degenerate state of today is.
func (b *builder) degenerate(u []float64) string {
	for _, k := range b.kinks {
		if b.f.along(k, u) {
			return fmt.Sprintf("today's setting lies on a kink: at %.6g %s", u[:b.f.n], b.f.text(k))
		}
	}
	return fmt.Sprintf("today's setting lies on a fold, or where branches meet, to within rounding: at %.6g", u[:b.f.n])
}

// reason says why a state cannot be followed.
func (b *builder) reason(x []float64, value float64) string {
	u := append(slices.Clone(x), value)
	if b.outside(u) {
		return "it lies outside the box"
	}
	if r := b.f.rough(u); r != "" {
		return r
	}
	return "the equations are singular there"
}

// place finds a state's place on the branches, tracing a new one if need be; ok is
// false where the state is degenerate or outside the box.
func (b *builder) place(x []float64, value float64) (a anchor, ok bool, err error) {
	u := append(slices.Clone(x), value)
	if !b.hold(u, b.ruler.weights(u), b.f.n, value) || b.outside(u) {
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
	for _, k := range b.kinks {
		if b.f.along(k, start.u) {
			b.say("a branch through %s = %.6g runs along a kink: %s", b.knob.Name, start.u[b.f.n], b.f.text(k))
		}
	}
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
		if s.mark != nil {
			b.warn(s.mark)
		}
	}
}

// warn says what a reader should know of a mark.
func (b *builder) warn(m *Mark) {
	text := ""
	switch m.Kind {
	case Lost:
		text = fmt.Sprintf("a branch could not be followed beyond %s = %.6g: %s", b.knob.Name, m.Knob, m.Text)
	case Kink:
		text = fmt.Sprintf("at %s = %.6g %s", b.knob.Name, m.Knob, m.Text)
	case BoxEdge:
		amount := m.Amounts[b.f.net.SpeciesIndex(m.Species)]
		text = fmt.Sprintf("a branch leaves the box at %s = %.6g, where %s reaches %.6g", b.knob.Name, m.Knob, m.Species, amount)
	default:
		return
	}
	b.say("%s", text)
}

// say adds a warning, once.
func (b *builder) say(format string, a ...any) {
	if text := fmt.Sprintf(format, a...); !slices.Contains(b.warnings, text) {
		b.warnings = append(b.warnings, text)
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
