package proof_test

import (
	"math"
	"testing"

	"holdfast/deterministic/proof"
	"holdfast/internal/zoo"
	"holdfast/model"
)

// rounding is the relative error of a closed form worked out in floating point: a
// few last places times the condition of the roots here, up to 1e3.
const rounding = 1e-12

// TestLeaklessLatch: x = (1 ∓ √(1−4a²b²))/(2ab), y = a x, and exactly 0 (Griffith,
// J. Theor. Biol. 20 (1968) 209; the closed form is common practice). Beyond the
// fold at ab = 1/2 only the state at 0 is left.
func TestLeaklessLatch(t *testing.T) {
	for _, ab := range [][2]float64{{0.45, 1}, {0.2, 2}, {0.01, 1}, {3, 0.1}, {0.499999, 1}, {1e-4, 30}} {
		a, b := ab[0], ab[1]
		low, high := zoo.LeaklessStates(a, b)
		want := [][]float64{{0, 0}, {a * low, low}, {a * high, high}}
		r := prove(t, zoo.LeaklessLatch(a, b, 100), nil, nil)
		wantComplete(t, "leakless latch", r, want, rounding)
		if !r.All || r.Roots[0].Box[1] != r.Roots[0].Box[0] || r.Roots[0].Box[0].Hi != 0 {
			t.Errorf("a = %v, b = %v: %v; the state without molecules is %v, want exactly 0", a, b, r, r.Roots[0].Box)
		}
	}
	for _, a := range []float64{0.500001, 0.6, 3, 100} {
		wantComplete(t, "latch beyond its fold", prove(t, zoo.LeaklessLatch(a, 1, 100), nil, nil), [][]float64{{0, 0}}, 0)
	}
}

// TestLeaklessFold: at ab = 1/2 exactly, the outer pair is one degenerate state at
// x = 1, which nothing on intervals can prove; the state at 0 is proved.
func TestLeaklessFold(t *testing.T) {
	for _, a := range []float64{0.5, 0.25, 2} {
		r := prove(t, zoo.LeaklessLatch(a, 0.5/a, 100), nil, nil)
		wantResisting(t, "leakless latch at its fold", r, []float64{a, 1})
		if len(r.Roots) != 1 || r.Roots[0].Point[1] != 0 || len(r.Unresolved) != 1 {
			t.Errorf("a = %v: %v; want the state at 0 and one box", a, r)
		}
		if w := r.Unresolved[0].Box[1].Width(); w > 1e-6 {
			t.Errorf("a = %v: the box around the fold is %v wide", a, w)
		}
	}
}

// TestLeakyLatch holds the two-species latch against its states, computed in
// 30-digit arithmetic.
func TestLeakyLatch(t *testing.T) {
	var want [][]float64
	for _, s := range zoo.LatchStates() {
		want = append(want, []float64{s[0], s[1]})
	}
	wantComplete(t, "leaky latch", prove(t, zoo.Latch(100), nil, nil), want, 1e-15)
}

// TestLeakyFold goes just inside and just outside the fold curve r = 2x/(1+x²)²,
// s = x²(1−x²)/(1+x²)² (Lewis, Slack, Wolpert, J. Theor. Biol. 65 (1977) 579, from
// memory; algebra re-derived). At x the rate is x² s″/2-like: a smaller r lifts it
// above 0. With x above 1/√3 it is the upper pair that meets there: a smaller r
// opens it, a larger r closes it; below, the lower pair, the other way about.
func TestLeakyFold(t *testing.T) {
	for _, x := range []float64{0.3, 0.45, 0.7, 0.95} {
		r, s := zoo.LeakyFold(x)
		for _, near := range []float64{1e-3, 1e-6, 1e-9} {
			three, one := r*(1-near), r*(1+near)
			if x < 1/math.Sqrt(3) {
				three, one = one, three
			}
			for rate, want := range map[float64]int{three: 3, one: 1} {
				got := prove(t, zoo.LeakyActivator(rate, s, 100), nil, nil)
				if !got.Complete || len(got.Roots) != want || !got.All {
					t.Errorf("fold at %v, r = %v: %v; want %d", x, rate, got, want)
				}
			}
		}
		got := prove(t, zoo.LeakyActivator(r, s, 100), nil, nil)
		wantResisting(t, "leaky activator at its fold", got, []float64{x})
	}
}

