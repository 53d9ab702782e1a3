package branch

import (
	"math"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// slope is the least-squares slope of y against x.
func slope(x, y []float64) float64 {
	mx, my := 0.0, 0.0
	for i := range x {
		mx += x[i] / float64(len(x))
		my += y[i] / float64(len(y))
	}
	num, den := 0.0, 0.0
	for i := range x {
		num += (x[i] - mx) * (y[i] - my)
		den += (x[i] - mx) * (x[i] - mx)
	}
	return num / den
}

// approach surveys nothing: it gives the stable state of the network's upper branch
// at distances d below its fold in the knob, one branch point for each.
func approach(t *testing.T, build func(v float64) *model.Network, knob string, fold Mark, distances []float64) []Point {
	t.Helper()
	var out []Point
	for _, d := range distances {
		v := fold.Knob - d
		diagram := follow(t, build(v), knob, v, fold.Knob+d)
		w := diagram.Windows[len(diagram.Windows)-1]
		if w.State != "high" || w.High.Mark.Kind != Fold {
			t.Fatalf("at %v the last window is %s ending at %v", v, w.State, w.High.Mark.Kind)
		}
		near(t, "the fold from nearby", w.High.Knob, fold.Knob, located)
		for _, p := range diagram.Branches[w.Branch].Points {
			if p.Knob == v && p.Stable && p.Amounts[0] > fold.Amounts[0] {
				out = append(out, p)
				break
			}
		}
	}
	if len(out) != len(distances) {
		t.Fatalf("%d points for %d distances", len(out), len(distances))
	}
	return out
}

// Near a fold the slow rate vanishes as the root of the distance (Dykman and
// Krivoglaz, Physica A 104 (1980) 480; from memory) and the variance grows as its
// inverse. The next order is a share of about √distance, 0.3 to 10 thousandths over
// the three decades of the fit: the exponents, fitted to that, are within 1 %.
func TestSlowRateAndVarianceNearAFold(t *testing.T) {
	build := func(b float64) *model.Network {
		n, err := zoo.Latch(100).Rebind(0, map[string]float64{"b": b})
		if err != nil {
			t.Fatal(err)
		}
		return n
	}
	folds := follow(t, zoo.Latch(100), "b", 0.2, 2).Folds()
	fold := folds[len(folds)-1]
	distances := []float64{1e-4, 3e-5, 1e-5, 3e-6, 1e-6, 3e-7, 1e-7}
	var d, rate, variance []float64
	for i, p := range approach(t, build, "b", fold, distances) {
		d = append(d, math.Log(distances[i]))
		rate = append(rate, math.Log(p.SlowRate))
		variance = append(variance, math.Log(p.Covariance[3]))
		// The normal form's coefficient, to the next order: a share √distance.
		near(t, "slow rate over c√d", p.SlowRate/(fold.RateCoefficient*math.Sqrt(distances[i])), 1, 3*math.Sqrt(distances[i]))
		near(t, "correlation time", p.CorrelationTime(), 1/p.SlowRate, 1e-15)
	}
	near(t, "exponent of the slow rate", slope(d, rate), 0.5, 0.01)
	near(t, "exponent of the variance", slope(d, variance), -0.5, 0.01)
}

// For one species the linear noise is in closed form: variance = (production +
// loss)/(2·slow rate) in molecules (van Kampen; birth and death of single molecules).
func TestVarianceAlongABranch(t *testing.T) {
	const copies, s = 40, 0.05
	d := follow(t, zoo.LeakyActivator(0.5, s, copies), "r", 0.05, 2)
	stable := 0
	for _, b := range d.Branches {
		for _, p := range b.Points {
			if !p.Stable {
				if p.Covariance != nil {
					t.Errorf("a covariance at an unstable point, r = %v", p.Knob)
				}
				continue
			}
			stable++
			x := p.Amounts[0]
			lambda := p.Knob - 2*x/((1+x*x)*(1+x*x))
			near(t, "slow rate", p.SlowRate, lambda, 1e-9/lambda)
			near(t, "variance", p.Covariance[0], copies*p.Knob*x/lambda, 1e-9/lambda)
			near(t, "deviation", p.SD(0), math.Sqrt(copies*p.Knob*x/lambda), 1e-9/lambda)
		}
	}
	if stable < 20 {
		t.Errorf("%d stable points only", stable)
	}
}
