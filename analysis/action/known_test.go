package action

import (
	"math"
	"slices"
	"testing"

	"holdfast/internal/zoo"
)

// TestSchlogl holds S against ∫ln(d/b)dx, and its derivatives against the integral's
// (closed form of one-step processes: Dykman, Mori, Ross, Hunt, J. Chem. Phys. 100
// (1994) 5735; from memory, re-derived: H = b(e^θ−1)+d(e^−θ−1) = 0 at e^θ = d/b).
// The ends move at no cost, since there d = b. Roots by zoo.SchloglRoots.
func TestSchlogl(t *testing.T) {
	n := zoo.Schlogl()
	r := routes(t, n)
	roots, _ := zoo.SchloglRoots()
	k := map[string]float64{}
	for i, c := range n.Constants {
		k[c.Name] = n.ConstantValues()[i]
	}
	birth := func(x float64) float64 { return 2200 + 0.18*x*x }
	death := func(x float64) float64 { return 2.5e-4*x*x*x + 37.5*x }
	for _, c := range []struct {
		from, to string
		root     float64
	}{{"low", "high", roots[0]}, {"high", "low", roots[2]}} {
		p := exponent(t, r, c.from, c.to)
		want := integral(func(x float64) float64 { return math.Log(death(x) / birth(x)) }, c.root, roots[1])
		near(t, "S from "+c.from, p.S, want, 1e-10)
		if math.Abs(p.S-want) > 10*p.Error+1e-13 {
			t.Errorf("S from %s is off by %.2g, stated error %.2g", c.from, p.S-want, p.Error)
		}
		for reaction, slope := range []func(x float64) float64{
			func(x float64) float64 { return x * x * x / death(x) },
			func(x float64) float64 { return -x * x / birth(x) },
			func(x float64) float64 { return x / death(x) },
			func(x float64) float64 { return -1 / birth(x) },
		} {
			constant := n.Reactions[reaction].Free.Constants()[0]
			near(t, n.Constants[constant].Name, p.Gradient[constant], integral(slope, c.root, roots[1]), 1e-7)
		}
	}
}

// burstLatch makes protein in geometric bursts.
const burstLatch = `
title = "latch with bursts"
time = "min"
copies = 100
[species]
p = { start = 0, readout = true }
[constants]
leak = 0.02
drive = 0.5
m = 2.0
a = 0.45
[[reaction]]
name = "expression"
makes = { p = { burst = "m" } }
rate = "leak + drive*p^2/(1+p^2)"
[[reaction]]
name = "dilution"
uses = { p = 1 }
mass_action = "a"
`

// TestBursts: with bursts of mean m made at f and losses at a x, H = 0 is
// f m u = a x (1+m−m u) in u = e^θ, so that θ = ln(a x (1+m)/(m (f + a x)))
// (algebra, with the generating function of the geometric law).
func TestBursts(t *testing.T) {
	n := parse(t, burstLatch, nil)
	r := routes(t, n)
	m := n.ConstantValues()[2]
	f := func(x float64) float64 { return 0.02 + 0.5*x*x/(1+x*x) }
	theta := func(x float64) float64 { return math.Log(0.45 * x * (1 + m) / (m * (f(x) + 0.45*x))) }
	for _, name := range []string{"low", "high"} {
		p := exponent(t, r, name, other(name))
		from, to := p.Points[0][0], p.Points[p.Summit][0]
		near(t, "S from "+name, p.S, integral(theta, from, to), 1e-9)
		inMean := func(float64) float64 { return 1/(1+m) - 1/m }
		near(t, "∂S/∂m from "+name, p.Gradient[2], integral(inMean, from, to), 1e-7)
		for k, x := range p.Points[:p.Summit] {
			if k > 0 && math.Abs(p.Momenta[k][0]-theta(x[0])) > 1e-6 {
				t.Errorf("from %s: θ = %v at %v, want %v", name, p.Momenta[k][0], x[0], theta(x[0]))
			}
		}
	}
}

func other(name string) string {
	if name == "low" {
		return "high"
	}
	return "low"
}

// TestKink: production min(0.1 + x, 1.1)·… has corners; S is still ∫ln(d/b)dx, piece
// by piece.
func TestKink(t *testing.T) {
	n := parse(t, kinkedLatch, nil)
	r := routes(t, n)
	birth := func(x float64) float64 { return 0.05 + math.Min(math.Max(2*(x-0.3), 0), 1) }
	theta := func(x float64) float64 { return math.Log(x / birth(x)) }
	low := exponent(t, r, "low", "high")
	near(t, "S from low", low.S, integral(theta, 0.05, 0.3)+integral(theta, 0.3, 0.55), 1e-6)
	high := exponent(t, r, "high", "low")
	near(t, "S from high", high.S, integral(theta, 1.05, 0.8)+integral(theta, 0.8, 0.55), 1e-6)
	if math.Abs(low.S-integral(theta, 0.05, 0.3)-integral(theta, 0.3, 0.55)) > 3*low.Error {
		t.Errorf("the stated error %.2g does not hold", low.Error)
	}
}

