package sde_test

import (
	"math"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
	"holdfast/sde"
)

// diffusion gives Σ_d v_d v_dᵀ g_d², row by row.
func diffusion(s sde.System, x []float64) []float64 {
	n, directions := s.Dimension(), s.Directions()
	g, out := make([]float64, len(directions)), make([]float64, n*n)
	s.Noise(g, x)
	for d, v := range directions {
		for i := range n {
			for k := range n {
				out[i*n+k] += v[i] * v[k] * g[d] * g[d]
			}
		}
	}
	return out
}

// firings gives Σ_r a_r E[J] and Σ_r a_r E[JJᵀ] at whole counts, from the exact engine's
// propensities, with J = ν + bursts, each burst of mean m of the variance m(1+m) (the geometric
// law's, common practice).
func firings(net *model.Network, counts []int64) (drift, square []float64) {
	n := len(net.Species)
	drift, square = make([]float64, n), make([]float64, n*n)
	for r := range net.Reactions {
		a, mean := net.Propensity(r, counts), make([]float64, n)
		for _, c := range net.Reactions[r].Net {
			mean[c.Species] += float64(c.Count)
		}
		for _, b := range net.Reactions[r].Bursts {
			mean[b.Species] += b.Burst
			square[b.Species*n+b.Species] += a * b.Burst * (1 + b.Burst)
		}
		for i := range n {
			drift[i] += a * mean[i]
			for k := range n {
				square[i*n+k] += a * mean[i] * mean[k]
			}
		}
	}
	return drift, square
}

// However the noise is merged, drift and diffusion matrix at whole counts are those of the exact
// process (Gillespie, J. Chem. Phys. 113 (2000) 297), to 1e-12 of the largest entry; and as
// few normal numbers are taken as the directions allow.
func TestDriftAndDiffusion(t *testing.T) {
	for _, c := range []struct {
		net        *model.Network
		directions int
	}{
		{zoo.Latch(100), 2},
		{zoo.Schlogl(), 1},
		{zoo.SymmetricRepression(6, 100), 2},
		{zoo.DimerSwitch(), 8},
		{zoo.BurstExpression(1, 20, 0.1), 1},
		{zoo.BatchesOfFive(), 1},
		{mixed(t), 3},
	} {
		s := sde.Chemical(c.net)
		if got := len(s.Directions()); got != c.directions {
			t.Errorf("%s: %d directions, want %d", c.net.Title, got, c.directions)
		}
		n := s.Dimension()
		counts, x, dx := make([]int64, n), make([]float64, n), make([]float64, n)
		for i := range counts {
			counts[i] = int64(3 + 7*i)
			x[i] = float64(counts[i])
		}
		drift, square := firings(c.net, counts)
		s.Drift(dx, x)
		alike(t, c.net.Title+", drift", dx, drift)
		alike(t, c.net.Title+", diffusion", diffusion(s, x), square)
	}
}

func alike(t *testing.T, what string, got, want []float64) {
	t.Helper()
	size := 0.0
	for _, v := range want {
		size = max(size, math.Abs(v))
	}
	for i := range want {
		if !(math.Abs(got[i]-want[i]) <= 1e-12*size) {
			t.Errorf("%s, entry %d: %v, want %v", what, i, got[i], want[i])
		}
	}
}

// mixed is a reaction with two burst products and one whole one, and losses.
func mixed(t *testing.T) *model.Network {
	t.Helper()
	d := model.Draft{
		Title: "mixed", Copies: 1, Species: []model.Species{{Name: "a"}, {Name: "b"}},
		Reactions: []model.DraftReaction{
			{Name: "both", MassAction: model.Number(2), Makes: []model.Term{{Species: 0, Burst: 4}, {Species: 1, Burst: 3}, {Species: 1, Count: 1}}},
			{Name: "lose a", MassAction: model.Number(0.3), Uses: []model.Term{{Species: 0, Count: 1}}},
			{Name: "lose two b", MassAction: model.Number(0.1), Uses: []model.Term{{Species: 1, Count: 2}}},
		},
	}
	net, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return net
}

