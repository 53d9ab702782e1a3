package zoo

import (
	"fmt"
	"math"

	"holdfast/model"
)

// A Passage is a mean time to first reach a count of the only species at or above
// To (at or below it, where To < From). Published is 0 where the source has none.
type Passage struct {
	From, To            int64
	Computed, Published float64
}

// Schlogl is the one-species chain with two states, molecules and minutes:
// 3A→2A 2.5e-4 n(n−1)(n−2), 2A→3A 0.18 n(n−1), A→∅ 37.5 n, ∅→A 2200.
func Schlogl() *model.Network { return SchloglIn(1) }

// SchloglIn is Schlogl in a volume so many times as large: k1 over its square, k2
// over it, k4 times it. Its passage times follow from the closed sum of a birth–death
// chain (Gardiner, Handbook of Stochastic Methods).
func SchloglIn(volume float64) *model.Network {
	return newBuilder("one-species chain with two states", "min", 1).
		species("a", 0).
		constant("k1", 2.5e-4/(volume*volume)).constant("k2", 0.18/volume).constant("k3", 37.5).constant("k4", 2200*volume).
		add(reaction{name: "three to two", needs: counts{"a": 2}, uses: counts{"a": 1}, k: "k1"}).
		add(reaction{name: "two to three", needs: counts{"a": 2}, makes: counts{"a": 1}, k: "k2"}).
		add(reaction{name: "loss", uses: counts{"a": 1}, k: "k3"}).
		add(reaction{name: "source", makes: counts{"a": 1}, k: "k4"}).
		network()
}

// SchloglPassages lists mean first-passage times of Schlogl in minutes. Published:
// a simulation, within 3 % (data to the example in Erban and Chapman, Stochastic
// Modelling of Reaction–Diffusion Processes, CUP 2020; attribution from memory).
// Computed by tridiagonal recursion in 40 digits.
func SchloglPassages() []Passage {
	return []Passage{
		{0, 235, 15.7648, 15.405},
		{100, 235, 15.5765, 15.638},
		{200, 235, 7.9415, 7.829},
		{230, 235, 1.1338, 1.1298},
		{100, 400, 28.6719, 0},
		{400, 100, 8.88407, 0},
	}
}

// SchloglRoots gives the macroscopic states of Schlogl: powers give 100, 220, 400,
// falling factorials 98.847, 220.613, 403.539 (computed).
func SchloglRoots() (powers, factorials [3]float64) {
	return [3]float64{100, 220, 400}, [3]float64{98.847, 220.613, 403.539}
}

// A SchloglLaw is what is known of the stationary law of Schlogl.
type SchloglLaw struct {
	Mean, Variance, Below235 float64
	Modes                    [2]int64
}

// SchloglStationary gives the stationary mean, variance, P(n<235) and modes of
// Schlogl (computed).
func SchloglStationary() SchloglLaw {
	return SchloglLaw{Mean: 169.4633, Variance: 14322.03, Below235: 0.767597, Modes: [2]int64{95, 392}}
}

// ImmigrationDeath is ∅→A at in, A→∅ at out n, from 0 molecules. Its law from 0
// is Poisson with mean in/out (1−e^{−out t}) at every time.
func ImmigrationDeath(in, out float64) *model.Network {
	return newBuilder("immigration–death", "min", 1).species("a", 0).
		constant("in", in).constant("out", out).
		add(reaction{name: "immigration", makes: counts{"a": 1}, k: "in"}).
		add(reaction{name: "death", uses: counts{"a": 1}, k: "out"}).
		network()
}

// ImmigrationDeathPassages lists mean times for ImmigrationDeath(1, 0.1) to first
// reach 19 (computed).
func ImmigrationDeathPassages() []Passage {
	return []Passage{
		{0, 19, 357.19868, 0},
		{5, 19, 350.96628, 0},
		{10, 19, 338.06841, 0},
		{15, 19, 289.47384, 0},
		{18, 19, 140.00821, 0},
	}
}

// TwoStateChain is one molecule that goes A→B at forth and B→A at back. Dwells in
// A are exponential with mean 1/forth, in B with mean 1/back.
func TwoStateChain(forth, back float64) *model.Network {
	return newBuilder("two-state chain", "min", 1).
		fixed("a", 1).fixed("b", 0).readout("b").
		constant("forth", forth).constant("back", back).
		add(reaction{name: "forth", uses: counts{"a": 1}, makes: counts{"b": 1}, k: "forth"}).
		add(reaction{name: "back", uses: counts{"b": 1}, makes: counts{"a": 1}, k: "back"}).
		network()
}

// TwoStateCores gives the cores of TwoStateChain: "low" is A, "high" is B.
func TwoStateCores() []model.Core { return []model.Core{point("low", 1, 0), point("high", 0, 1)} }

// point is the core that holds one lattice point only.
func point(state string, counts ...int64) model.Core {
	c := model.Core{State: state, Low: counts, High: counts, Start: counts}
	for _, k := range counts {
		c.Center = append(c.Center, float64(k))
	}
	return c
}

// Interval gives the core low ≤ n ≤ high of a network of one species, begun at
// start: the target or the start of a Passage.
func Interval(state string, low, high, start int64) model.Core {
	return model.Core{
		State: state, Low: []int64{low}, High: []int64{high},
		Start: []int64{start}, Center: []float64{float64(start)},
	}
}

// Chain is n one-way conversions s0→s1→…→sn, each at k a molecule, from the given
// number of molecules of s0: n reactions whose work per event must not grow with n.
func Chain(n int, k, molecules float64) *model.Network {
	b := newBuilder("chain of one-way conversions", "min", 1).constant("k", k)
	for i := range n + 1 {
		b.species(fmt.Sprintf("s%d", i), 0)
	}
	b.draft.Species[0].Start = molecules
	b.readout(fmt.Sprintf("s%d", n))
	for i := range n {
		b.draft.Reactions = append(b.draft.Reactions, model.DraftReaction{
			Name: fmt.Sprintf("step %d", i+1), MassAction: b.c("k"),
			Uses: []model.Term{{Species: i, Count: 1}}, Makes: []model.Term{{Species: i + 1, Count: 1}},
		})
	}
	return b.network()
}

// ChainMean gives the mean molecules of s_i at time t in Chain: the probability
// that a Poisson variable with mean kt is i, times molecules (for i = n, that it
// is n or more).
func ChainMean(n, i int, k, molecules, t float64) float64 {
	if i == n {
		rest := molecules
		for j := range n {
			rest -= ChainMean(n, j, k, molecules, t)
		}
		return rest
	}
	gamma, _ := math.Lgamma(float64(i + 1))
	return molecules * math.Exp(float64(i)*math.Log(k*t)-k*t-gamma)
}
