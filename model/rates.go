package model

import "math"

// Reads lists, ascending, the species whose counts the propensity of reaction r
// depends on: those its law reads, its reactants, and those it uses.
func (n *Network) Reads(r int) []int { return n.Reactions[r].reads }

// Propensity gives the expected firings of reaction r per unit of time at the
// given counts (one per species).
//
// Mass action has exact combinatorics: k Ω^(1−order) ∏ nᵢ!/(nᵢ−νᵢ)!, with no
// 1/ν!. A reaction whose law is given is Scale·v(n/Ω), and 0 where its uses are
// not all there, so that no count falls below 0. Gillespie, J. Phys. Chem. 81
// (1977) 2340.
//
// The result may be negative or not finite where the design's law is; callers
// must check it.
func (n *Network) Propensity(r int, counts []int64) float64 {
	re := &n.Reactions[r]
	if re.MassAction {
		a := re.factor
		for _, t := range re.Reactants {
			k := counts[t.Species]
			if k < int64(t.Count) {
				return 0
			}
			for j := range t.Count {
				a *= float64(k - int64(j))
			}
		}
		return a
	}
	for _, t := range re.Uses {
		if counts[t.Species] < int64(t.Count) {
			return 0
		}
	}
	var buf [8]float64
	x := buf[:0]
	for _, i := range re.lawReads {
		x = append(x, float64(counts[i])/n.Unit(i))
	}
	return re.Scale * re.local.value(x)
}

// MassActionFactor gives the c of the propensity c ∏ nᵢ!/(nᵢ−νᵢ)! of a
// mass-action reaction.
func (n *Network) MassActionFactor(r int) float64 { return n.Reactions[r].factor }

// MassActionUnit gives what MassActionFactor is for a coefficient of 1; 0 for a
// reaction whose law is given.
func (n *Network) MassActionUnit(r int) float64 {
	re := &n.Reactions[r]
	if !re.MassAction {
		return 0
	}
	unit := re.Scale
	for _, t := range re.Reactants {
		if !n.Species[t.Species].Fixed {
			unit /= math.Pow(n.Copies, float64(t.Count))
		}
	}
	return unit
}

// Flux gives the deterministic law v of reaction r at amounts x, in amount (or
// firings, where it changes a fixed-count species) per unit of time.
func (n *Network) Flux(r int, x []float64) float64 { return n.Reactions[r].program.Eval(x) }

// FluxGradient gives Flux and overwrites dx, one per species, with its partial
// derivatives in the amounts.
func (n *Network) FluxGradient(r int, x, dx []float64) float64 {
	return n.Reactions[r].slope.gradient(x, nil, dx, nil)
}

// FluxConstants gives Flux and overwrites dc, one per constant, with its partial
// derivatives in the constants.
func (n *Network) FluxConstants(r int, x, dc []float64) float64 {
	return n.Reactions[r].freeSlope.gradient(x, n.values, nil, dc)
}

// AmountChange gives what one firing of reaction r per unit of time adds to
// species i's amount per unit of flux: net change (bursts by their mean) times
// Scale over Unit. The rate equations are dxᵢ/dt = Σ_r AmountChange(r, i)·Flux(r).
func (n *Network) AmountChange(r, i int) float64 {
	re := &n.Reactions[r]
	s := 0.0
	for _, t := range re.Net {
		if t.Species == i {
			s += float64(t.Count)
		}
	}
	for _, t := range re.Bursts {
		if t.Species == i {
			s += t.Burst
		}
	}
	return s * re.Scale / n.Unit(i)
}
