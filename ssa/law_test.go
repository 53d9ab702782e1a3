package ssa_test

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"

	"holdfast/internal/race"
	"holdfast/internal/zoo"
	"holdfast/model"
	"holdfast/ssa"
)

// alarm is the chance that a test of a law here fails although all is right.
const alarm = 1e-6

// long leaves a test of a law, with its many million events, to the run without the
// race detector.
func long(t *testing.T) {
	t.Helper()
	if race.Enabled {
		t.Skip("long under the race detector")
	}
}

// stationary samples a species once in each of n runs at a time when the law is
// stationary to within e^{−rate·time} of the start.
func stationary(t *testing.T, net *model.Network, species, n int, time float64, m ssa.Method) []int64 {
	t.Helper()
	return course(t, ssa.Plan{Network: net, Runs: n, Seed: 7, Method: m}, species, []float64{time})[0]
}

// fits holds a sample against the chances of counts 0, 1, …: χ² over cells of at
// least 20 expected, the last with all of the tail, at a false alarm of 1e-6.
func fits(t *testing.T, what string, sample []int64, chance []float64) {
	t.Helper()
	seen := map[int64]float64{}
	for _, n := range sample {
		seen[n]++
	}
	n := float64(len(sample))
	chi2, cells, want, got, left, leftSeen := 0.0, 0.0, 0.0, 0.0, n, n
	for k, p := range chance {
		want, got = want+n*p, got+seen[int64(k)]
		if want < 20 || left-want < 20 {
			continue
		}
		chi2 += (got - want) * (got - want) / want
		cells, left, leftSeen, want, got = cells+1, left-want, leftSeen-got, 0, 0
	}
	chi2 += (leftSeen - left) * (leftSeen - left) / left
	if p := (distuv.ChiSquared{K: cells}).Survival(chi2); p < alarm {
		t.Errorf("%s: χ² = %.1f at %v degrees of freedom, p = %.2g", what, chi2, cells, p)
	}
}

// telegraph is the stationary law of the telegraph model, Peccoud and Ycart,
// Theor. Popul. Biol. 48 (1995) 222, as the Poisson law of mean r·b with b of the
// beta law (up, down), averaged over b by Simpson's rule.
func telegraph(up, down, r float64, most int) []float64 {
	const steps = 4000
	law := distuv.Beta{Alpha: up, Beta: down}
	out := make([]float64, most)
	for i := 1; i < steps; i++ {
		b := float64(i) / steps
		weight := float64(2+2*(i%2)) / 3 / steps * law.Prob(b)
		for m := range out {
			gamma, _ := math.Lgamma(float64(m + 1))
			out[m] += weight * math.Exp(float64(m)*math.Log(r*b)-r*b-gamma)
		}
	}
	return out
}

func TestTelegraph(t *testing.T) {
	long(t)
	law, want := telegraph(4.3, 18.8, 103.8, 150), zoo.TelegraphStationary()
	// The published form's numbers, to their printed digits.
	if math.Abs(law[0]-want.P0) > 0.5e-8 || math.Abs(law[18]-want.P18) > 0.5e-7 {
		t.Errorf("P(0) = %v, P(18) = %v; want %v, %v", law[0], law[18], want.P0, want.P18)
	}
	for _, m := range methods {
		fits(t, m.String(), stationary(t, zoo.Telegraph(), 2, 20_000, 20, m), law)
	}
}

// Geometric bursts make a negative binomial law: P(n) ∝ Γ(k/loss+n)/n! qⁿ, q =
// burst/(1+burst) (common practice; by generating function).
func TestBursts(t *testing.T) {
	long(t)
	const k, burst, loss = 2.0, 5.0, 1.0
	q := burst / (1 + burst)
	law := make([]float64, 200)
	for n := range law {
		a, _ := math.Lgamma(k/loss + float64(n))
		b, _ := math.Lgamma(k / loss)
		c, _ := math.Lgamma(float64(n + 1))
		law[n] = math.Exp(a - b - c + float64(n)*math.Log(q) + k/loss*math.Log(1-q))
	}
	for _, m := range methods {
		fits(t, m.String(), stationary(t, zoo.BurstExpression(k, burst, loss), 0, 20_000, 30, m), law)
	}
}

// Poisson law of immigration–death at every time.
func TestImmigrationDeathLaw(t *testing.T) {
	long(t)
	law := make([]float64, 60)
	for n := range law {
		law[n] = distuv.Poisson{Lambda: 10 * -math.Expm1(-0.5)}.Prob(float64(n))
	}
	for _, m := range methods {
		fits(t, m.String(), stationary(t, zoo.ImmigrationDeath(1, 0.1), 0, 20_000, 5, m), law)
	}
}

