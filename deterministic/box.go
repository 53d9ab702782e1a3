package deterministic

import (
	"fmt"
	"math"
	"slices"
)

// Basis says why no resting state has more of a species than the box's upper end.
type Basis uint8

// The reasons, from strict to heuristic.
const (
	// ByTotals: the conserved totals of the start allow no more.
	ByTotals Basis = iota
	// ByBalance: the reactions cannot balance with more, by bounds on every rate
	// over the box and the steady-state balance of all species.
	ByBalance
	// ByFlow: no such bound was found; flows from ever larger amounts led back to
	// states inside. Not proved.
	ByFlow
)

// String names the reason in words.
func (b Basis) String() string {
	switch b {
	case ByTotals:
		return "conserved totals"
	case ByBalance:
		return "balance of the reactions"
	case ByFlow:
		return "followed flows"
	}
	return fmt.Sprintf("Basis(%d)", uint8(b))
}

// box is bounds on the amounts of every resting state of the class.
type box struct {
	low, high []float64
	basis     []Basis
	encloser  *encloser
	balance   []balance // by species
}

// margin widens bounds from the linear programs beyond their rounding.
const margin = 1e-9

// boxRounds is the most rounds of tightening; later ones gain little.
const boxRounds = 6

// findBox bounds every resting state on the class: amounts by the conserved
// totals (a linear program), then in rounds each reaction's rate over the box by
// interval arithmetic, each rate again by the balance N v = 0 of all rates at rest
// (a linear program), and each amount by the rates: it is not where a law goes
// beyond its reaction's bound. Ends that stay unbounded are +Inf.
func findBox(s *system, c *class) *box {
	b := &box{low: make([]float64, s.n), high: make([]float64, s.n), basis: make([]Basis, s.n)}
	b.encloser, b.balance = newEncloser(), balances(s)
	b.byTotals(c)
	for range boxRounds {
		if !b.tighten(s, c) {
			break
		}
	}
	return b
}

func (b *box) byTotals(c *class) {
	p, ok := newProgram(c.rows, c.total)
	for i := range b.high {
		b.high[i] = math.Inf(1)
		b.basis[i] = ByFlow
		if !ok || len(c.rows) == 0 {
			continue
		}
		goal := make([]float64, len(b.high))
		goal[i] = 1
		if most := p.maximise(goal); !math.IsInf(most, 1) {
			b.high[i], b.basis[i] = max(most, 0)*(1+margin), ByTotals
		}
	}
}

// tighten does one round; false where it gained little.
func (b *box) tighten(s *system, c *class) bool {
	rates := b.rates(s)
	balanceRates(s, c, rates)
	gained := false
	for i := range s.n {
		gained = b.lowerByBalance(s, i) || gained
		for r := range s.changes {
			if reads(s.reads[r], i) {
				gained = b.lower(s, r, i, rates[r].Hi) || gained
				gained = b.raise(s, r, i, rates[r].Lo) || gained
			}
		}
	}
	return gained
}

func reads(list []int, i int) bool {
	return slices.Contains(list, i)
}

func (b *box) intervals() []span {
	out := make([]span, len(b.high))
	for i := range out {
		out[i] = span{Lo: b.low[i], Hi: b.high[i]}
	}
	return out
}

// rates encloses every reaction's rate over the box; rates are not negative.
func (b *box) rates(s *system) []span {
	over := b.intervals()
	out := make([]span, len(s.changes))
	for r := range out {
		v := b.encloser.enclose(s.net.Reactions[r].Law, over)
		out[r] = span{Lo: max(v.Lo, 0), Hi: max(v.Hi, 0)}
	}
	return out
}

// lower moves the upper end of species i down to where reaction r's law first
// exceeds most whatever the other species do; true where that gained a tenth.
func (b *box) lower(s *system, r, i int, most float64) bool {
	if math.IsInf(most, 1) {
		return false
	}
	return b.lowerWhere(s, i, func(over []span) bool {
		return b.encloser.enclose(s.net.Reactions[r].Law, over).Lo > most
	})
}

// lowerByBalance moves the upper end of species i down to where some of it is taken
// away, and less is made, whatever the other species do.
func (b *box) lowerByBalance(s *system, i int) bool {
	q := b.balance[i]
	return q.ratio != nil && b.lowerWhere(s, i, func(over []span) bool {
		return b.encloser.enclose(q.lost, over).Lo > 0 && q.ratio.enclose(b.encloser, over).Hi < 1
	})
}

// lowerWhere moves the upper end of species i down to the least amount from which
// on out holds: that no resting state is there. out must hold for any part of an
// interval that it holds for. It is true where that gained a tenth.
func (b *box) lowerWhere(s *system, i int, out func([]span) bool) bool {
	over := b.intervals()
	exceeds := func(u float64) bool {
		over[i] = span{Lo: u, Hi: max(u, b.high[i])}
		return out(over)
	}
	top := min(b.high[i], huge)
	if !exceeds(top * 0.9) {
		return false
	}
	bottom := min(max(b.low[i], least/s.unit[i]), top)
	for top > 1.01*bottom {
		if mid := math.Sqrt(top) * math.Sqrt(bottom); exceeds(mid) {
			top = mid
		} else {
			bottom = mid
		}
	}
	b.high[i], b.basis[i] = top, ByBalance
	return true
}

// raise moves the lower end of species i up to where reaction r's law is below
// atLeast in any case.
func (b *box) raise(s *system, r, i int, atLeast float64) bool {
	if !(atLeast > 0) || math.IsInf(b.high[i], 1) {
		return false
	}
	over := b.intervals()
	misses := func(u float64) bool {
		over[i] = span{Lo: b.low[i], Hi: u}
		return b.encloser.enclose(s.net.Reactions[r].Law, over).Hi < atLeast
	}
	bottom := max(b.low[i], tiny)
	if !misses(bottom * 1.1) {
		return false
	}
	top := b.high[i]
	for top > 1.01*bottom {
		if mid := math.Sqrt(top) * math.Sqrt(bottom); misses(mid) {
			bottom = mid
		} else {
			top = mid
		}
	}
	b.low[i] = bottom
	return true
}

// huge and tiny are the ends of the amounts looked at; upper ends are not looked
// for below least, in molecules.
const (
	huge  = 1e30
	tiny  = 1e-30
	least = 1e-3
)
