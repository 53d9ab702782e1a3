package proof_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/mat"

	"holdfast/deterministic/proof"
	"holdfast/model"
)

// mutual is k genes, each repressed by all others and, where self is above 0, fed
// by itself: p′ = α (1 + 5 self pⁿ)/(1 + Σ others pⁿ + self pⁿ) − p.
func mutual(t testing.TB, k int, alpha, n, self float64) *model.Network {
	var names []string
	for i := range k {
		names = append(names, fmt.Sprintf("p%d", i))
	}
	d := newDesign(names...)
	for i, me := range names {
		below, above := num(1), num(1)
		for j, other := range names {
			if j != i {
				below = plus(below, raised(d.x(other), n))
			}
		}
		if self > 0 {
			own := times(num(self), raised(d.x(me), n))
			above, below = plus(num(1), times(num(5), own)), plus(below, own)
		}
		d.rate("", me, over(times(num(alpha), above), below)).mass(me, "", "", 1)
	}
	return d.network(t)
}

// newton runs Newton's method from x, with plain derivatives; ok is false where it
// does not converge to non-negative amounts.
func newton(n *model.Network, x []float64) (ok bool) {
	s := len(x)
	dx := make([]float64, s)
	for range 60 {
		f, j := mat.NewVecDense(s, nil), mat.NewDense(s, s, nil)
		for r := range n.Reactions {
			v := n.FluxGradient(r, x, dx)
			for i := range s {
				c := n.AmountChange(r, i)
				f.SetVec(i, f.AtVec(i)+c*v)
				for k := range s {
					j.Set(i, k, j.At(i, k)+c*dx[k])
				}
			}
		}
		var step mat.VecDense
		if step.SolveVec(j, f) != nil {
			return false
		}
		for i := range x {
			x[i] -= step.AtVec(i)
			if !(x[i] >= 0 && x[i] < 1e6) {
				return false
			}
		}
		if mat.Norm(&step, 2) < 1e-12 {
			return true
		}
	}
	return false
}

// TestManyStates holds networks of many states against Newton's method: each state
// that it finds from random points is in the proved list, and from a thousandth
// beside each state of the list it finds that state. With self-feeding each gene is on or off and nearly free: 2ᵏ⁺¹−1 states.
func TestManyStates(t *testing.T) {
	r := rand.New(rand.NewPCG(31, 32))
	for _, c := range []struct {
		name string
		n    *model.Network
		want int
	}{
		{"three that repress each other", mutual(t, 3, 6, 2, 0), 7},
		{"four that repress each other", mutual(t, 4, 6, 2, 0), 9},
		{"three that feed themselves", mutual(t, 3, 1, 2, 1), 7},
		{"four that feed themselves", mutual(t, 4, 1, 2, 1), 15},
		{"two with transcripts", twoGenes(t, 1, 2), 3},
		{"two with transcripts, broken exponent", twoGenes(t, 1, 2.3), 3},
	} {
		p := prove(t, c.n, nil, nil)
		if !p.Complete || !p.All || len(p.Roots) != c.want {
			t.Errorf("%s: %v, want %d", c.name, p, c.want)
			continue
		}
		compare(t, c.name, c.n, p, r)
	}
}

func compare(t *testing.T, name string, n *model.Network, p *proof.Result, r *rand.Rand) {
	t.Helper()
	x := make([]float64, len(n.Species))
	for range 1000 {
		for i := range x {
			x[i] = 1.1 * p.High[i] * r.Float64()
		}
		if newton(n, x) && member(p, x) < 0 {
			t.Fatalf("%s: the state at %v is not in the list", name, x)
		}
	}
	for k, root := range p.Roots {
		for i, v := range root.Point {
			x[i] = v * (1 + 1e-3*r.Float64())
		}
		if !newton(n, x) || member(p, x) != k {
			t.Errorf("%s: Newton's method from beside state %d at %v came to %v", name, k, root.Point, x)
		}
	}
}

// member gives the root that x is, to 1e-9, or -1.
func member(p *proof.Result, x []float64) int {
	for k, root := range p.Roots {
		far := 0.0
		for i, v := range x {
			far = max(far, math.Abs(v-root.Point[i]))
		}
		if far < 1e-9 {
			return k
		}
	}
	return -1
}

// anyCircuit draws two to four genes, each driven by one to three others or itself
// through rising and falling Hill functions of any steepness, added or multiplied,
// over four decades of constants; half of the circuits have transcripts.
func anyCircuit(t testing.TB, r *rand.Rand) *model.Network {
	k := 2 + r.IntN(3)
	withRNA := r.IntN(2) == 0
	var names []string
	for i := range k {
		names = append(names, fmt.Sprintf("p%d", i))
		if withRNA {
			names = append(names, fmt.Sprintf("m%d", i))
		}
	}
	draw := func(decades float64) float64 { return math.Pow(10, decades*(r.Float64()-0.5)) }
	d := newDesign(names...)
	for i := range k {
		law := num(0.05 * r.Float64() * draw(1))
		for range 1 + r.IntN(3) {
			op := []model.Op{model.OpHill, model.OpHillFall}[r.IntN(2)]
			n := []float64{1, 2, 3, 5, 2 + 4*r.Float64()}[r.IntN(5)]
			term := model.Call(op, d.x(fmt.Sprintf("p%d", r.IntN(k))), num(draw(2)), num(n))
			if r.IntN(3) == 0 {
				law = times(law, plus(num(0.1), times(num(10*draw(1)), term)))
			} else {
				law = plus(law, times(num(3*draw(2)), term))
			}
		}
		p, m := fmt.Sprintf("p%d", i), fmt.Sprintf("m%d", i)
		if withRNA {
			d.rate("", m, law).mass(m, "", "", draw(1)).mass("", m, p, draw(1)).mass(p, "", "", draw(1))
		} else {
			d.rate("", p, law).mass(p, "", "", draw(1))
		}
	}
	return d.network(t)
}

// TestRandomCircuits proves the lists of 80 random circuits of two to eight species
// and looks for states that they lack, by Newton's method from random points. The
// number of states is odd: all flow points into a large box, and so the signs of the
// Jacobian's determinant at the states sum to ±1 (degree theory, common practice).
func TestRandomCircuits(t *testing.T) {
	r := rand.New(rand.NewPCG(41, 42))
	many := 0
	for k := range 80 {
		n := anyCircuit(t, r)
		p := prove(t, n, nil, nil)
		if !p.Complete || !p.All || len(p.Roots)%2 == 0 {
			t.Errorf("circuit %d: %v", k, p)
			continue
		}
		if len(p.Roots) > 1 {
			many++
		}
		x := make([]float64, len(n.Species))
		for range 50 {
			for i := range x {
				x[i] = p.High[i] * math.Pow(10, -3*r.Float64())
			}
			if newton(n, x) && nearest(p, x) > 1e-6 {
				t.Fatalf("circuit %d: the state at %v is not in the list", k, x)
			}
		}
	}
	if many < 6 {
		t.Errorf("only %d circuits have several states", many)
	}
}

// nearest is the least distance of x from a root, by the largest relative difference.
func nearest(p *proof.Result, x []float64) float64 {
	best := math.Inf(1)
	for _, root := range p.Roots {
		far := 0.0
		for i, v := range x {
			far = max(far, math.Abs(v-root.Point[i])/(1e-6+root.Point[i]))
		}
		best = min(best, far)
	}
	return best
}
