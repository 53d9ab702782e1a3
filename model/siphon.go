package model

import "slices"

// siphonSearch looks for minimal sets of species that stop certain reactions.
type siphonSearch struct {
	net   *Network
	start []int64
	// totals are conserved, of non-negative weights and positive value.
	totals []Total
	makes  [][]int // by species: the reactions whose firing can raise its count
	budget int
}

// searchBudget bounds the work of a search: steps times species.
const searchBudget = 20_000_000

// newSiphonSearch gathers what the search needs of the network.
func newSiphonSearch(n *Network) *siphonSearch {
	s := &siphonSearch{net: n, start: n.StartCounts(), makes: make([][]int, len(n.Species))}
	for r := range n.Reactions {
		for _, i := range n.raised(r) {
			s.makes[i] = append(s.makes[i], r)
		}
	}
	for _, t := range append(n.semiPositive(), n.Conserved()...) {
		if t.Value > 0 && slices.Min(t.Weights) >= 0 {
			s.totals = append(s.totals, t)
		}
	}
	return s
}

// semiPositive gives the conserved totals of non-negative weights and fewest
// species, all of them, not a basis only.
func (n *Network) semiPositive() []Total {
	var out []Total
	for _, v := range nonNegative(n.directions(), len(n.Species)) {
		if t, ok := v.total(n.StartCounts()); ok {
			out = append(out, t)
		}
	}
	return out
}

// raised lists the species whose count a firing of reaction r can raise.
func (n *Network) raised(r int) []int {
	var out []int
	for _, t := range slices.Concat(n.Reactions[r].Net, n.Reactions[r].Bursts) {
		if t.Count > 0 || t.Burst > 0 {
			out = append(out, t.Species)
		}
	}
	return out
}

// stopped tells whether reaction r cannot fire while the marked species are empty.
func (n *Network) stopped(r int, empty []bool) bool {
	re := &n.Reactions[r]
	gone := func(t Term) bool { return empty[t.Species] }
	if slices.ContainsFunc(re.Uses, gone) {
		return true
	}
	if re.MassAction {
		return re.Coefficient == 0 || slices.ContainsFunc(re.Reactants, gone)
	}
	return re.Law.vanishes(func(i int) bool { return empty[i] })
}

// frozen lists the minimal sets that stop every reaction.
func (s *siphonSearch) frozen() [][]bool {
	s.budget = searchBudget
	every := make([]int, len(s.net.Reactions))
	for r := range every {
		every[r] = r
	}
	var found [][]bool
	s.grow(make([]bool, len(s.net.Species)), func([]bool) []int { return every }, &found, map[string]bool{})
	return s.sensible(found)
}

// traps lists the minimal non-empty sets that stop every reaction that makes one
// of them.
func (s *siphonSearch) traps() [][]bool {
	s.budget = searchBudget
	var found [][]bool
	seen := map[string]bool{}
	for i := range s.net.Species {
		z := make([]bool, len(s.net.Species))
		z[i] = true
		s.grow(z, s.makers, &found, seen)
	}
	return s.sensible(found)
}

// makers lists the reactions that make a species of z.
func (s *siphonSearch) makers(z []bool) []int {
	var out []int
	for i, in := range z {
		if in {
			out = append(out, s.makes[i]...)
		}
	}
	return out
}

// grow adds species to z, in every way, until the reactions that must are stopped.
func (s *siphonSearch) grow(z []bool, must func([]bool) []int, found *[][]bool, seen map[string]bool) {
	key := setKey(z)
	if seen[key] || s.budget <= 0 || s.holdsTotal(z) || slices.ContainsFunc(*found, func(f []bool) bool { return subset(f, z) }) {
		return
	}
	seen[key] = true
	s.budget -= len(z)
	running := -1
	for _, r := range must(z) {
		if !s.net.stopped(r, z) {
			running = r
			break
		}
	}
	if running < 0 {
		*found = append(*found, slices.Clone(z))
		return
	}
	for _, i := range s.net.Reads(running) {
		if !z[i] {
			z[i] = true
			s.grow(z, must, found, seen)
			z[i] = false
		}
	}
}

// holdsTotal tells whether z holds a conserved total that is not 0: its species
// cannot all be empty.
func (s *siphonSearch) holdsTotal(z []bool) bool {
	return slices.ContainsFunc(s.totals, func(t Total) bool {
		for i, w := range t.Weights {
			if w != 0 && !z[i] {
				return false
			}
		}
		return true
	})
}

// sensible keeps the minimal sets, in order.
func (s *siphonSearch) sensible(found [][]bool) [][]bool {
	var out [][]bool
	for i, z := range found {
		other := func(j int) bool { return j != i && subset(found[j], z) && !slices.Equal(found[j], z) }
		if len(members(z)) > 0 && !slices.ContainsFunc(indices(len(found)), other) {
			out = append(out, z)
		}
	}
	slices.SortFunc(out, func(a, b []bool) int { return slices.Compare(members(a), members(b)) })
	return out
}

func (s *siphonSearch) absorber(z []bool, frozen bool) Absorber {
	a := Absorber{Empty: members(z), Frozen: frozen, AtStart: true}
	for _, i := range a.Empty {
		a.AtStart = a.AtStart && s.start[i] == 0
	}
	return a
}

func setKey(z []bool) string {
	key := make([]byte, (len(z)+7)/8)
	for i, in := range z {
		if in {
			key[i/8] |= 1 << (i % 8)
		}
	}
	return string(key)
}

func subset(a, b []bool) bool {
	for i := range a {
		if a[i] && !b[i] {
			return false
		}
	}
	return true
}

func members(z []bool) []int {
	var out []int
	for i, in := range z {
		if in {
			out = append(out, i)
		}
	}
	return out
}

func indices(n int) []int {
	out := make([]int, n)
	for i := range out {
		out[i] = i
	}
	return out
}