// Mean and Fano factor of two-stage expression (Thattai and van Oudenaarden, PNAS
// 98 (2001) 8614, from memory), each within 4.9 standard errors (1e-6). That of a
// variance is taken from the sample's fourth moment.
func TestTwoStage(t *testing.T) {
	long(t)
	const n = 10_000
	mean, fano := zoo.TwoStageLaw(1, 1, 10, 0.5)
	for _, m := range methods {
		x := stationary(t, zoo.TwoStage(1, 1, 10, 0.5), 1, n, 40, m)
		got, variance := moments(x)
		fourth := 0.0
		for _, v := range x {
			fourth += math.Pow(float64(v)-got, 4) / n
		}
		if z := (got - mean) / math.Sqrt(variance/n); math.Abs(z) > 4.9 {
			t.Errorf("%v: mean %v, want %v, z = %.2f", m, got, mean, z)
		}
		if z := (variance - fano*mean) / math.Sqrt((fourth-variance*variance)/n); math.Abs(z) > 4.9 {
			t.Errorf("%v: Fano factor %v, want %v, z = %.2f", m, variance/got, fano, z)
		}
	}
}

// The chain of one-way conversions has multinomial counts; see zoo.ChainMean. The
// counts of a species are binomial: z of its sum over the runs within 4.9.
func TestChain(t *testing.T) {
	long(t)
	const n, k, molecules, runs, at = 100, 1.0, 50.0, 400, 20.0
	for _, m := range append(methods, ssa.Auto) {
		for _, i := range []int{5, 15, 20, 25, 40} {
			x := stationary(t, zoo.Chain(n, k, molecules), i, runs, at, m)
			mean, _ := moments(x)
			want := zoo.ChainMean(n, i, k, molecules, at)
			se := math.Sqrt(want * (1 - want/molecules) / runs)
			if want > 0.1 && math.Abs(mean-want) > 4.9*se {
				t.Errorf("%v: mean of s%d is %v, want %v ± %v", m, i, mean, want, se)
			}
		}
	}
}

// twoSample is χ² of two samples in cells of at least 40 together, by count.
func twoSample(t *testing.T, what string, a, b []int64) {
	t.Helper()
	var in [2]map[int64]float64
	most := int64(0)
	for i, x := range [][]int64{a, b} {
		in[i] = map[int64]float64{}
		for _, n := range x {
			in[i][n]++
			most = max(most, n)
		}
	}
	chi2, freedom, u, v := 0.0, -1.0, 0.0, 0.0
	for n := int64(0); n <= most; n++ {
		u, v = u+in[0][n], v+in[1][n]
		if u+v >= 40 || n == most && u+v > 0 {
			chi2 += (u - v) * (u - v) / (u + v)
			freedom, u, v = freedom+1, 0, 0
		}
	}
	if p := (distuv.ChiSquared{K: freedom}).Survival(chi2); p < alarm {
		t.Errorf("%s: χ² = %.1f at %v degrees of freedom, p = %.2g", what, chi2, freedom, p)
	}
}

// A network whose reactions stand in another order, or of which one is split in
// two halves, has the same law: two samples of n = 5000, χ² at 1e-6. So have the
// two methods.
func TestSameLaw(t *testing.T) {
	long(t)
	const n, at = 5000, 20.0
	net := zoo.Latch(10)
	for _, m := range methods {
		plain := course(t, ssa.Plan{Network: net, Runs: n, Seed: 1, Method: m}, 1, []float64{at})[0]
		for name, other := range map[string]*model.Network{"permuted": permuted(net), "split": split(net, 1)} {
			got := course(t, ssa.Plan{Network: other, Runs: n, Seed: 2, Method: m}, 1, []float64{at})[0]
			twoSample(t, fmt.Sprintf("%s, %v", name, m), plain, got)
		}
		auto := course(t, ssa.Plan{Network: net, Runs: n, Seed: 3}, 1, []float64{at})[0]
		twoSample(t, fmt.Sprintf("auto, %v", m), plain, auto)
	}
}

// permuted is the network with its reactions in reverse order.
func permuted(net *model.Network) *model.Network {
	return rebuilt(net, func(d []model.DraftReaction) (out []model.DraftReaction) {
		for i := range d {
			out = append(out, d[len(d)-1-i])
		}
		return out
	})
}

// split is the network with mass-action reaction r as two of half the rate.
func split(net *model.Network, r int) *model.Network {
	return rebuilt(net, func(d []model.DraftReaction) []model.DraftReaction {
		d[r].MassAction = model.Number(net.Reactions[r].Coefficient / 2)
		return append(d, d[r])
	})
}

func rebuilt(net *model.Network, change func([]model.DraftReaction) []model.DraftReaction) *model.Network {
	d := model.Draft{Copies: net.Copies, Species: net.Species}
	for _, re := range net.Reactions {
		dr := model.DraftReaction{Name: re.Name, Uses: re.Uses, Needs: re.Needs, Makes: re.Makes}
		if re.MassAction {
			dr.MassAction = model.Number(re.Coefficient)
		} else {
			dr.Rate = re.Law
		}
		d.Reactions = append(d.Reactions, dr)
	}
	d.Reactions = change(d.Reactions)
	n, err := d.Bind(0, nil)
	if err != nil {
		panic(err)
	}
	return n
}
