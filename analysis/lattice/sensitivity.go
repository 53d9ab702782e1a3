package lattice

import (
	"math"
	"slices"

	"holdfast/model"
)

// A Sensitivity tells how one state's dwell answers to the constants: derivatives of
// logarithms, ∂ ln X/∂k, one a constant in the network's order and one for copies
// last, all counts held: the cores, the start and the box.
//
// NaN stands where a law has no derivative, where the constant would open a way that
// is closed today to counts never reached today, and, for copies, where they change a
// conserved total.
type Sensitivity struct {
	// Mean is that of Solution.Mean, MeanError its error: rounding, and the bound on
	// the truncation error times how fast leaving the box answers.
	Mean, MeanError []float64
	// End[b] and EndError[b] are the same for Solution.End; nil where a dwell never
	// ends there. Lost and LostError are those of Solution.Lost.
	End, EndError   [][]float64
	Lost, LostError []float64
}

// A lever sums up the derivatives of one origin's dwell.
//
// With q the generator among the nodes from which a dwell goes on, y the expected times
// in them from the start s and τ the mean time left, dτ(s) = Σᵢ yᵢ Σⱼ dqᵢⱼ (τⱼ − τᵢ):
// the adjoint, exact for every constant at the price of one elimination. For a rare
// flip τ is nearly the same all over the state and its differences have no digits left.
// So paths are cut where they come back to the start: with t the mean time to the start
// or an end and p that of an end coming first, both sums of positive numbers,
// τ = t + (1−p) τ(s), and
//
//	d ln τ(s) = Σᵢ yᵢ Σⱼ dqᵢⱼ ((tⱼ − tᵢ)/τ(s) − (pⱼ − pᵢ)),
//
// in which p is as small as flips are rare and keeps its digits. The chance P of one of
// the ends is p' + (1−p) P(s) with p' the part of p that ends there:
// d ln P(s) = Σᵢ yᵢ Σⱼ dqᵢⱼ ((p'ⱼ − p'ᵢ)/P(s) − (pⱼ − pᵢ)).
//
// (The adjoint of a linear system is common practice; the cut at the start is the
// renewal argument behind, for one, Hill's diagram of reactive flux.)
type lever struct {
	*solver
	origin *origin
	fields columns // t, then p by region, then p of leaving the box; by position
	own    []float64
	sums   [][]float64 // one row a field, one column a constant
	sizes  [][]float64 // the same with sizes summed up
	step   []float64   // of the fields, over one transition
	reach  []float64   // sizes of the fields at its two ends
}

// sensitivities fills in Solution.Sensitivity.
func (s *solver) sensitivities(out *Solution) error {
	s.problem.report("sensitivities", 0)
	out.Sensitivity = make([]*Sensitivity, len(s.origin))
	find := &edgeFinder{solver: s}
	for a, o := range s.origin {
		if o.time == nil || o.trap || out.Never[a] {
			continue
		}
		l := s.newLever(o)
		if err := l.gather(find); err != nil {
			return err
		}
		out.Sensitivity[a] = l.result(out, a)
		s.problem.report("sensitivities", float64(a+1)/float64(len(s.origin)))
	}
	return s.ctx.Err()
}

// newLever solves for the fields.
func (s *solver) newLever(o *origin) *lever {
	k, last := s.kept, s.ordering.kept
	inside := func(i int) bool { return (k.region[i] == int32(o.state) || k.region[i] < 0) && i != k.start[o.state] }
	cut := k.restrict(s.team, true, inside)
	l := &lever{solver: s, origin: o, fields: s.newColumns(s.regions.count + 2)}
	values := make([]float64, len(k.exit))
	set := func(field int, x []float64, region int32) {
		cut.right(x)
		cut.spread(values, x, 0)
		for i, r := range k.region {
			if r == region && region != int32(o.state) {
				values[i] = 1
			}
		}
		copy(l.fields[field][last:], values)
	}
	const none = -2 // no node is in this region
	set(0, cut.gather(s.reward[last:]), none)
	copy(l.fields[0], s.reward[:last])
	for b := range s.regions.count {
		if b != o.state {
			set(b+1, cut.into(func(i int) bool { return k.region[i] == int32(b) }), int32(b))
		}
	}
	box := len(l.fields) - 1
	set(box, cut.gather(s.leaving()[last:]), none)
	copy(l.fields[box], s.leaving()[:last])
	s.backward(l.fields)
	l.own, l.step, l.reach = make([]float64, len(l.fields)), make([]float64, len(l.fields)), make([]float64, len(l.fields))
	for range l.fields {
		l.sums = append(l.sums, make([]float64, s.parameters()))
		l.sizes = append(l.sizes, make([]float64, s.parameters()))
	}
	return l
}

