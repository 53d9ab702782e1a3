package deterministic

import (
	"math"
	"math/rand/v2"
	"testing"

	"holdfast/model"
)

// TestPolynomials builds 150 one-species networks from 1, 3 or 5 roots over six
// decades, no two nearer than 2 %, and checks that each root is found, once. The
// tolerance is the conditioning of a root: rounding of the terms, which add up to
// κ∏(x+rᵢ), over the slope κ∏|x−rᵢ|, with 64 roundings in all.
func TestPolynomials(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for trial := range 150 {
		roots := []float64{logUniform(r, 1e-3, 1e3)}
		for len(roots) < 1+2*(trial%3) {
			roots = append(roots, roots[len(roots)-1]*(1+logUniform(r, 0.02, 10)))
		}
		m := survey(t, polynomial(t, logUniform(r, 1e-6, 1e3), roots))
		got := sortedAmounts(m, 0)
		if len(got) != len(roots) {
			t.Errorf("trial %d: states %v, want %v", trial, got, roots)
			continue
		}
		for k, x := range roots {
			near(t, "root", got[k], x, 64*0x1p-53*condition(roots, k))
		}
	}
}

// condition is ∏(x+rᵢ)/(x∏|x−rᵢ|) at root k.
func condition(roots []float64, k int) float64 {
	x, c := roots[k], 2.0
	for i, r := range roots {
		if i != k {
			c *= (x + r) / math.Abs(x-r)
		}
	}
	return c
}

// scanned counts the sign changes of g over a logarithmic grid, and gives the
// least |g| at a dip between two of the same sign: how far the count is from
// changing.
func scanned(g func(float64) float64, low, high float64) (count int, dip float64) {
	const points = 6000
	dip = math.Inf(1)
	var a, b float64
	for k := range points + 1 {
		c := g(low * math.Pow(high/low, float64(k)/points))
		if k > 0 && b*c < 0 {
			count++
		}
		if k > 1 && a*b > 0 && b*c > 0 && math.Abs(b) <= min(math.Abs(a), math.Abs(c)) {
			dip = min(dip, math.Abs(b))
		}
		a, b = b, c
	}
	return count, dip
}

// toggle is a pair of genes that repress each other through transcripts, with the
// number of its states by a scan of its reduction to one species.
type toggle struct {
	a, n, leak       [2]float64
	transcripts      [2]float64 // their loss rates
	loss, proteinOne float64    // of the second protein; scale of its amount
}

func randomToggle(r *rand.Rand) toggle {
	var g toggle
	for i := range 2 {
		g.a[i] = logUniform(r, 0.5, 1e3)
		g.n[i] = 1 + 3*r.Float64()
		g.leak[i] = g.a[i] * logUniform(r, 1e-4, 1e-1)
		g.transcripts[i] = logUniform(r, 1e-3, 1e3)
	}
	g.loss, g.proteinOne = logUniform(r, 1e-3, 1e3), logUniform(r, 1e-3, 1e3)
	return g
}

func (g toggle) count() (int, float64) {
	rate := func(u float64) float64 {
		v := g.leak[1] + g.a[1]/(1+math.Pow(u, g.n[1]))
		return (g.leak[0]+g.a[0]/(1+math.Pow(v, g.n[0])))/u - 1
	}
	return scanned(rate, 0.9*g.leak[0], 1.1*(g.leak[0]+g.a[0]))
}

// network: transcript 0 makes protein 1, transcript 2 makes protein 3; time scales
// differ by up to 1e6.
func (g toggle) network(t testing.TB) *model.Network {
	d := newDraft(100, "m1", "u", "m2", "v")
	e, s := g.transcripts, g.proteinOne
	d.law(nil, terms(0), sumOf(model.Number(g.leak[0]*e[0]), fallOf(g.a[0]*e[0], 3, s, g.n[0])))
	d.law(nil, terms(2), sumOf(model.Number(g.leak[1]*e[1]), fallOf(g.a[1]*e[1], 1, 1, g.n[1])))
	d.add(terms(0), nil, nil, e[0]).add(terms(2), nil, nil, e[1])
	d.add(nil, terms(0), terms(1), 1).add(terms(1), nil, nil, 1)
	d.add(nil, terms(2), terms(3), g.loss*s).add(terms(3), nil, nil, g.loss)
	return d.network(t)
}

// TestToggles: 100 random four-species pairs have the states that a dense scan of
// their one-dimensional reduction counts. Pairs within a thousandth of a fold,
// which the scan might miscount, are left out.
func TestToggles(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	by := map[int]int{}
	for trial := 0; trial < 100; {
		g := randomToggle(r)
		want, dip := g.count()
		if dip < 1e-3 {
			continue
		}
		trial++
		by[want]++
		if m := survey(t, g.network(t)); len(m.States) != want {
			t.Errorf("toggle %+v: %d states, want %d", g, len(m.States), want)
		}
	}
	if by[3] < 15 {
		t.Errorf("only %d of the pairs have three states: %v", by[3], by)
	}
}

// activators is dim genes that each activate themselves and nothing else, so that
// the number of states is the product of each gene's.
func activators(t testing.TB, r *rand.Rand, dim int) (*model.Network, int) {
	d := newDraft(100, []string{"a", "b", "c"}[:dim]...)
	want := 1
	for i := 0; i < dim; {
		n, top := 2+3*r.Float64(), logUniform(r, 2, 30)
		leak := top * logUniform(r, 1e-4, 0.05)
		count, dip := scanned(func(x float64) float64 {
			return (leak+top/(1+math.Pow(x, -n)))/x - 1
		}, 0.9*leak, 1.1*(leak+top))
		if dip < 1e-3 {
			continue
		}
		want *= count
		rate, scale := logUniform(r, 1e-3, 1e3), logUniform(r, 1e-3, 1e3)
		d.law(nil, terms(i), sumOf(model.Number(leak*rate*scale), hillOf(top*rate*scale, i, scale, n)))
		d.add(terms(i), nil, nil, rate)
		i++
	}
	return d.network(t), want
}

// TestManyStates: pairs and triples of self-activating genes, up to 27 resting
// states of which 8 are stable.
func TestManyStates(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	most := 0
	for trial := range 16 {
		n, want := activators(t, r, 2+trial%2)
		most = max(most, want)
		m := survey(t, n)
		if len(m.States) != want {
			t.Errorf("trial %d: %d states, want %d", trial, len(m.States), want)
		}
		for k, s := range m.Stable() {
			if want == 27 && s.Name != []string{"level1", "level2", "level3", "level4", "level5", "level6", "level7", "level8"}[k] {
				t.Errorf("stable state %d of 8 is called %s", k, s.Name)
			}
		}
	}
	if most < 27 {
		t.Errorf("no triple has 27 states, most %d", most)
	}
}
