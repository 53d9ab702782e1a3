package deterministic

import (
	"context"
	"math"
	"testing"

	"holdfast/model"
)

// logistic is x' = x − x², whose flow from x0 is x0 eᵗ/(1 + x0(eᵗ−1)).
func logistic(t testing.TB) *model.Network {
	x := model.SpeciesRef(0)
	d := model.Draft{TimeUnit: "min", Copies: 1, Species: []model.Species{{Name: "x", Start: 0.1}}}
	d.Reactions = []model.DraftReaction{
		{Name: "grow", Makes: []model.Term{{Species: 0, Count: 1}}, Rate: x},
		{Name: "crowd", Uses: []model.Term{{Species: 0, Count: 1}}, Rate: model.Call(model.OpMul, x, x)},
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// TestRosenbrockOrder halves a fixed step and checks that the error of the
// logistic flow falls as the fourth power of it: by 2⁴ = 16 in the limit; the
// next power of the step, a twentieth here, leaves it between 14 and 18.
func TestRosenbrockOrder(t *testing.T) {
	errorAt := func(h float64) float64 {
		g := newIntegrator(newWorkspace(newSystem(logistic(t))), 1, []float64{1})
		x := []float64{0.1}
		for range int(math.Round(2 / h)) {
			g.h = h
			g.w.sys.jacobian(x, g.w.jac, g.w.grad)
			if !g.stages(x) {
				t.Fatal("no step")
			}
			copy(x, g.next)
		}
		exact := 0.1 * math.Exp(2) / (1 + 0.1*(math.Exp(2)-1))
		return math.Abs(x[0] - exact)
	}
	for _, h := range []float64{0.05, 0.025} {
		if ratio := errorAt(h) / errorAt(h/2); ratio < 14 || ratio > 18 {
			t.Errorf("halving h = %v divides the error by %.2f, want 14 to 18", h, ratio)
		}
	}
}

// TestFlowStiff follows the logistic flow to t ≈ 1 at a tolerance of 1e-8 and on
// to rest; the embedded estimate keeps the error within 100 tolerances.
func TestFlowStiff(t *testing.T) {
	g := newIntegrator(newWorkspace(newSystem(logistic(t))), 1e-8, []float64{1e-9})
	x, worst := []float64{1e-6}, 0.0
	end, _ := g.follow(context.Background(), x, []float64{1e6}, 1000, func(float64) bool {
		e := math.Exp(g.time)
		worst = max(worst, math.Abs(x[0]-1e-6*e/(1+1e-6*(e-1))))
		return g.time > 40
	})
	if end != flowSettled || worst > 1e-6 {
		t.Errorf("flow %v, error up to %g, want at most 1e-6", end, worst)
	}
}