// parameters counts the constants, and copies.
func (s *solver) parameters() int { return len(s.problem.Network.Constants) + 1 }

// gather sums over all transitions of all nodes in which a dwell spends time.
func (l *lever) gather(find *edgeFinder) error {
	y := l.origin.stay[0]
	for i := range l.nodes() {
		if i%4096 == 0 && l.ctx.Err() != nil {
			return l.ctx.Err()
		}
		at := l.position[i]
		if r := l.of[i]; y[at] == 0 || r >= 0 && r != int32(l.origin.state) {
			continue
		}
		for f := range l.own {
			l.own[f] = l.fields[f][at]
		}
		find.each(i, func(to int32, slope []float64) { l.add(y[at], to, slope) })
	}
	return nil
}

// add takes in one transition: y its node's time, slope the derivatives of its rate.
func (l *lever) add(y float64, to int32, slope []float64) {
	for f := range l.fields {
		there := l.at(f, to)
		l.step[f], l.reach[f] = y*(there-l.own[f]), y*(there+l.own[f])
	}
	for k, d := range slope {
		if d == 0 {
			continue
		}
		for f := range l.fields {
			l.sums[f][k] += d * l.step[f]
			l.sizes[f][k] += math.Abs(d) * l.reach[f]
		}
	}
}

// at gives a field at the far end of a transition.
func (l *lever) at(field int, to int32) float64 {
	switch {
	case to == outside:
		return float64(b2i(field == len(l.fields)-1))
	case to == unknown:
		return math.NaN()
	}
	if r := l.of[to]; r >= 0 && r != int32(l.origin.state) {
		return float64(b2i(field == int(r)+1))
	}
	return l.fields[field][l.position[to]]
}

func b2i(b bool) int {
	if b {
		return 1
	}
	return 0
}

// digits bounds the relative rounding error of the fields and times, sums of products
// of positive numbers: a thousandth of what package hold grants them, as tests hold.
const digits = 1e-12

// result forms the derivatives from the sums.
func (l *lever) result(out *Solution, a int) *Sensitivity {
	n, count := l.parameters(), len(l.fields)
	ended, size := make([]float64, n), make([]float64, n)
	for f := 1; f < count; f++ {
		for k := range n {
			ended[k] += l.sums[f][k]
			size[k] += l.sizes[f][k]
		}
	}
	form := func(part, parts []float64, whole, bound float64) (value, off []float64) {
		for k := range n {
			v := part[k]/whole - ended[k]
			leave := 0.0
			if l.origin.leave > 0 {
				leave = l.sums[count-1][k]/l.origin.leave - ended[k]
			}
			value = append(value, v)
			off = append(off, digits*(parts[k]/whole+size[k])+bound*(math.Abs(leave)+math.Abs(v)))
		}
		return value, off
	}
	s := &Sensitivity{}
	s.Mean, s.MeanError = form(l.sums[0], l.sizes[0], out.Mean[a], out.Bound[a])
	cores := len(out.Mean)
	lost, losts := make([]float64, n), make([]float64, n)
	for b := range l.regions.count {
		var v, e []float64
		if out.Mean[a] > 0 && l.origin.ends[b] > 0 {
			v, e = form(l.sums[b+1], l.sizes[b+1], l.origin.ends[b], l.origin.leave/l.origin.ends[b])
		}
		if b < cores {
			s.End, s.EndError = append(s.End, v), append(s.EndError, e)
			continue
		}
		for k := range n {
			lost[k] += l.sums[b+1][k]
			losts[k] += l.sizes[b+1][k]
		}
	}
	if out.Lost[a] > 0 {
		s.Lost, s.LostError = form(lost, losts, out.Lost[a], l.origin.leave/out.Lost[a])
	}
	return s.withoutCopies(l.problem.Network)
}

// withoutCopies takes back the derivatives in copies where they change a total.
func (s *Sensitivity) withoutCopies(n *model.Network) *Sensitivity {
	if !n.TotalsScale() {
		return s
	}
	all := slices.Concat([][]float64{s.Mean, s.MeanError, s.Lost, s.LostError}, s.End, s.EndError)
	for _, v := range all {
		if len(v) > 0 {
			v[len(v)-1] = math.NaN()
		}
	}
	return s
}
