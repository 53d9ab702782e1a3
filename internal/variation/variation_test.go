package variation_test

import (
	"fmt"
	"math"
	"testing"

	"holdfast/internal/variation"
	"holdfast/model"
)

func network(t testing.TB, constants ...model.Constant) *model.Network {
	t.Helper()
	d := model.Draft{
		TimeUnit: "min", Copies: 1, Constants: constants, Species: []model.Species{{Name: "a"}},
		Reactions: []model.DraftReaction{{Name: "make", Makes: []model.Term{{Species: 0, Count: 1}}, MassAction: model.Number(1)}},
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

func TestNothingVaries(t *testing.T) {
	n := network(t, model.Constant{Name: "k", Value: 2, Uncertainty: 1})
	if variation.Of(n, 1) != nil || variation.DefaultInterval(n) != 0 {
		t.Error("a constant without spread varies")
	}
	frozen := network(t, model.Constant{Name: "k", Value: 2, Spread: 1})
	if l := variation.Of(frozen, 3); l == nil || l.Interval != 0 {
		t.Error("constants without memory have an interval")
	}
}

// The stationary law of the scheme: at every interval, ln(value/median)/spread is
// normal with mean 0 and variance 1, and at a lag of l intervals its correlation is
// ρˡ. Statistics, over 40,000 cells: mean, mean square less 1 and mean product less
// ρˡ at intervals 0, 1 and 5 over their standard errors 1, √2 and √(1+ρ²ˡ) by √n; each
// fails beyond 5.5 standard errors, by chance once in 2·10⁷.
func TestStationary(t *testing.T) {
	const cells, spread, memory, interval = 40_000, 0.7, 3.0, 1.2
	n := network(t, model.Constant{Name: "still", Value: 5}, model.Constant{Name: "k", Value: 2, Spread: spread, Memory: memory},
		model.Constant{Name: "f", Value: 3, Spread: 0.4})
	cell := variation.Of(n, interval).NewCell()
	var sum, square, product [6]float64
	phase := 0.0
	for i := range uint64(cells) {
		cell.Begin(variation.Stream(1, 2, i))
		phase += cell.First / cells
		first, frozen := 0.0, cell.Values[2]
		for l := range sum {
			x := math.Log(cell.Values[1]/2) / spread
			if l == 0 {
				first = x
			}
			sum[l], square[l], product[l] = sum[l]+x/cells, square[l]+x*x/cells, product[l]+first*x/cells
			cell.Step()
		}
		if cell.Values[0] != 5 || cell.Values[2] != frozen {
			t.Fatalf("cell %d: a constant that does not vary in time has moved: %v", i, cell.Values)
		}
	}
	root := math.Sqrt(cells)
	check := func(what string, z float64) {
		t.Helper()
		if !(math.Abs(z) < 5.5) {
			t.Errorf("%s: %.1f standard errors away", what, z)
		}
	}
	for _, l := range []int{0, 1, 5} {
		rho := math.Exp(-float64(l) * interval / memory)
		check(fmt.Sprint("mean after ", l), sum[l]*root)
		check(fmt.Sprint("variance after ", l), (square[l]-1)*root/math.Sqrt2)
		check(fmt.Sprint("correlation after ", l), (product[l]-rho)*root/math.Sqrt(1+rho*rho))
	}
	check("phase", (phase-0.5)*root*math.Sqrt(12))
}

// The share by which the integral of the covariance of e^(sη) is too large when it is
// held for the default interval, from its series: less than 1/2000 at any spread.
func TestDefaultInterval(t *testing.T) {
	for s := 0.01; s <= 3; s += 0.01 {
		n := network(t, model.Constant{Name: "k", Value: 1, Spread: s, Memory: 7}, model.Constant{Name: "slow", Value: 1, Spread: 0.1, Memory: 70_000})
		exact, held, term := 0.0, 0.0, 1.0
		x := variation.DefaultInterval(n) / 7
		for k := 1.0; k < 200; k++ {
			term *= s * s / k
			exact += term / k
			held += term * x / 2 / math.Tanh(k*x/2) // the chord's integral: (Δ/2)(1+ρ)/(1−ρ)
		}
		if share := held/exact - 1; !(share >= 0 && share < 1./2000) {
			t.Errorf("spread %.2f: the integral of the covariance is too large by %.2g", s, share)
		}
	}
}

const frozen = "0.4096627702971244 [1.856633773487113 3.116561024028846] [1.516242153207241 3.116561024028846]"

// A seed must mean the same cells in every later version.
func TestFrozenCells(t *testing.T) {
	n := network(t, model.Constant{Name: "k", Value: 2, Spread: 0.5, Memory: 10}, model.Constant{Name: "f", Value: 3, Spread: 0.5})
	cell := variation.Of(n, 0).NewCell()
	cell.Begin(variation.Stream(1, 2, 3))
	got := fmt.Sprintf("%.16g %.16g", cell.First, cell.Values)
	cell.Step()
	got += fmt.Sprintf(" %.16g", cell.Values)
	if got != frozen {
		t.Errorf("cells have changed:\n%s", got)
	}
}