// TestSelfActivatorFold: folds at β/(γK) = n/(n−1)^{(n−1)/n}, x = K(n−1)^{1/n}
// (algebra), with whole and broken exponents; 0 is always a state.
func TestSelfActivatorFold(t *testing.T) {
	for _, n := range []float64{2, 2.5, 3, 4, 7.3} {
		ratio, x := zoo.SelfActivatorFold(n)
		for _, scale := range []float64{1, 1e-3, 1e4} {
			for near, want := range map[float64]int{1e-6: 3, -1e-6: 1, 0.5: 3, -0.5: 1} {
				got := prove(t, zoo.SelfActivator(ratio*(1+near)*scale*2, scale, 2, n, 100), nil, nil)
				if !got.Complete || len(got.Roots) != want {
					t.Errorf("n = %v, K = %v, %v from the fold: %v; want %d", n, scale, near, got, want)
				}
			}
			got := prove(t, zoo.SelfActivator(ratio*scale*2, scale, 2, n, 100), nil, nil)
			wantResisting(t, "self-activator at its fold", got, []float64{x * scale})
		}
	}
}

// TestSymmetricRepression: uv = 1, u+v = α above the pitchfork at α = 2, and u = v
// (algebra).
func TestSymmetricRepression(t *testing.T) {
	for _, alpha := range []float64{2.0001, 2.5, 3, 10, 1000} {
		low, high := zoo.SymmetricStates(alpha)
		mid := zoo.SymmetricSaddle(alpha)
		want := [][]float64{{low, high}, {mid, mid}, {high, low}}
		wantComplete(t, "symmetric repression", prove(t, zoo.SymmetricRepression(alpha, 10), nil, nil), want, 1e-9) // (α−√(α²−4))/2 cancels
	}
	for _, alpha := range []float64{0.1, 1, 1.9999} {
		mid := zoo.SymmetricSaddle(alpha)
		wantComplete(t, "below the pitchfork", prove(t, zoo.SymmetricRepression(alpha, 10), nil, nil), [][]float64{{mid, mid}}, rounding)
	}
	wantResisting(t, "at the pitchfork", prove(t, zoo.SymmetricRepression(2, 10), nil, nil), []float64{1, 1})
}

// TestSymmetricPitchfork: one state below α = n(n−1)^{−(n+1)/n}, three above
// (algebra).
func TestSymmetricPitchfork(t *testing.T) {
	for _, n := range []float64{2, 2.5, 3, 4} {
		alpha := zoo.SymmetricPitchfork(n)
		for near, want := range map[float64]int{1e-4: 3, -1e-4: 1} {
			a := alpha * (1 + near)
			got := prove(t, zoo.AsymmetricRepression(a, a, n, n, 10), nil, nil)
			if !got.Complete || len(got.Roots) != want {
				t.Errorf("n = %v, %v from the pitchfork: %v; want %d", n, near, got, want)
			}
		}
	}
}

// TestAsymmetricFolds steps off the fold curve, whose points are given to eight
// digits (computed); towards larger α of both there are three states.
func TestAsymmetricFolds(t *testing.T) {
	for _, f := range zoo.AsymmetricFolds() {
		if f.Cusp {
			continue
		}
		for near, want := range map[float64]int{1e-5: 3, -1e-5: 1} {
			a1, a2 := f.Alpha1*(1+near), f.Alpha2*(1+near)
			got := prove(t, zoo.AsymmetricRepression(a1, a2, 2, 2, 10), nil, nil)
			if !got.Complete || len(got.Roots) != want {
				t.Errorf("p = %v, %v from the fold: %v; want %d", f.P, near, got, want)
			}
		}
	}
}

// TestSchlogl: 100, 220 and 400 (the macroscopic roots, exact), in a box and in all
// amounts.
func TestSchlogl(t *testing.T) {
	want := [][]float64{{100}, {220}, {400}}
	r := prove(t, zoo.Schlogl(), []float64{0}, []float64{1000})
	wantComplete(t, "Schlögl", r, want, rounding)
	r = prove(t, zoo.Schlogl(), nil, nil)
	wantComplete(t, "Schlögl", r, want, rounding)
	if !r.All {
		t.Errorf("%v: not said to hold for all amounts", r)
	}
	r = prove(t, zoo.Schlogl(), []float64{150}, []float64{300})
	wantComplete(t, "Schlögl from 150 to 300", r, want[1:2], rounding)
	if r.All {
		t.Errorf("%v: said to hold for all amounts", r)
	}
}

// TestNoSwitchWithoutCooperativity: simple saturating repression has one state
// (Cherry and Adler, J. Theor. Biol. 203 (2000) 117, published abstract).
func TestNoSwitchWithoutCooperativity(t *testing.T) {
	for _, a := range [][2]float64{{1, 1}, {10, 10}, {100, 3}, {1000, 1000}} {
		r := prove(t, zoo.AsymmetricRepression(a[0], a[1], 1, 1, 10), nil, nil)
		if !r.Complete || len(r.Roots) != 1 || !r.All {
			t.Errorf("α = %v: %v; want one state", a, r)
		}
	}
}

