package zoo

import (
	"math"

	"holdfast/model"
)

// A Moment is the mean and standard deviation of a species' count at a time.
type Moment struct{ Time, Mean, SD float64 }

// Agrees applies the pass rule of the published suite to a sample of n runs with
// the given mean and variance: Z = √n (mean−μ)/σ within ±3, Y = √(n/2)(S²/σ²−1)
// within ±5. Evans, Gillespie, Wilkinson, Bioinformatics 24 (2008) 285.
func (m Moment) Agrees(n int, mean, variance float64) (z, y float64, ok bool) {
	z = math.Sqrt(float64(n)) * (mean - m.Mean) / m.SD
	y = math.Sqrt(float64(n)/2) * (variance/(m.SD*m.SD) - 1)
	return z, y, math.Abs(z) <= 3 && math.Abs(y) <= 5
}

// BirthDeath is X→2X at 1.0 n, X→∅ at 1.1 n, from 100 molecules. No molecules is
// an absorbing state.
func BirthDeath() *model.Network {
	return newBuilder("birth–death", "s", 1).species("x", 100).
		constant("birth", 1).constant("death", 1.1).
		add(reaction{name: "birth", needs: counts{"x": 1}, makes: counts{"x": 1}, k: "birth"}).
		add(reaction{name: "death", uses: counts{"x": 1}, k: "death"}).
		network()
}

// BirthDeathCourse lists moments of BirthDeath: the deviations are published
// (Evans, Gillespie, Wilkinson, Bioinformatics 24 (2008) 285); the means are
// 100 e^{−0.1 t} (closed form).
func BirthDeathCourse() []Moment {
	return []Moment{
		{1, 100 * math.Exp(-0.1), 13.44708},
		{7, 100 * math.Exp(-0.7), 22.91234},
		{25, 100 * math.Exp(-2.5), 12.57890},
		{50, 100 * math.Exp(-5), 3.74891},
	}
}

// ImmigrationDeathCourse lists moments of ImmigrationDeath(1, 0.1). Means
// published (the same source); the law is Poisson, so the deviation is the root
// of the mean.
func ImmigrationDeathCourse() []Moment {
	return []Moment{
		{1, 0.9516258, math.Sqrt(0.9516258)},
		{10, 6.321206, math.Sqrt(6.321206)},
		{50, 9.93262, math.Sqrt(9.93262)},
	}
}

// Dimerisation is 2P→P2 at 0.001 n(n−1)/2, P2→2P at 0.01 n, from 100 P. P + 2 P2
// is conserved. The mass-action constant is 0.0005, since the propensity has no 1/2.
func Dimerisation() *model.Network {
	return newBuilder("dimerisation", "s", 1).species("p", 100).species("p2", 0).
		constant("join", 0.0005).constant("part", 0.01).
		add(reaction{name: "join", uses: counts{"p": 2}, makes: counts{"p2": 1}, k: "join"}).
		add(reaction{name: "part", uses: counts{"p2": 1}, makes: counts{"p": 2}, k: "part"}).
		network()
}

// DimerisationCourse lists moments of the monomer P in Dimerisation (published,
// the same source).
func DimerisationCourse() []Moment {
	return []Moment{
		{1, 91.031766, 3.862504},
		{10, 52.214271, 5.51176},
		{50, 28.542298, 4.789331},
	}
}

// BatchesOfFive is ∅→5X at 1, X→∅ at 0.2 n, from 0 molecules.
func BatchesOfFive() *model.Network {
	return newBuilder("immigration in batches of five", "s", 1).species("x", 0).
		constant("in", 1).constant("out", 0.2).
		add(reaction{name: "immigration", makes: counts{"x": 5}, k: "in"}).
		add(reaction{name: "death", uses: counts{"x": 1}, k: "out"}).
		network()
}

// BatchesCourse lists moments of BatchesOfFive (published, the same source).
func BatchesCourse() []Moment {
	return []Moment{
		{1, 4.531731, 4.584292},
		{10, 21.616618, 8.408379},
		{50, 24.998865, 8.660189},
	}
}
