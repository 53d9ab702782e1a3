package branch

import (
	"math"
	"slices"

	"holdfast/model"
)

// rebind gives the network with the knob at value v, or a value near it where only
// whole molecules will do. It is false where a total cannot be had by adding or
// taking away molecules of single species.
func rebind(n *model.Network, k Knob, v float64) (*model.Network, bool) {
	d := n.Draft()
	d.Declared = nil // the states themselves are followed
	copies, set := 0.0, map[string]float64{}
	switch k.kind {
	case copiesKnob:
		copies = v
	case totalKnob:
		species, ok := withTotal(n, k.total, v)
		if !ok {
			return nil, false
		}
		d.Species = species
	default:
		factor := math.Pow(v/k.Today(n), 1/float64(len(k.constants)))
		for _, c := range k.constants {
			set[n.Constants[c].Name] = n.Constants[c].Value * factor
		}
		if len(k.constants) == 1 {
			set[n.Constants[k.constants[0]].Name] = v
		}
	}
	out, err := d.Bind(copies, set)
	return out, err == nil
}

// withTotal gives the species with molecules added at the start, or taken away,
// so that total k is as near to v as whole molecules allow and the other totals
// are as they were.
func withTotal(n *model.Network, k int, v float64) ([]model.Species, bool) {
	totals := n.Conserved()
	species := slices.Clone(n.Species)
	missing := v - float64(totals[k].Value)
	counts := n.StartCounts()
	for i, w := range totals[k].Weights {
		if w == 0 || inOther(totals, k, i) {
			continue
		}
		add := max(math.Round(missing/float64(w)), -float64(counts[i]))
		missing -= add * float64(w)
		species[i].Start = (float64(counts[i]) + add) / n.Unit(i)
		if math.Abs(missing) < math.Abs(float64(w)) {
			return species, true
		}
	}
	return nil, false
}

func inOther(totals []model.Total, k, species int) bool {
	for j, t := range totals {
		if j != k && t.Weights[species] != 0 {
			return true
		}
	}
	return false
}
