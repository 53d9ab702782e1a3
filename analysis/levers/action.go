package levers

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"holdfast/analysis/action"
	"holdfast/analysis/hold"
	"holdfast/analysis/lattice"
	"holdfast/deterministic"
)

// An exponent is one hold time where copies are many: its exponent S for each unit of
// copies and the derivatives of S in the constants.
type exponent struct {
	from, to string
	s, error float64
	gradient []float64
}

// leading is the derivative of Ω S in parameter k times its size: Ω k ∂S/∂k, and Ω S for
// copies (envelope theorem).
func (x *exponent) leading(k int, copies, size float64) float64 {
	if k == len(x.gradient) {
		return copies * x.s
	}
	return copies * size * x.gradient[k]
}

// exponents gives those of every ordered pair of states that one saddle joins, and of
// leaving a state at all, which is the smallest of its pairs.
func (j *job) exponents(ctx context.Context) ([]exponent, error) {
	if len(j.paths) > 0 {
		return j.paths, nil
	}
	j.tell("paths of least action", 0)
	routes, err := action.Survey(ctx, j.survey, action.Options{})
	if err != nil {
		return nil, err
	}
	var out []exponent
	for i := range routes.Pairs {
		p := &routes.Pairs[i]
		if p.Err != nil && !p.Never {
			j.warn("by action, from %s to %s: %v", p.From, p.To, p.Err)
		}
		if len(p.Paths) == 0 {
			continue
		}
		x := exponent{p.From, p.To, p.S, p.Error, p.Paths[0].Gradient}
		out = append(out, x)
		if any := find(out, p.From, anyState); any == nil {
			x.to = anyState
			out = append(out, x)
		} else if x.s < any.s {
			x.to = anyState
			*any = x
		}
	}
	if len(out) == 0 {
		return nil, errors.New("no path of least action joins two states")
	}
	j.paths = out
	return out, nil
}

func find(list []exponent, from, to string) *exponent {
	for i := range list {
		if list[i].from == from && list[i].to == to {
			return &list[i]
		}
	}
	return nil
}

// A support is a lattice at fewer copies, from which the prefactor's part is taken.
type support struct {
	copies  float64
	answers []answer
}

// rest is what a lattice's slopes have beside the leading order; NaN where it has none.
func (s *support) rest(x *exponent, k int, size float64) float64 {
	for i := range s.answers {
		if a := &s.answers[i]; a.from == x.from && a.to == x.to {
			if k == len(x.gradient) {
				return s.copies*a.slope[k] - x.leading(k, s.copies, s.copies)
			}
			return size*a.slope[k] - x.leading(k, s.copies, size)
		}
	}
	return math.NaN()
}

const (
	// quick is the longest that a supporting lattice may take by its estimate, in seconds.
	quick = 1.5
	// mostPoints is the size of a box whose lattice is not even counted.
	mostPoints = 1e6
	// mostSupports is how many are taken: two for a line, one more to see by how much
	// the prefactor's part still changes.
	mostSupports = 3
)

// supports gives lattices at a half, a quarter and an eighth of today's copies, or, where
// the first take too long, at the largest of the further halves that do not.
func (j *job) supports(ctx context.Context) []support {
	var out []support
	for copies := j.network.Copies / 2; copies >= 1 && len(out) < mostSupports && ctx.Err() == nil; copies /= 2 {
		if j.points(copies) > mostPoints {
			continue
		}
		if s, ok := j.support(ctx, copies); ok {
			out = append(out, s)
		} else if len(out) > 0 {
			break
		}
	}
	return out
}

// points is about the number of lattice points at so many copies: the product of the
// ranges that the states span with eight standard deviations, of as many species as can
// move by themselves, the shortest ones.
func (j *job) points(copies float64) float64 {
	ratio := copies / j.network.Copies
	var spans []float64
	for i := range j.network.Species {
		low, high := math.Inf(1), 0.0
		for _, s := range j.survey.Stable() {
			reach := 8 * s.SD(i) * math.Sqrt(ratio)
			if math.IsNaN(reach) {
				reach = 0
			}
			low, high = math.Min(low, s.Molecules[i]*ratio-reach), math.Max(high, s.Molecules[i]*ratio+reach)
		}
		spans = append(spans, math.Max(high-math.Max(low, 0), 1))
	}
	slices.Sort(spans)
	out := 1.0
	for _, s := range spans[:len(spans)-len(j.survey.Totals)] {
		out *= s
	}
	return out
}

// support solves one lattice; false where it takes too long or has other states.
func (j *job) support(ctx context.Context, copies float64) (support, bool) {
	n, err := j.network.Rebind(copies, nil)
	if err != nil {
		return support{}, false
	}
	m, err := deterministic.Survey(ctx, n, deterministic.Options{})
	if err != nil || len(m.Cores) != len(j.survey.Cores) {
		return support{}, false
	}
	p := j.problem(m)
	e, err := p.Estimate(ctx)
	if err != nil || e.Seconds > quick {
		return support{}, false
	}
	s, err := lattice.Solve(ctx, p)
	if err != nil {
		return support{}, false
	}
	out := support{copies: copies}
	for a := range s.Names {
		out.answers = append(out.answers, answersOf(s, a)...)
	}
	return out, true
}

