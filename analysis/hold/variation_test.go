package hold_test

import (
	"context"
	"errors"
	"fmt"
	"math"
	"strings"
	"testing"

	"holdfast/analysis/hold"
	"holdfast/internal/race"
	"holdfast/model"
)

// chain is a design of two declared states, off and on, which it leaves at rates k and
// j; constants are as written.
func chain(t testing.TB, k, j string) *model.Network {
	t.Helper()
	d, err := model.Parse("chain.toml", fmt.Appendf(nil, `title = "chain"
time = "min"
generation = 1.0
[species]
gate = { start = 0, fixed_count = true }
[constants]
k = %s
j = %s
[[reaction]]
name = "on"
makes = { gate = 1 }
rate = "k*max(0, 1 - gate)"
[[reaction]]
name = "off"
uses = { gate = 1 }
mass_action = "j"
[core.off]
gate = { max = 0 }
[core.on]
gate = { min = 1, max = 1 }
`, k, j))
	if err != nil {
		t.Fatal(err)
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// mixed is the job whose intervals the coverage test looks at.
func mixed(t testing.TB, network *model.Network, seed uint64, runs int64) *hold.Report {
	t.Helper()
	r, err := hold.Run(context.Background(), network, hold.Options{Runs: runs, Seed: seed, Threads: 1})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// Coverage: a two-state chain whose rate k each cell draws for itself, log-normal of
// spread s = 0.4, dwells for E[1/k] = e^(s²/2)/k on average and holds for the time t with
// the chance E[e^(−kt)], here by quadrature over the normal law. 200 flips a job, 500
// jobs: a 95 % interval holds its truth in 475 ± 4.9, and fewer than 448 are seen by
// chance once in 10⁷ (5.5 standard errors); more than 500 are not.
func TestMixedCoverage(t *testing.T) {
	if race.Enabled {
		t.Skip("a calibration")
	}
	const k, s, jobs = 0.5, 0.4, 500
	network := chain(t, "{ value = 0.5, spread = 0.4 }", "1.0")
	mean, chance := math.Exp(s*s/2)/k, survives(k, s, 10)
	means, chances := 0, 0
	for seed := range uint64(jobs) {
		row := mixed(t, network, seed, 200).Dwells[0]
		if float64(row.Low) <= mean && mean <= float64(row.High) {
			means++
		}
		if h := row.Holds[0]; float64(h.Low) <= chance && chance <= float64(h.High) {
			chances++
		}
	}
	t.Logf("of %d intervals %d hold the mean, %d the chance of holding", jobs, means, chances)
	if means < 448 || chances < 448 {
		t.Errorf("of %d intervals %d hold the mean, %d the chance of holding", jobs, means, chances)
	}
}

// survives is E[e^(−k·e^(sη)·t)] by the trapezoidal rule, which is exact to rounding for
// such integrands.
func survives(k, s, t float64) (sum float64) {
	const h = 1. / 64
	for x := -9.0; x <= 9; x += h {
		sum += h * math.Exp(-x*x/2-k*math.Exp(s*x)*t) / math.Sqrt(2*math.Pi)
	}
	return sum
}

// What the report says of constants that vary.
func TestVariationReport(t *testing.T) {
	r := mixed(t, chain(t, "{ value = 0.5, spread = 0.4, memory = 20.0 }", "{ value = 1.0, spread = 0.2 }"), 1, 500)
	v := r.Variation
	if v == nil || len(v.Constants) != 2 || len(v.States) != 2 || v.Interval != 1 {
		t.Fatalf("variation %+v", v)
	}
	if c := v.Constants[1]; c.Name != "j" || c.Spread != 0.2 || !math.IsNaN(float64(c.Memory)) {
		t.Errorf("constant %+v", c)
	}
	if !strings.HasPrefix(r.Route, "runs: ") || !strings.Contains(r.Route, "k, j") {
		t.Errorf("route %q", r.Route)
	}
	for _, s := range v.States {
		if s.Runs != 500 || !(math.Abs(float64(s.Change)) < 5.5*float64(s.Sampling)) || !(s.Sampling > 0.03 && s.Sampling < 0.2) {
			t.Errorf("halving the interval: %+v", s)
		}
	}
	if text := strings.Join(r.Warnings, "\n"); !strings.Contains(text, "at their medians") || !strings.Contains(text, "mixture") {
		t.Errorf("warnings %s", text)
	}
}

// A memory much longer than the dwells gives the frozen mixture, one much shorter the
// mean rate k e^(s²/2), to the share k·memory·(e^(s²)−1), 1.4 %, to its first order. 2,000
// flips each; beyond 5.5 of the row's standard errors of 2.2 % the test fails.
func TestMixedLimits(t *testing.T) {
	const k, s = 0.5, 0.5
	for _, c := range []struct {
		memory string
		mean   float64
	}{{"", math.Exp(s*s/2) / k}, {", memory = 1e6", math.Exp(s*s/2) / k}, {", memory = 0.1", math.Exp(-s*s/2) / k}} {
		row := mixed(t, chain(t, "{ value = 0.5, spread = 0.5"+c.memory+" }", "1.0"), 3, 2000).Dwells[0]
		if z := (float64(row.Mean) - c.mean) / float64(row.StandardError); !(math.Abs(z) < 5.5) {
			t.Errorf("memory %q: mean dwell %v, want %v: %.1f standard errors", c.memory, row.Mean, c.mean, z)
		}
	}
}

// Cells that cannot flip: where max(0, k − 0.4) is 0 the chain stays off for ever, while
// heat goes on being made. Such runs are cut off by their budget, nothing hangs, and the
// report says so.
func TestCellsThatNeverFlip(t *testing.T) {
	text := chain(t, "{ value = 0.5, spread = 0.4 }", "1.0").Text
	text = strings.Replace(text, "k*max(0, 1 - gate)", "max(0, k - 0.4)*max(0, 1 - gate)", 1)
	text = strings.Replace(text, "[constants]", "heat = { start = 0 }\n[constants]", 1) + `
[[reaction]]
name = "warm"
makes = { heat = 1 }
mass_action = 1
[[reaction]]
name = "cool"
uses = { heat = 1 }
mass_action = 1
`
	d, err := model.Parse("stuck.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	r, err := hold.Run(context.Background(), n, hold.Options{Events: 400_000, Seed: 1})
	if err != nil {
		t.Fatal(err)
	}
	if text := strings.Join(r.Warnings, "\n"); !strings.Contains(text, "leave no way out of it") {
		t.Errorf("warnings %s", text)
	}
}

// Routes that know no variation are refused before any work, and options that make no
// sense.
func TestVariationRefused(t *testing.T) {
	varied, plain := chain(t, "{ value = 0.5, spread = 0.4 }", "1.0"), chain(t, "0.5", "1.0")
	brief := chain(t, "{ value = 0.5, spread = 0.4, memory = 1e-6 }", "1.0")
	for _, c := range []struct {
		network *model.Network
		options hold.Options
		words   string
	}{
		{varied, hold.Options{Route: hold.Lattice}, "medians only"},
		{varied, hold.Options{Second: hold.Lattice}, "second is"},
		{varied, hold.Options{Interval: 1}, "no constant of this design varies in time"},
		{plain, hold.Options{Interval: 1}, "no constant of this design varies in time"},
		{plain, hold.Options{Interval: -1}, "interval is -1"},
		{brief, hold.Options{}, "averages out"},
	} {
		_, err := hold.Run(context.Background(), c.network, c.options)
		if err == nil || !strings.Contains(err.Error(), c.words) {
			t.Errorf("%+v: %v", c.options, err)
		}
		var option *hold.OptionError
		if c.network != brief && !errors.As(err, &option) {
			t.Errorf("%+v: %T", c.options, err)
		}
	}
}
