package zoo

import (
	"math"

	"holdfast/model"
)

// Latch is a one-gene latch with leak, in a transcript and a protein: transcript
// made at leak + drive p²/(half²+p²) and lost at b, protein made at k a transcript
// and lost at a, with leak 0.02, drive, half, b and k 1, a 0.45. It has two
// resting states and a saddle; LatchStates gives them.
func Latch(copies float64) *model.Network { return latch(0.02, 0.45, 1, copies) }

// LatchStates gives the transcript and protein amounts of the resting states of
// Latch, by protein ascending: the low state, the saddle, the high state.
//
// With m = a p the protein's amount solves a p (1+p²) = leak(1+p²) + p²; its roots
// are computed (Newton's method in 30-digit arithmetic).
func LatchStates() [3][2]float64 {
	return [3][2]float64{
		{0.0224919961169671814873, 0.0499822135932604033052},
		{0.2366633676131241776333, 0.5259185946958315058530},
		{0.7608446362699086408788, 1.6907658583775747575085},
	}
}

// LeaklessLatch is the latch without leak: x' = y − a x, y' = x²/(1+x²) − b y,
// with x the protein and y the transcript. Zero molecules is an absorbing state.
// LeaklessStates gives its states in closed form.
func LeaklessLatch(a, b, copies float64) *model.Network { return latch(0, a, b, copies) }

// LeaklessStates gives the protein amounts of the outer pair of LeaklessLatch,
// the saddle and the sink, x = (1 ∓ √(1−4a²b²))/(2ab), where y = a x; NaN beyond
// the fold at ab = 1/2. The origin is always a sink, with eigenvalues −a and −b.
// Griffith, J. Theor. Biol. 20 (1968) 209 (the model); the closed form is common
// practice.
func LeaklessStates(a, b float64) (saddle, sink float64) {
	ab := a * b
	root := math.Sqrt(1 - 4*ab*ab)
	return (1 - root) / (2 * ab), (1 + root) / (2 * ab)
}

func latch(leak, a, b, copies float64) *model.Network {
	g := newBuilder("one-gene latch", "min", copies).
		species("mrna", 0).species("protein", 0).readout("protein").
		constant("leak", leak).constant("drive", 1).constant("half", 1).
		constant("b", b).constant("k", 1).constant("a", a)
	p2, h2 := pow(g.x("protein"), num(2)), pow(g.c("half"), num(2))
	law := add(g.c("leak"), div(mul(g.c("drive"), p2), add(h2, p2)))
	g.draft.Generation = 45
	return g.
		add(reaction{name: "transcription", makes: counts{"mrna": 1}, law: law}).
		add(reaction{name: "transcript decay", uses: counts{"mrna": 1}, k: "b"}).
		add(reaction{name: "translation", needs: counts{"mrna": 1}, makes: counts{"protein": 1}, k: "k"}).
		add(reaction{name: "dilution", uses: counts{"protein": 1}, k: "a"}).
		network()
}

// SelfActivator is x' = β xⁿ/(Kⁿ+xⁿ) − γ x, one species. SelfActivatorFold gives
// its fold.
func SelfActivator(beta, k, gamma, n, copies float64) *model.Network {
	g := newBuilder("self-activator", "min", copies).species("x", 1).
		constant("beta", beta).constant("half", k).constant("gamma", gamma).constant("n", n)
	law := mul(g.c("beta"), model.Call(model.OpHill, g.x("x"), g.c("half"), g.c("n")))
	return g.
		add(reaction{name: "production", makes: counts{"x": 1}, law: law}).
		add(reaction{name: "loss", uses: counts{"x": 1}, k: "gamma"}).
		network()
}

// SelfActivatorFold gives β/(γK) and x/K at the fold of SelfActivator:
// n/(n−1)^{(n−1)/n} and (n−1)^{1/n}. For n = 2: 2, 1; n = 3: 1.8898816, 1.2599210;
// n = 4: 1.7547654, 1.3160740 (computed; algebra).
func SelfActivatorFold(n float64) (ratio, x float64) {
	return n / math.Pow(n-1, (n-1)/n), math.Pow(n-1, 1/n)
}

// LeakyActivator is x' = s − r x + x²/(1+x²), one species. LeakyFold gives its
// fold curve; the cusp is at x = 1/√3, r = 3√3/8, s = 1/8.
func LeakyActivator(r, s, copies float64) *model.Network {
	g := newBuilder("self-activator with leak", "min", copies).species("x", 0).
		constant("r", r).constant("s", s)
	x2 := pow(g.x("x"), num(2))
	law := add(g.c("s"), div(x2, add(num(1), x2)))
	return g.
		add(reaction{name: "production", makes: counts{"x": 1}, law: law}).
		add(reaction{name: "loss", uses: counts{"x": 1}, k: "r"}).
		network()
}

// LeakyFold gives the constants r and s that put the fold of LeakyActivator at x:
// r = 2x/(1+x²)², s = x²(1−x²)/(1+x²)². Lewis, Slack, Wolpert, J. Theor. Biol. 65
// (1977) 579 (from memory; algebra re-derived).
func LeakyFold(x float64) (r, s float64) {
	d := (1 + x*x) * (1 + x*x)
	return 2 * x / d, x * x * (1 - x*x) / d
}
