package zoo

import (
	"math"

	"holdfast/model"
)

// SymmetricRepression is u' = α/(1+v²) − u, v' = α/(1+u²) − v, with readout v
// ("low" is then u high). SymmetricStates gives its states. Gardner, Cantor,
// Collins, Nature 403 (2000) 339 (the model).
func SymmetricRepression(alpha, copies float64) *model.Network {
	return AsymmetricRepression(alpha, alpha, 2, 2, copies)
}

// SymmetricStates gives the low and the high amount of either species in the
// two stable states of SymmetricRepression, (α ∓ √(α²−4))/2; one is low where the
// other is high: uv = 1, u+v = α. NaN below the pitchfork at α = 2 (algebra).
func SymmetricStates(alpha float64) (low, high float64) {
	root := math.Sqrt(alpha*alpha - 4)
	return (alpha - root) / 2, (alpha + root) / 2
}

// SymmetricSaddle gives u = v at the middle state of SymmetricRepression: the
// real root of u + u³ = α (Cardano's formula).
func SymmetricSaddle(alpha float64) float64 {
	h := alpha / 2
	root := math.Sqrt(h*h + 1.0/27)
	return math.Cbrt(h+root) + math.Cbrt(h-root)
}

// SymmetricPitchfork gives the α at which u' = α/(1+vⁿ) − u, v' = α/(1+uⁿ) − v
// becomes bistable, n (n−1)^{−(n+1)/n}: n = 2: 2; 2.5: 1.4171383; 3: 1.1905508
// (computed; algebra).
func SymmetricPitchfork(n float64) float64 { return n * math.Pow(n-1, -(n+1)/n) }

// AsymmetricRepression is u' = α₁/(1+v^β) − u, v' = α₂/(1+u^γ) − v, with readout
// v. AsymmetricFolds lists points of its fold curve.
func AsymmetricRepression(alpha1, alpha2, beta, gamma, copies float64) *model.Network {
	g := newBuilder("a pair of genes that repress each other", "min", copies).
		species("u", 1).species("v", 0).readout("v").
		constant("alpha1", alpha1).constant("alpha2", alpha2).
		constant("beta", beta).constant("gamma", gamma).constant("loss", 1)
	u := falling(g.c("alpha1"), g.x("v"), g.c("beta"))
	v := falling(g.c("alpha2"), g.x("u"), g.c("gamma"))
	return g.
		add(reaction{name: "make u", makes: counts{"u": 1}, law: u}).
		add(reaction{name: "make v", makes: counts{"v": 1}, law: v}).
		add(reaction{name: "lose u", uses: counts{"u": 1}, k: "loss"}).
		add(reaction{name: "lose v", uses: counts{"v": 1}, k: "loss"}).
		network()
}

// A FoldPoint is a point of the fold curve of AsymmetricRepression.
type FoldPoint struct {
	P, Alpha1, Alpha2 float64
	Cusp              bool
}

// AsymmetricFolds lists fold points for β = γ = 2. Folds are where βγpq = 1 with
// p = v^β/(1+v^β), q = u^γ/(1+u^γ) (computed; algebra re-derived).
func AsymmetricFolds() []FoldPoint {
	return []FoldPoint{
		{P: 0.3, Alpha1: 3.1943824, Alpha2: 3.9279220},
		{P: 0.5, Alpha1: 2, Alpha2: 2, Cusp: true},
		{P: 0.6, Alpha1: 2.1128856, Alpha2: 2.0995626},
	}
}

// InducibleRepression is the pair with an inducer of the first repressor:
// u' = α₁/(1+v^β) − u, v' = α₂/(1+w^γ) − v, w = u/(1+I/K)^η, with α₁ = 156.25,
// α₂ = 15.6, β = 2.5, γ = 1, η = 2.0015, K = 2.9618e-5 M and the inducer I in M.
// Gardner, Cantor, Collins, Nature 403 (2000) 339 (constants from memory).
// InducibleFold and InducibleStates give what is known.
func InducibleRepression(inducer, copies float64) *model.Network {
	g := newBuilder("a pair of genes, one inducible", "min", copies).
		species("u", 1).species("v", 0).readout("u").
		constant("alpha1", 156.25).constant("alpha2", 15.6).
		constant("beta", 2.5).constant("gamma", 1).constant("eta", 2.0015).
		constant("k", 2.9618e-5).constant("inducer", inducer).constant("loss", 1)
	w := div(g.x("u"), pow(add(num(1), div(g.c("inducer"), g.c("k"))), g.c("eta")))
	return g.
		add(reaction{name: "make u", makes: counts{"u": 1}, law: falling(g.c("alpha1"), g.x("v"), g.c("beta"))}).
		add(reaction{name: "make v", makes: counts{"v": 1}, law: falling(g.c("alpha2"), w, g.c("gamma"))}).
		add(reaction{name: "lose u", uses: counts{"u": 1}, k: "loss"}).
		add(reaction{name: "lose v", uses: counts{"v": 1}, k: "loss"}).
		network()
}

// InducibleFold gives the inducer, in M, at the fold of InducibleRepression
// (computed).
func InducibleFold() float64 { return 3.923e-5 }

// InducibleStates gives u at the three states of InducibleRepression without
// inducer: stable, saddle, stable (computed).
func InducibleStates() [3]float64 { return [3]float64{0.33242, 1.31655, 155.763} }
