package sde_test

import (
	"context"
	"fmt"
	"math"
	"strings"
	"testing"

	"holdfast/model"
	"holdfast/sde"
)

// immigration is ∅→a at a rate or in bursts that the text says, and a→∅ at rate 1.
func immigration(t testing.TB, start float64, constant, birth string) *model.Network {
	t.Helper()
	d, err := model.Parse("birth.toml", fmt.Appendf(nil, `time = "min"
[species]
a = { start = %v }
[constants]
k = %s
[[reaction]]
name = "birth"
%s
[[reaction]]
name = "death"
uses = { a = 1 }
mass_action = 1
`, start, constant, birth))
	if err != nil {
		t.Fatal(err)
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// seen gives the coordinate of runs at a time.
func seen(t testing.TB, p sde.Plan, time float64) []float64 {
	t.Helper()
	x := make([]float64, p.Runs)
	p.From, p.Until, p.Times = -1, time, []float64{time}
	p.Sample = func(run, _ int, _ float64, at []float64) { x[run] = at[0] }
	if _, err := sde.Run(context.Background(), p); err != nil {
		t.Fatal(err)
	}
	return x
}

// holds checks a sample's mean and variance. Its statistics are their distances in
// standard errors, that of the variance from the sample's own fourth moment; beyond
// 5.5 they fail, by chance once in 10⁷ if they were normal.
func holds(t *testing.T, what string, x []float64, mean, variance float64) {
	t.Helper()
	n, m, v, fourth := float64(len(x)), 0.0, 0.0, 0.0
	for _, a := range x {
		m += a / n
	}
	for _, a := range x {
		v += (a - m) * (a - m) / n
		fourth += math.Pow(a-m, 4) / n
	}
	zm, zv := (m-mean)*math.Sqrt(n/variance), (v-variance)*math.Sqrt(n/(fourth-v*v))
	t.Logf("%s: mean %.4g (%.4g), variance %.4g (%.4g): %.2f and %.2f standard errors", what, m, mean, v, variance, zm, zv)
	if !(math.Abs(zm) < 5.5 && math.Abs(zv) < 5.5) {
		t.Errorf("%s: mean %v, want %v (%.1f standard errors); variance %v, want %v (%.1f)", what, m, mean, zm, v, variance, zv)
	}
}

// step is that of the tests here; its scheme gives the noise of births and deaths,
// whose own variance is the mean, 1/(1−step/2) times that (exact for a linear scheme).
const step = 0.02

// The equation of immigration at a rate k that each cell draws for itself has the mean
// M and, by the law of total variance, the variance M + M²(e^(s²)−1), M = k e^(s²/2),
// as the counts have, its noise being exact in mean and variance where rates are
// linear. n = 15,000; seen after 12 times 1/γ.
func TestFrozenBirthRate(t *testing.T) {
	long(t)
	const k, s = 30.0, 0.2
	for _, birth := range []string{`makes = { a = 1 }` + "\nmass_action = \"k\"", `makes = { a = 1 }` + "\nrate = \"k\""} {
		net := immigration(t, k, "{ value = 30.0, spread = 0.2 }", birth)
		mean := k * math.Exp(s*s/2)
		x := seen(t, sde.Plan{System: sde.Chemical(net), Runs: 15_000, Seed: 1, Step: step}, 12)
		holds(t, birth, x, mean, mean/(1-step/2)+mean*mean*math.Expm1(s*s))
	}
}

// Bursts of a mean b that each cell draws for itself: given b the mean is b times the
// rate r and the variance rb(1+b) (Thattai, van Oudenaarden, PNAS 98 (2001) 8614, limit
// of their law, from memory). With Mᵢ = bⁱ e^(i²s²/2) the mean is rM₁ and the variance
// r(M₁+M₂) + r²(M₂−M₁²). n = 15,000.
func TestFrozenBurst(t *testing.T) {
	const r, b, s = 20.0, 3.0, 0.2
	net := immigration(t, r*b, "{ value = 3.0, spread = 0.2 }", "makes = { a = { burst = \"k\" } }\nmass_action = 20")
	m1, m2 := b*math.Exp(s*s/2), b*b*math.Exp(2*s*s)
	x := seen(t, sde.Plan{System: sde.Chemical(net), Runs: 15_000, Seed: 2, Step: step}, 12)
	holds(t, "bursts", x, r*m1, r*(m1+m2)/(1-step/2)+r*r*(m2-m1*m1))
}

// Immigration at a rate that varies in time: the covariance M²(e^(s²ρ)−1), ρ =
// e^(−t/memory), is a series of exponentials; held for an interval Δ from a random
// moment on, it is the chord between whole multiples of Δ, and the filter e^(−t) makes
// of it, for each term with r = e^(−kΔ/memory), M²(Δ−1+q + (q+1/q−2)qr/(1−qr))/Δ with q =
// e^(−Δ) (derived in the exact engine's test). n = 15,000.
func TestModulatedBirthRate(t *testing.T) {
	long(t)
	const k, s = 30.0, 0.4
	for _, c := range []struct{ memory, interval, held float64 }{{0.8, 0, 0.04}, {1, 0, 0.05}, {1, 2, 2}, {20, 0, 1}} {
		net := immigration(t, k, fmt.Sprintf("{ value = 30.0, spread = 0.4, memory = %v }", c.memory), "makes = { a = 1 }\nrate = \"k\"")
		mean := k * math.Exp(s*s/2)
		variance, term, q := mean/(1-step/2), 1.0, math.Exp(-c.held)
		for i := 1.0; i < 50; i++ {
			term *= s * s / i
			r := q * math.Exp(-i*c.held/c.memory)
			variance += term * mean * mean / c.held * (c.held - 1 + q + (q+1/q-2)*r/(1-r))
		}
		p := sde.Plan{System: sde.Chemical(net), Runs: 15_000, Seed: 3, Step: step, Interval: c.interval}
		holds(t, fmt.Sprintf("memory %v, interval %v", c.memory, c.held), seen(t, p, 12), mean, variance)
	}
}

// Threads and lanes change nothing where constants vary, in a network with a half, an
// exponent and a factor that do; halving the interval and the step does.
func TestVariedSameRuns(t *testing.T) {
	for _, memory := range []string{"", ", memory = 2.0"} {
		net := immigration(t, 20, "{ value = 20.0, spread = 0.3"+memory+" }", "makes = { a = 1 }\nrate = \"k*hill(k, a, k/20) + k*a^2/(k^2 + a^2)\"")
		p := sde.Plan{System: sde.Chemical(net), Runs: 40, Seed: 4, Until: 3, From: -1, Threads: 1, Lanes: 1}
		want := outcomes(t, p)
		for _, threads := range []int{1, 2, 7} {
			for _, lanes := range []int{0, 3, 40} {
				p.Threads, p.Lanes = threads, lanes
				if outcomes(t, p) != want {
					t.Errorf("memory %q: %d threads of %d lanes give other paths", memory, threads, lanes)
				}
			}
		}
		p.Interval = 0.01
		if (outcomes(t, p) == want) != (memory == "") {
			t.Errorf("memory %q: another interval", memory)
		}
	}
}

func outcomes(t *testing.T, p sde.Plan) string {
	t.Helper()
	r, err := sde.Run(context.Background(), p)
	if err != nil {
		t.Fatal(err)
	}
	return fmt.Sprint(r.Outcomes)
}

// A rate that a cell's own constant makes negative stops that cell's path, with the
// reaction named; other cells go on.
func TestVariedNotFinite(t *testing.T) {
	net := immigration(t, 20, "{ value = 1.0, spread = 0.5 }", "makes = { a = 1 }\nrate = \"k - 0.7\"")
	r, err := sde.Run(context.Background(), sde.Plan{System: sde.Chemical(net), Runs: 40, Seed: 4, Until: 1, From: -1})
	if err != nil || r.Lost == 0 || r.Lost == 40 {
		t.Fatalf("%d lost: %v", r.Lost, err)
	}
	for i := range r.Outcomes {
		if o := &r.Outcomes[i]; o.Ending == sde.NotFinite && !strings.Contains(o.Err().Error(), `"birth"`) {
			t.Errorf("run %d: %v", i, o.Err())
		}
	}
}

func TestBadVariation(t *testing.T) {
	mixed := immigration(t, 20, "{ value = 3.0, spread = 0.5 }", "makes = { a = { burst = \"k\" } }\nuses = { a = 1 }\nmass_action = 1")
	for _, p := range []sde.Plan{
		{System: sde.Chemical(mixed), Runs: 1, From: -1, Until: 1},
		{System: sde.Chemical(immigration(t, 20, "1.0", "makes = { a = 1 }\nrate = \"k\"")), Interval: -1, Runs: 1, From: -1, Until: 1},
	} {
		if _, err := sde.Run(context.Background(), p); err == nil {
			t.Errorf("accepted: interval %v", p.Interval)
		} else {
			t.Log(err)
		}
	}
}