const kinkedLatch = `
title = "latch with corners"
time = "min"
copies = 100
[species]
p = { start = 0, readout = true }
[constants]
leak = 0.05
[[reaction]]
name = "expression"
makes = { p = 1 }
rate = "leak + min(max(2*(p-0.3), 0), 1)"
[[reaction]]
name = "dilution"
uses = { p = 1 }
mass_action = "1.0"
`

// logistic dies out: no molecules are never left, and the flow leads away from there.
const logistic = `
title = "logistic birth and death"
time = "min"
copies = 100
[species]
p = { start = 1, readout = true }
[constants]
b = 2.0
d = 0.5
c = 1.0
[[reaction]]
name = "birth"
needs = { p = 1 }
makes = { p = 1 }
mass_action = "b"
[[reaction]]
name = "death"
uses = { p = 1 }
mass_action = "d"
[[reaction]]
name = "crowding"
needs = { p = 1 }
uses = { p = 1 }
mass_action = "c"
`

// TestExtinction: births b x, deaths d x + c x²: S = ∫₀^{(b−d)/c} ln(b/(d+cx))dx =
// (b − d − d ln(b/d))/c (algebra; Elgart and Kamenev, Phys. Rev. E 70 (2004) 041106
// for the method, from memory), and θ = ln(d/b) at the end.
func TestExtinction(t *testing.T) {
	n := parse(t, logistic, nil)
	p := exponent(t, routes(t, n), "only", Absorbed)
	near(t, "S", p.S, 2-0.5-0.5*math.Log(4), 1e-9)
	near(t, "∂S/∂b", p.Gradient[0], 1-0.5/2, 1e-7)
	near(t, "∂S/∂d", p.Gradient[1], -math.Log(4), 1e-7)
	near(t, "∂S/∂c", p.Gradient[2], -(2 - 0.5 - 0.5*math.Log(4)), 1e-7)
	near(t, "θ at the end", p.Momenta[p.Summit][0], math.Log(0.25), 1e-6)
	if !p.Extinct || p.Summit != len(p.Points)-1 || p.Points[p.Summit][0] != 0 {
		t.Errorf("extinct %v, summit %d of %d, end %v", p.Extinct, p.Summit, len(p.Points), p.Points[p.Summit])
	}
}

// TestFold: near a fold of one species F = ∓αδ ± βy², and S falls as δ^{3/2}, with
// S = (4/3)(αδ)^{3/2}β^{−1/2}/b, b the birth rate at the fold (Dykman and Krivoglaz,
// Physica A 104 (1980) 480, from memory; the constant by θ = −F/b near the fold).
// The next order is δ smaller.
func TestFold(t *testing.T) {
	const at = 0.9
	r, s := zoo.LeakyFold(at)
	birth := r * at
	beta := math.Abs(curvature(at)) / 2
	for _, delta := range []float64{1e-3, 1e-4, 1e-5, 1e-6} {
		routes := routes(t, zoo.LeakyActivator(r, s+delta, 100))
		p := routes.Find("high", "low")
		want := 4.0 / 3 * math.Pow(delta, 1.5) / math.Sqrt(beta) / birth
		near(t, "S near the fold", p.S, want, 20*delta+1e-4*math.Sqrt(1e-6/delta))
	}
}

// curvature is the second derivative of x²/(1+x²).
func curvature(x float64) float64 { return (2 - 6*x*x) / math.Pow(1+x*x, 3) }

// TestFoldTwoSpecies: the leakless latch has its fold at ab = 1/2 (Griffith, J.
// Theor. Biol. 20 (1968) 209); S of its on state falls as (1/2 − ab)^{3/2}.
func TestFoldTwoSpecies(t *testing.T) {
	s := func(delta float64) float64 {
		return exponent(t, routes(t, zoo.LeaklessLatch(0.5-delta, 1, 100)), "high", "low").S
	}
	near(t, "S(4δ)/S(δ)", s(4e-5)/s(1e-5), 8, 1e-3)
}

// TestPathShape: positions and action rise, ends are the states, H is 0 on the way.
func TestPathShape(t *testing.T) {
	n := zoo.Latch(100)
	p := exponent(t, routes(t, n), "low", "high")
	if !slices.IsSorted(p.Position) || !slices.IsSorted(p.Action) || p.Action[len(p.Action)-1] != p.S || p.Position[len(p.Position)-1] != 1 {
		t.Errorf("positions %v, action %v", p.Position, p.Action)
	}
	states := zoo.LatchStates()
	for k, at := range map[int][2]float64{0: states[0], p.Summit: states[1], len(p.Points) - 1: states[2]} {
		if math.Abs(p.Points[k][0]-at[0])+math.Abs(p.Points[k][1]-at[1]) > 1e-9 {
			t.Errorf("point %d is %v, want %v", k, p.Points[k], at)
		}
	}
	for k, x := range p.Points {
		h, size := 0.0, 0.0
		for r := range n.Reactions {
			g := 0.0
			for _, term := range n.Reactions[r].Net {
				g += float64(term.Count) * p.Momenta[k][term.Species]
			}
			h += n.Flux(r, x) * math.Expm1(g)
			size += n.Flux(r, x) * math.Abs(math.Expm1(g))
		}
		if math.Abs(h) > 1e-4*size {
			t.Errorf("H = %v of %v at point %d", h, size, k)
		}
	}
}
