package ssa_test

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"holdfast/internal/race"
	"holdfast/internal/variation"
	"holdfast/model"
	"holdfast/ssa"
)

// immigration is ∅→A at rate k, which varies, and A→∅ at rate γ.
func immigration(t testing.TB, k model.Constant, gamma float64) *model.Network {
	t.Helper()
	k.Name = "k"
	d := model.Draft{
		TimeUnit: "min", Copies: 1,
		Species:   []model.Species{{Name: "a", Start: math.Round(k.Value / gamma)}},
		Constants: []model.Constant{{Name: "gamma", Value: gamma}, k},
		Reactions: []model.DraftReaction{
			{Name: "birth", Makes: []model.Term{{Species: 0, Count: 1}}, MassAction: model.ConstantRef(1)},
			{Name: "death", Uses: []model.Term{{Species: 0, Count: 1}}, MassAction: model.ConstantRef(0)},
		},
	}
	return bind(t, &d)
}

func bind(t testing.TB, d *model.Draft) *model.Network {
	t.Helper()
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// holds checks a sample's mean and variance against those of its law. Its statistics
// are the mean's and the variance's distances in standard errors, that of the variance
// from the sample's own fourth moment; beyond 5.5 they fail, by chance once in 10⁷ if
// they were normal.
func holds(t *testing.T, what string, x []int64, mean, variance float64) {
	t.Helper()
	m, v := moments(x)
	n, fourth := float64(len(x)), 0.0
	for _, k := range x {
		fourth += math.Pow(float64(k)-m, 4) / n
	}
	zm, zv := (m-mean)*math.Sqrt(n/variance), (v-variance)*math.Sqrt(n/(fourth-v*v))
	t.Logf("%s: mean %.4g (%.4g), variance %.4g (%.4g): %.2f and %.2f standard errors", what, m, mean, v, variance, zm, zv)
	if !(math.Abs(zm) < 5.5 && math.Abs(zv) < 5.5) {
		t.Errorf("%s: mean %v, want %v (%.1f standard errors); variance %v, want %v (%.1f)", what, m, mean, zm, v, variance, zv)
	}
}

// at gives the counts of runs at a time.
func at(t testing.TB, p ssa.Plan, time float64) []int64 {
	t.Helper()
	return course(t, p, 0, []float64{time})[0]
}

// A birth rate k that each cell draws for itself makes the stationary count Poisson
// given k, so by the law of total variance its mean is M/γ and its variance
// M/γ + Var k/γ², with M = k e^(s²/2) and Var k = M²(e^(s²)−1) (log-normal moments;
// textbook). n = 10,000; started at the median and seen after 12/γ, when e^(−12) of the
// start is left.
func TestFrozenBirthRate(t *testing.T) {
	long(t)
	for _, m := range methods {
		const k, s, gamma = 20.0, 0.3, 1.0
		p := ssa.Plan{Network: immigration(t, model.Constant{Value: k, Spread: s}, gamma), Runs: 10_000, Seed: 1, Method: m}
		mean := k * math.Exp(s*s/2) / gamma
		holds(t, fmt.Sprint(m), at(t, p, 12), mean, mean+mean*mean*math.Expm1(s*s))
	}
}

// modulated gives the variance of the stationary count of immigration at the rate
// X = k e^(sη) with death γ, η an Ornstein–Uhlenbeck process of unit variance and
// correlation time m. Given X the count is Poisson with the mean Λ = ∫X(t−u)e^(−γu)du,
// so the variance is E Λ + Var Λ. Cov(X(0), X(t)) = M²(e^(s²ρ)−1) = M² Σ_k s²ᵏ/k! ρᵏ,
// ρ = e^(−t/m), M = k e^(s²/2), and each exponential of rate r in a covariance gives
// Var Λ the share 1/(γ(γ+r)). (Derived here; the filter is textbook.)
func modulated(k, s, m, gamma float64) (mean, variance float64) {
	mean = k * math.Exp(s*s/2) / gamma
	return mean, mean + series(s, func(j float64) float64 { return mean * mean * gamma / (gamma + j/m) })
}

// stepped is the same where X is held for an interval Δ at a time from a random moment
// on: the covariance is then the chord of the exact one between whole multiples of Δ,
// a sum of hats there. With q = e^(−γΔ), the integral of e^(−γt) over the half hat at 0
// is (γΔ−1+q)/(γ²Δ), over that at lΔ it is qˡ(q+1/q−2)/(γ²Δ); with c = q e^(−kΔ/m) they
// sum to a geometric series.
func stepped(k, s, m, gamma, interval float64) (mean, variance float64) {
	mean = k * math.Exp(s*s/2) / gamma
	x := gamma * interval
	q := math.Exp(-x)
	return mean, mean + series(s, func(j float64) float64 {
		c := q * math.Exp(-j*interval/m)
		return mean * mean / x * (x + math.Expm1(-x) + (q+1/q-2)*c/(1-c))
	})
}

// series is Σ_k≥1 s²ᵏ/k! f(k).
func series(s float64, f func(k float64) float64) (sum float64) {
	term := 1.0
	for k := 1.0; k < 200; k++ {
		term *= s * s / k
		sum += term * f(k)
	}
	return sum
}

// Immigration whose rate varies in time, at memories from much shorter to much longer
// than the death's time. n = 10,000; seen at the end of an interval 12/γ or more after
// the start. Held for the default interval, the scheme's own variance differs from the
// process's by less than 0.2 %, which is checked too; held for a whole memory it does so
// by far more than the sampling error, and has to be the scheme's.
func TestModulatedBirthRate(t *testing.T) {
	if race.Enabled {
		t.Skip("many events")
	}
	long(t)
	const k, s, gamma = 20.0, 0.5, 1.0
	for _, c := range []struct{ memory, interval float64 }{{0.3, 0}, {1, 0}, {1, 1}, {1, 3}, {30, 0}} {
		net := immigration(t, model.Constant{Value: k, Spread: s, Memory: c.memory}, gamma)
		p := ssa.Plan{Network: net, Runs: 8_000, Seed: 2, Interval: c.interval}
		interval := c.interval
		if interval == 0 {
			interval = variation.DefaultInterval(net)
		}
		mean, variance := stepped(k, s, c.memory, gamma, interval)
		if _, exact := modulated(k, s, c.memory, gamma); c.interval == 0 && math.Abs(variance/exact-1) > 0.002 {
			t.Errorf("memory %v: the default interval's variance is %v, the process's %v", c.memory, variance, exact)
		}
		x := at(t, p, 12)
		holds(t, fmt.Sprintf("memory %v, interval %v", c.memory, interval), x, mean, variance)
	}
}

// The two ends of the memory: one much shorter than the network's time averages out,
// so that the count is Poisson; one much longer is as good as none.
func TestMemoryLimits(t *testing.T) {
	long(t)
	const k, s, gamma = 20.0, 0.5, 1.0
	mean := k * math.Exp(s*s/2) / gamma
	if _, v := modulated(k, s, 1e-9, gamma); math.Abs(v/mean-1) > 1e-6 {
		t.Errorf("memory → 0: variance %v, mean %v", v, mean)
	}
	if _, v := modulated(k, s, 1e9, gamma); math.Abs(v/(mean+mean*mean*math.Expm1(s*s))-1) > 1e-6 {
		t.Errorf("memory → ∞: variance %v", v)
	}
	frozen := ssa.Plan{Network: immigration(t, model.Constant{Value: k, Spread: s}, gamma), Runs: 200, Seed: 3}
	slow := frozen
	slow.Network = immigration(t, model.Constant{Value: k, Spread: s, Memory: 1e12}, gamma)
	if a, b := at(t, frozen, 9), at(t, slow, 9); !slices.Equal(a, b) {
		t.Error("a memory without end does not give the runs of a constant that each cell keeps")
	}
}

// tangle is a network in which constants that vary stand everywhere: as a factor, in a
// sum, in a half, an exponent, a mass-action constant with a fixed one, and a burst.
func tangle(t testing.TB, spread, memory float64) *model.Network {
	t.Helper()
	text := fmt.Sprintf(`time = "min"
copies = 10
[species]
x = { start = 1 }
y = { start = 0.5, readout = true }
[constants]
fix = 1.5
k = { value = 1.0, spread = %[1]v%[2]s }
h = { value = 0.7, spread = %[1]v }
n = { value = 2.0, spread = %[1]v%[2]s }
b = { value = 3.0, spread = %[1]v%[2]s }
[[reaction]]
name = "make x"
makes = { x = 1 }
rate = "0.1 + k*hill(y, h, n)*fix + fix*x^2/(h^2 + x^2)"
[[reaction]]
name = "lose x"
uses = { x = 1 }
mass_action = "2*fix*h"
[[reaction]]
name = "make y"
needs = { x = 1 }
makes = { y = { burst = "b*fix" } }
mass_action = 0.2
[[reaction]]
name = "pair"
uses = { y = 2 }
mass_action = "k"
[[reaction]]
name = "lose y"
uses = { y = 1 }
rate = "k*y/(h + y)"
`, spread, memoryText(memory))
	d, err := model.Parse("tangle.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return bind(t, d)
}

func memoryText(memory float64) string {
	if memory == 0 {
		return ""
	}
	return fmt.Sprintf(", memory = %v", memory)
}

// The runs of a network whose constants vary, one by one, are those of a network that
// has the values which the run drew as its own constants: the same events by the kernel
// without tables over counts (which a network of this kind is run by), to rounding.
func TestFrozenIsBound(t *testing.T) {
	net := tangle(t, 0.4, 0)
	cell := variation.Of(net, 0).NewCell()
	p := ssa.Plan{Network: net, Runs: 20, Seed: 5, Point: 6, Group: 7, Until: 20, From: -1}
	whole := run(t, p)
	for i, o := range whole.Outcomes {
		cell.Begin(variation.Stream(5, 6, 7<<40|uint64(i)))
		own := p
		own.Network, own.Runs, own.FirstReplicate = rebound(t, net, cell.Values), 1, uint64(i)
		if one := run(t, own).Outcomes[0]; one.Events != o.Events || !slices.Equal(one.Counts, o.Counts) {
			t.Errorf("run %d: %d events to %v; with its constants bound %d to %v", i, o.Events, o.Counts, one.Events, one.Counts)
		}
	}
}

// rebound is the network with other values, which do not vary.
func rebound(t testing.TB, net *model.Network, values []float64) *model.Network {
	t.Helper()
	d, err := model.Parse("rebound.toml", []byte(net.Text))
	if err != nil {
		t.Fatal(err)
	}
	for i := range d.Constants {
		d.Constants[i] = model.Constant{Name: d.Constants[i].Name, Value: values[i]}
	}
	return bind(t, d)
}

// Threads, lanes and shards change nothing, in both methods, frozen and in time.
func TestVariedSameRuns(t *testing.T) {
	for _, memory := range []float64{0, 3} {
		for _, m := range methods {
			p := ssa.Plan{Network: tangle(t, 0.3, memory), Runs: 14, Seed: 8, Until: 40, From: -1, Method: m, Threads: 1}
			want := run(t, p).Outcomes
			for _, threads := range []int{2, 7} {
				p.Threads, p.Lanes = threads, threads
				if got := run(t, p).Outcomes; fmt.Sprint(got) != fmt.Sprint(want) {
					t.Errorf("memory %v, %v: %d threads give other runs", memory, m, threads)
				}
			}
			half := p
			half.Runs, half.FirstReplicate = 7, 7
			if got := run(t, half).Outcomes; fmt.Sprint(got) != fmt.Sprint(want[7:]) {
				t.Errorf("memory %v, %v: a shard gives other runs", memory, m)
			}
		}
	}
}

// oneLaw is a network of one species, starting at one molecule, whose law is the only
// reaction; k varies.
func oneLaw(t testing.TB, k model.Constant, uses, law string) *model.Network {
	t.Helper()
	text := fmt.Sprintf("time = \"min\"\n[species]\na = { start = 1 }\n[constants]\nk = { value = %v, spread = %v%s }\n"+
		"[[reaction]]\nname = \"r\"\n%s = { a = 1 }\nrate = %q\n", k.Value, k.Spread, memoryText(k.Memory), uses, law)
	d, err := model.Parse("law.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return bind(t, d)
}

// How runs end where constants vary.
func TestVariedEndings(t *testing.T) {
	moving := model.Constant{Value: 1, Spread: 0.5, Memory: 2}
	still := model.Constant{Value: 1, Spread: 0.5}
	for _, c := range []struct {
		what      string
		k         model.Constant
		uses, law string
		until     float64
		events    int64
		want      []ssa.Ending
	}{
		{"the last molecule goes", moving, "uses", "k*a", 0, 0, []ssa.Ending{ssa.Absorbed}},
		{"nothing happens until k is above 2", moving, "uses", "a*max(0, k - 2)", 0, 0, []ssa.Ending{ssa.Absorbed}},
		{"cells with k below 1 are stuck for ever", still, "uses", "a*max(0, k - 1)", 0, 0, []ssa.Ending{ssa.Absorbed}},
		{"some laws turn negative", moving, "makes", "k - 0.3", 0, 1_000_000, []ssa.Ending{ssa.BadRate}},
		{"some cells' laws are negative", still, "makes", "k - 0.7", 100, 0, []ssa.Ending{ssa.BadRate, ssa.Horizon}},
		{"the horizon is within an interval", moving, "makes", "k", 1.037, 0, []ssa.Ending{ssa.Horizon}},
		{"the budget is spent", moving, "makes", "k", 0, 5, []ssa.Ending{ssa.EventBudget}},
	} {
		for _, m := range methods {
			p := ssa.Plan{Network: oneLaw(t, c.k, c.uses, c.law), Runs: 40, From: -1, Seed: 4, Until: c.until, MaxEvents: c.events, Method: m}
			checkEndings(t, c.what, run(t, p), c.want, c.until)
		}
	}
}

func checkEndings(t *testing.T, what string, res ssa.Result, want []ssa.Ending, until float64) {
	t.Helper()
	seen := map[ssa.Ending]bool{}
	for _, o := range res.Outcomes {
		seen[o.Ending] = true
		if o.Ending == ssa.Horizon && o.Time != until {
			t.Errorf("%s: the horizon is at %v", what, o.Time)
		}
	}
	for _, e := range want {
		if !seen[e] {
			t.Errorf("%s: no run ended %v (%v)", what, e, seen)
		}
	}
	if len(seen) != len(want) {
		t.Errorf("%s: runs ended %v", what, seen)
	}
}

// A state in which nothing can happen at the constants of an interval, and not at
// their medians either, ends the run: k has to be above 2 for the reaction, and the
// medians are all that is asked. One that is alive at the medians waits.
func TestWaitsForConstants(t *testing.T) {
	k := model.Constant{Value: 3, Spread: 0.5, Memory: 2}
	p := ssa.Plan{Network: oneLaw(t, k, "uses", "a*max(0, k - 2)"), Runs: 200, From: -1, Seed: 4}
	for i, o := range run(t, p).Outcomes {
		if o.Ending != ssa.Absorbed || o.Counts[0] != 0 {
			t.Fatalf("run %d: %v with %d molecules", i, o.Ending, o.Counts[0])
		}
	}
}

// Bursts of a mean b that each cell draws for itself, made at rate 1 and lost one by
// one at rate 1: given b the stationary count has mean b and variance b(1+b) (negative
// binomial; the limit of two-stage expression in Thattai, van Oudenaarden, PNAS 98
// (2001) 8614, from memory). So the mean is M₁ and the variance M₁ + 2M₂ − M₁², with
// the moments Mᵢ = bⁱ e^(i²s²/2). n = 20,000.
func TestFrozenBurst(t *testing.T) {
	long(t)
	d, err := model.Parse("burst.toml", []byte(`time = "min"
[species]
a = { start = 4 }
[constants]
b = { value = 4.0, spread = 0.3 }
[[reaction]]
name = "make"
makes = { a = { burst = "b" } }
mass_action = 1
[[reaction]]
name = "lose"
uses = { a = 1 }
mass_action = 1
`))
	if err != nil {
		t.Fatal(err)
	}
	const s2 = 0.3 * 0.3
	m1, m2 := 4*math.Exp(s2/2), 16*math.Exp(2*s2)
	p := ssa.Plan{Network: bind(t, d), Runs: 20_000, Seed: 6}
	holds(t, "bursts", at(t, p, 14), m1, m1+2*m2-m1*m1)
}

// Flips of a two-state chain whose rate k each cell draws for itself: the dwell is
// exponential given k, so its mean is E[1/k] = e^(s²/2)/k and its variance
// 2E[1/k²] − E[1/k]² = (2e^(2s²) − e^(s²))/k². n = 20,000 dwells; beyond 5.5 standard
// errors the test fails.
func TestFrozenDwell(t *testing.T) {
	long(t)
	const k, s, n = 0.5, 0.4, 20_000
	p := ssa.Plan{
		Network: oneLaw(t, model.Constant{Value: k, Spread: s}, "uses", "k*a"), Runs: n, From: 0, Seed: 9,
		Cores: []model.Core{{State: "on", Low: []int64{1}, High: []int64{1}}, {State: "off", Low: []int64{0}, High: []int64{0}}},
	}
	sum := 0.0
	for _, o := range run(t, p).Outcomes {
		sum += o.Time / n
	}
	mean, variance := math.Exp(s*s/2)/k, (2*math.Exp(2*s*s)-math.Exp(s*s))/k/k
	if z := (sum - mean) / math.Sqrt(variance/n); !(math.Abs(z) < 5.5) {
		t.Errorf("mean dwell %v, want %v: %.1f standard errors", sum, mean, z)
	}
}