// TestInducible holds a pair with exponents 2.5 and 1 against six known digits, and
// goes to either side of the fold, known to four (computed).
func TestInducible(t *testing.T) {
	r := prove(t, zoo.InducibleRepression(0, 1), nil, nil)
	if !r.Complete || len(r.Roots) != 3 {
		t.Fatalf("%v; want three states", r)
	}
	for k, u := range zoo.InducibleStates() {
		if got := r.Roots[k].Point[0]; math.Abs(got-u) > 1e-5*u {
			t.Errorf("state %d: u = %v, want %v", k, got, u)
		}
	}
	for inducer, want := range map[float64]int{0.9999: 3, 1.0001: 1} {
		r := prove(t, zoo.InducibleRepression(zoo.InducibleFold()*inducer, 1), nil, nil)
		if !r.Complete || len(r.Roots) != want {
			t.Errorf("inducer at %v of the fold: %v; want %d", inducer, r, want)
		}
	}
}

// TestOneState: networks whose only state is known in closed form.
func TestOneState(t *testing.T) {
	// P + 2 P2 = 100, 0.0005 P² = 0.01 P2.
	p := (-1 + math.Sqrt(1+4*0.1*100)) / 0.2
	// up·off = down·on, off + on = 1, make·on = loss·mrna.
	on := 4.3 / (4.3 + 18.8)
	for _, c := range []struct {
		name string
		n    *model.Network
		want []float64
	}{
		{"dimerisation", zoo.Dimerisation(), []float64{p, (100 - p) / 2}},
		{"telegraph", zoo.Telegraph(), []float64{1 - on, on, 103.8 * on}},
		{"birth–death", zoo.BirthDeath(), []float64{0}},
		{"immigration–death", zoo.ImmigrationDeath(1, 0.1), []float64{10}},
		{"batches", zoo.BatchesOfFive(), []float64{25}},
		{"chain", zoo.Chain(4, 1, 10), []float64{0, 0, 0, 0, 10}},
		{"two stages", zoo.TwoStage(2, 0.5, 3, 0.1), []float64{4, 120}},
		{"bursts", zoo.BurstExpression(2, 3.5, 0.1), []float64{70}},
	} {
		r := prove(t, c.n, nil, nil)
		wantComplete(t, c.name, r, [][]float64{c.want}, rounding)
		if !r.All {
			t.Errorf("%s: %v: not said to hold for all amounts", c.name, r)
		}
	}
}

// TestDimerSwitch: eight species, one conserved total. By the exchange of A and B
// the middle state has A = B and the outer two are each other's image; that there
// are two stable states is published of the family (Allen, Warren, ten Wolde, Phys.
// Rev. Lett. 94 (2005) 018104).
func TestDimerSwitch(t *testing.T) {
	r := prove(t, zoo.DimerSwitch(), nil, nil)
	if !r.Complete || !r.All || len(r.Roots) != 3 {
		t.Fatalf("%v; want three states", r)
	}
	swap := []int{2, 3, 0, 1, 4, 6, 5, 7}
	for k, root := range r.Roots {
		image := r.Roots[2-k]
		for i, j := range swap {
			if root.Box[i].Meet(image.Box[j]).IsEmpty() {
				t.Errorf("state %d, species %d: %v, and %v in its image", k, i, root.Box[i], image.Box[j])
			}
		}
		a, a2 := root.Point[0], root.Point[1]
		if math.Abs(a*a-a2) > 1e-12*a2 { // 2A ⇌ A2 at equal constants
			t.Errorf("state %d: a² = %v, a2 = %v", k, a*a, a2)
		}
	}
}

func TestEnclose(t *testing.T) {
	low, high, ok := proof.Enclose(zoo.Latch(100))
	if !ok {
		t.Fatal("no box for the latch")
	}
	states := zoo.LatchStates()
	for i := range 2 {
		if !(low[i] <= states[0][i] && states[2][i] <= high[i]) || high[i] > 1.1*states[2][i] {
			t.Errorf("species %d: %v to %v does not fit %v", i, low[i], high[i], states)
		}
	}
	// x' = 2x − x is zero at 0 only, but nothing bounds what is made of x.
	grows := newDesign("x", "y").rate("", "x", times(raised(model.SpeciesRef(0), 2), model.SpeciesRef(1))).mass("x", "", "", 1).
		rate("", "y", times(raised(model.SpeciesRef(1), 2), model.SpeciesRef(0))).mass("y", "", "", 1).network(t)
	if low, high, ok := proof.Enclose(grows); ok {
		t.Errorf("growth without bound: enclosed in %v to %v", low, high)
	}
}