// prefactor gives the prefactor's part of a slope at so many copies: that of the largest
// supports, continued as a straight line in 1/copies, which is the order of what it still
// misses. Its error is taken to be twice what it changes by over the supports and the part
// over Ω S, the size of what an expansion in the height of the barrier leaves out; with
// one support, which may be at so few copies that the two nearly cancel, twice the largest
// of the part, the leading order there, and 1, the order of a prefactor's slopes. On the demo latch, leakless latch and pair at 15,
// 20, 26, 30, 40, 60, 80 and 120 copies the lattice's 272 slopes were all within that; within
// half of it, 256.
func prefactor(supports []support, x *exponent, k int, size, copies float64) (part, off float64) {
	if len(supports) == 0 {
		return 0, math.NaN()
	}
	var parts []float64
	for i := range supports {
		parts = append(parts, supports[i].rest(x, k, size))
	}
	if len(parts) == 1 {
		return parts[0], 2 * max(1, math.Abs(parts[0]), math.Abs(x.leading(k, supports[0].copies, size)))
	}
	one, two := supports[0].copies, supports[1].copies
	shift := (parts[0] - parts[1]) * (1/one - 1/copies) / (1/two - 1/one)
	part = parts[0] + shift
	spread := slices.Max(parts) - slices.Min(parts)
	return part, 2 * (spread + math.Abs(part)/(copies*x.s))
}

// actionSlope is one slope by action: the leading order with the prefactor's part.
func (j *job) actionSlope(x *exponent, supports []support, k int) Slope {
	size, copies := j.size(k), j.network.Copies
	lead := x.leading(k, copies, size)
	part, off := prefactor(supports, x, k, size, copies)
	s := newSlope(Action, lead+part, off+j.exponentError(x, lead))
	s.Leading = hold.Value(lead)
	return s
}

// exponentError is what the path's own error makes of a slope: its derivatives are taken
// to be as good as S is, relative to it.
func (j *job) exponentError(x *exponent, lead float64) float64 {
	return math.Abs(lead) * x.error / x.s
}

// addAction puts the slopes by action beside those that are there.
func (j *job) addAction(ctx context.Context) error {
	beside, err := j.leadingOrder(ctx)
	if ctx.Err() != nil {
		j.report.Interrupted = true
		return nil
	}
	if err != nil {
		return err
	}
	beside()
	return nil
}

// leadingOrder finds the slopes by action, and gives what puts them beside those that are
// there by then.
func (j *job) leadingOrder(ctx context.Context) (beside func(), err error) {
	xs, err := j.exponents(ctx)
	if ctx.Err() != nil {
		return nil, context.Cause(ctx)
	}
	if err != nil {
		j.report.Action = "not taken: " + err.Error()
		return func() {}, nil
	}
	supports := j.supports(ctx)
	j.report.Action = actionText(supports)
	return func() { j.putBeside(xs, supports) }, nil
}

func (j *job) putBeside(xs []exponent, supports []support) {
	for i := range j.report.Blocks {
		b := &j.report.Blocks[i]
		x := find(xs, b.From, b.To)
		if x == nil {
			continue
		}
		for k := range b.Levers {
			l := &b.Levers[k]
			if !j.read(k) {
				continue
			}
			s := j.actionSlope(x, supports, k)
			l.Agreement = agreement(l.Slope(), s)
			l.Slopes = append(l.Slopes, s)
		}
	}
}

// agreement holds two slopes against each other.
func agreement(a, b Slope) string {
	switch {
	case math.IsNaN(float64(a.Value)) || math.IsNaN(float64(b.Low)):
		return ""
	case a.Low <= b.High && b.Low <= a.High:
		return "agree"
	}
	return fmt.Sprintf("%.2g apart", math.Abs(float64(a.Value-b.Value)))
}

func actionText(supports []support) string {
	if len(supports) == 0 {
		return "≈ leading order in copies alone: what the prefactor adds, of the order of 1 and with no bound, is not in it"
	}
	var at []string
	for i := range supports {
		at = append(at, strconv.FormatFloat(supports[i].copies, 'g', 4, 64))
	}
	return "leading order in copies, and the prefactor's part from lattices at " + strings.Join(at, ", ") + " copies"
}

// errNoSupport tells that no lattice is in reach, even of far fewer copies.
var errNoSupport = errors.New("no lattice is in reach at fewer copies, from which to take the prefactor's part")

// byAction takes the slopes from paths of least action alone. Unless it was asked for,
// it gives up where the prefactor's part cannot be had.
func (j *job) byAction(ctx context.Context, asked bool) error {
	xs, err := j.exponents(ctx)
	if err != nil {
		return err
	}
	supports := j.supports(ctx)
	if ctx.Err() != nil {
		return context.Cause(ctx)
	}
	if len(supports) == 0 && !asked {
		return errNoSupport
	}
	j.report.Action = actionText(supports)
	for s, state := range j.survey.Stable() {
		if state.Absorbing {
			j.neverLeft(s)
		}
		for i := range xs {
			if x := &xs[i]; x.from == state.Name && (x.to != anyState || ways(xs, x.from) > 1) {
				j.addExponent(x, supports)
			}
		}
	}
	return nil
}

// ways counts the ends of a state's dwells.
func ways(xs []exponent, from string) int {
	count := 0
	for i := range xs {
		if xs[i].from == from && xs[i].to != anyState {
			count++
		}
	}
	return count
}

// addExponent adds the block of one hold time.
func (j *job) addExponent(x *exponent, supports []support) {
	nan := hold.Value(math.NaN())
	b := Block{From: x.from, To: x.to, Mean: nan, Low: nan, High: nan, HoldRoute: Action, Levers: []Lever{}}
	for k := range j.parameters() {
		l := j.lever(k)
		s := newSlope(Action, 0, 0)
		if j.read(k) {
			s = j.actionSlope(x, supports, k)
		}
		l.Slopes = append(l.Slopes, s)
		b.Levers = append(b.Levers, l)
	}
	j.report.Blocks = append(j.report.Blocks, b)
}
