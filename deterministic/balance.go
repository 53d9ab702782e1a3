package deterministic

import (
	"math"

	"holdfast/model"
)

// balance is the rate at which a species is taken away, and the rate at which it is
// made over that; nil where they cannot be taken apart.
type balance struct {
	lost  *model.Node
	ratio *ratio
}

// balances sums the laws that make and take away each species, each times its
// change.
func balances(s *system) []balance {
	made, lost := make([]*model.Node, s.n), make([]*model.Node, s.n)
	for r, list := range s.changes {
		law := s.net.Reactions[r].Law
		for _, c := range list {
			sum := &made[c.species]
			if c.amount < 0 {
				sum = &lost[c.species]
			}
			term := model.Call(model.OpMul, model.Number(abs(c.amount)), law)
			if *sum == nil {
				*sum = term
			} else {
				*sum = model.Call(model.OpAdd, *sum, term)
			}
		}
	}
	out := make([]balance, s.n)
	for i := range out {
		if made[i] == nil {
			made[i] = model.Number(0)
		}
		if lost[i] != nil {
			out[i] = balance{lost[i], newRatio(made[i], lost[i])}
		}
	}
	return out
}

// mostPrograms is the largest number of reactions whose rates are all tightened
// by linear programs; beyond it only rates without a bound are.
const mostPrograms = 40

// balanceRates tightens bounds on rates by N v = 0.
func balanceRates(s *system, c *class, rates []span) {
	p, ok := balanceProgram(s, c, rates)
	if !ok {
		return
	}
	goal := make([]float64, len(rates))
	for r, v := range rates {
		if len(rates) > mostPrograms && !math.IsInf(v.Hi, 1) {
			continue
		}
		goal[r] = 1
		most := v.Lo + p.maximise(goal)
		goal[r] = -1
		least := v.Lo - p.maximise(goal)
		goal[r] = 0
		rates[r].Hi = min(v.Hi, most*(1+margin))
		rates[r].Lo = max(v.Lo, least-margin*most)
	}
}

// balanceProgram is N (lo + w) = 0 over the independent species, w ≤ hi − lo,
// w ≥ 0.
func balanceProgram(s *system, c *class, rates []span) (*program, bool) {
	var bounded []int
	for r, v := range rates {
		if !math.IsInf(v.Hi, 1) {
			bounded = append(bounded, r)
		}
	}
	width := len(rates) + len(bounded)
	position := make([]int, s.n)
	a := make([][]float64, c.dim(), c.dim()+len(bounded))
	b := make([]float64, c.dim(), cap(a))
	for k, i := range c.independent {
		position[i] = k + 1
		a[k] = make([]float64, width)
	}
	for r, list := range s.changes {
		for _, ch := range list {
			if k := position[ch.species] - 1; k >= 0 {
				a[k][r] += ch.amount
				b[k] -= ch.amount * rates[r].Lo
			}
		}
	}
	for k, r := range bounded {
		row := make([]float64, width)
		row[r], row[len(rates)+k] = 1, 1
		a, b = append(a, row), append(b, rates[r].Hi-rates[r].Lo)
	}
	return newProgram(a, b)
}