// The modes of the latch at its high state are those of [[−b, h'], [k, −a]] with h' the slope
// of x²/(1+x²), 2x/(1+x²)²: λ = −(a+b)/2 ± √((a−b)²/4 + k h') (algebra). The step is 0.02 over
// the largest, the largest good one 1 over it; to 1e-6, far above the error of differences.
func TestStepFor(t *testing.T) {
	const a, b = 0.45, 1
	state := zoo.LatchStates()[2]
	x := state[1]
	slope := 2 * x / ((1 + x*x) * (1 + x*x))
	fastest := (a+b)/2 + math.Sqrt((a-b)*(a-b)/4+slope)
	s := sde.Chemical(zoo.Latch(100))
	point := []float64{100 * state[0], 100 * state[1]}
	if got, want := sde.StepFor(s, []float64{0, 0}, point), 0.02/fastest; math.Abs(got/want-1) > 1e-6 {
		t.Errorf("step %v, want %v", got, want)
	}
	if got, want := sde.LargestStep(s, point), 1/fastest; math.Abs(got/want-1) > 1e-6 {
		t.Errorf("largest step %v, want %v", got, want)
	}
	if got := sde.StepFor(s); !math.IsInf(got, 1) {
		t.Errorf("without points, step %v", got)
	}
	// A focus with λ = −1 ± 3i: 1/10.
	if got := sde.LargestStep(focus{}, []float64{1, 1}); math.Abs(got-0.1) > 1e-7 {
		t.Errorf("focus: largest step %v, want 0.1", got)
	}
}

// focus is a stable spiral, reflected at −2 and 2.
type focus struct{}

func (focus) Dimension() int                { return 2 }
func (focus) Directions() [][]float64       { return [][]float64{{1, 0}, {0, 1}} }
func (focus) Bounds() (low, high []float64) { return []float64{-2, -2}, []float64{2, 2} }
func (focus) Drift(dx, x []float64)         { dx[0], dx[1] = -x[0]-3*x[1], 3*x[0]-x[1] }
func (focus) Noise(g, _ []float64)          { g[0], g[1] = 3, 3 }

// Paths stay within a system's own bounds, and meet both.
func TestBounds(t *testing.T) {
	low, high := math.Inf(1), math.Inf(-1)
	p := sde.Plan{System: focus{}, Start: []float64{2, -2}, From: -1, Runs: 4, Step: 0.05, Until: 50}
	for k := range 1000 {
		p.Times = append(p.Times, float64(k)*0.05)
	}
	p.Threads = 1
	p.Sample = func(_, _ int, _ float64, x []float64) {
		low, high = min(low, x[0], x[1]), max(high, x[0], x[1])
	}
	run(t, p)
	if low < -2 || high > 2 || low > -1.9 || high < 1.9 {
		t.Errorf("paths went from %v to %v, bounds are −2 and 2", low, high)
	}
}

// A reaction split in two of half the rate is the same equation on the same random numbers.
func TestSplitReaction(t *testing.T) {
	build := func(parts int) *model.Network {
		d := model.Draft{Copies: 10, Species: []model.Species{{Name: "x", Start: 5}}}
		for range parts {
			d.Reactions = append(d.Reactions, model.DraftReaction{
				Name: "made", Rate: model.Number(4 / float64(parts)), Makes: []model.Term{{Species: 0, Count: 1}},
			})
		}
		d.Reactions = append(d.Reactions, model.DraftReaction{Name: "lost", MassAction: model.Number(0.5), Uses: []model.Term{{Species: 0, Count: 1}}})
		net, err := d.Bind(0, nil)
		if err != nil {
			t.Fatal(err)
		}
		return net
	}
	p := sde.Plan{System: sde.Chemical(build(1)), From: -1, Runs: 5, MaxSteps: 500, Step: 0.02}
	whole := run(t, p)
	p.System = sde.Chemical(build(2))
	for i, o := range run(t, p).Outcomes {
		if want := whole.Outcomes[i].State[0]; math.Abs(o.State[0]-want) > 1e-9*want {
			t.Errorf("run %d: %v in halves, %v whole", i, o.State[0], want)
		}
	}
}
