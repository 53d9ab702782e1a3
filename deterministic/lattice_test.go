package deterministic

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"holdfast/internal/zoo"
)

// unbounded is ranges that allow every count.
func unbounded(n int) (low, high []int64) {
	return make([]int64, n), slices.Repeat([]int64{math.MaxInt64}, n)
}

// nearestByHand tries every point of a cube of counts that keeps the totals of the
// dimer switch, and gives the least squared distance.
func nearestByHand(target []float64, step func(c []int64) bool, n, top int) float64 {
	best := math.Inf(1)
	c := make([]int64, n)
	var visit func(i int)
	visit = func(i int) {
		if i == n {
			if step(c) {
				best = min(best, squared(c, target))
			}
			return
		}
		for k := range top + 1 {
			c[i] = int64(k)
			visit(i + 1)
		}
	}
	visit(0)
	return best
}

func squared(c []int64, target []float64) float64 {
	d := 0.0
	for i, k := range c {
		e := float64(k) - target[i]
		d += e * e
	}
	return d
}

// TestNearestLatticePoint holds the search against trying every point, on a network
// with a parity (P + 2 P2 = 7) and on one with an operator.
func TestNearestLatticePoint(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 10))
	d := newDraft(1, "p", "p2", "o", "ob", "q")
	d.Species[0].Start, d.Species[2].Start = 7, 2
	d.add(several(0, 2), nil, terms(1), 1).add(terms(1), nil, several(0, 2), 1)
	d.add(terms(2, 4), nil, terms(3), 1).add(terms(3), nil, terms(2, 4), 1)
	d.add(nil, nil, terms(4), 1).add(terms(4), nil, nil, 1)
	l := newLattice(d.network(t))
	keeps := func(c []int64) bool { return c[0]+2*c[1] == 7 && c[2]+c[3] == 2 }
	low, high := unbounded(5)
	for range 40 {
		target := make([]float64, 5)
		for i := range target {
			target[i] = 6 * r.Float64()
		}
		got, ok := l.nearest(target, low, high)
		if !ok || !keeps(got) {
			t.Fatalf("nearest to %v: %v, %v", target, got, ok)
		}
		want := nearestByHand(target, keeps, 5, 7)
		if squared(got, target) > want+1e-9 {
			t.Errorf("nearest to %v: %v at %g, another at %g", target, got, squared(got, target), want)
		}
	}
}

// TestLatticeSteps: counts that change by fives only stay apart by fives.
func TestLatticeSteps(t *testing.T) {
	d := newDraft(1, "x")
	d.Species[0].Start = 3
	d.add(nil, nil, several(0, 5), 1).add(several(0, 5), nil, nil, 1)
	l := newLattice(d.network(t))
	low, high := unbounded(1)
	for target, want := range map[float64]int64{0: 3, 5.4: 3, 5.6: 8, 12: 13} {
		if got, ok := l.nearest([]float64{target}, low, high); !ok || got[0] != want {
			t.Errorf("nearest to %v is %v, want %d", target, got, want)
		}
	}
	if got, ok := l.nearest([]float64{5}, []int64{4}, []int64{7}); ok {
		t.Errorf("a point %v between 4 and 7", got)
	}
}

// TestLatticeLarge: a chain of 60 species has one total; the nearest point to equal
// shares of 100 molecules is found at once.
func TestLatticeLarge(t *testing.T) {
	const n = 60
	l := newLattice(zoo.Chain(n-1, 1, 100))
	target := slices.Repeat([]float64{100.0 / n}, n)
	low, high := unbounded(n)
	got, ok := l.nearest(target, low, high)
	sum := int64(0)
	for _, k := range got {
		sum += k
	}
	// 40 twos and 20 ones are nearest: 40·(1/3)² + 20·(2/3)².
	if !ok || sum != 100 || squared(got, target) > 40.0/9+20*4.0/9+1e-9 {
		t.Errorf("got %v at %g", got, squared(got, target))
	}
}
