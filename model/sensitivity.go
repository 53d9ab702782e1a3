package model

import "math"

// PropensityConstants overwrites dc, one per constant, with the partial derivatives of
// Propensity(r, counts) in the constants, and gives that in copies, the counts held.
// They are exact to rounding; where a law has no derivative they are Inf or NaN.
func (n *Network) PropensityConstants(r int, counts []int64, dc []float64) (inCopies float64) {
	clear(dc)
	re := &n.Reactions[r]
	if re.MassAction {
		return n.massActionConstants(re, counts, dc)
	}
	for _, t := range re.Uses {
		if counts[t.Species] < int64(t.Count) {
			return 0
		}
	}
	var room [16]float64
	x, dx := n.Amounts(room[:0:8], counts), room[8:]
	if len(x) > len(dx) {
		dx = make([]float64, len(x))
	}
	v := re.freeSlope.gradient(x, n.values, dx, dc)
	for k := range dc {
		dc[k] *= re.Scale
	}
	if n.scales(re) {
		inCopies = v
	}
	for _, i := range re.lawReads {
		if !n.Species[i].Fixed && x[i] != 0 {
			inCopies -= re.Scale / n.Copies * x[i] * dx[i]
		}
	}
	return inCopies
}

// massActionConstants does so for c Ω^p ∏ nᵢ!/(nᵢ−νᵢ)!.
func (n *Network) massActionConstants(re *Reaction, counts []int64, dc []float64) (inCopies float64) {
	product, power := 1.0, 0
	if n.scales(re) {
		power = 1
	}
	for _, t := range re.Reactants {
		if !n.Species[t.Species].Fixed {
			power -= t.Count
		}
		for j := range t.Count {
			product *= float64(max(counts[t.Species]-int64(j), 0))
		}
	}
	if product == 0 {
		return 0
	}
	product *= math.Pow(n.Copies, float64(power))
	re.freeCoefficient().Gradient(nil, n.values, nil, dc)
	for k := range dc {
		dc[k] *= product
	}
	return re.Coefficient * product * float64(power) / n.Copies
}

// scales tells whether a reaction changes scaling species only, so that its propensity
// is copies times its law.
func (n *Network) scales(r *Reaction) bool {
	for _, terms := range [2][]Term{r.Net, r.Bursts} {
		for _, t := range terms {
			if n.Species[t.Species].Fixed {
				return false
			}
		}
	}
	return true
}

// BurstConstants overwrites dc, one per constant, with the partial derivatives of a
// burst's mean in the constants: 0 where the mean is a plain number.
func (n *Network) BurstConstants(burst Term, dc []float64) {
	clear(dc)
	if burst.Mean != nil {
		burst.Mean.Gradient(nil, n.values, nil, dc)
	}
}

// ReadsConstant tells whether any law or burst of the network reads constant k.
func (n *Network) ReadsConstant(k int) bool {
	for i := range n.Reactions {
		r := &n.Reactions[i]
		if r.Free.readsConstant(k) {
			return true
		}
		for _, t := range r.Makes {
			if t.Mean != nil && t.Mean.readsConstant(k) {
				return true
			}
		}
	}
	return false
}

func (n *Node) readsConstant(k int) bool {
	found := false
	n.Walk(func(m *Node) { found = found || m.Op == OpConstant && m.Index == k })
	return found
}

// TotalsScale tells whether some conserved total has molecules that come with copies:
// another number of copies is then another total, by whole molecules.
func (n *Network) TotalsScale() bool {
	for _, t := range n.Conserved() {
		for i, w := range t.Weights {
			if w != 0 && !n.Species[i].Fixed && t.Value != 0 {
				return true
			}
		}
	}
	return false
}
