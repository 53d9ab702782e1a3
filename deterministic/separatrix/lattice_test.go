package separatrix

import (
	"context"
	"sync"
	"testing"

	"holdfast/deterministic"
	"holdfast/internal/zoo"
	"holdfast/model"
)

// The lattice, which labels by the curves, must agree with the flow from each point.
// Points of a sample and all points next to the separatrix are looked at.
func TestLatticeAgreesWithFlow(t *testing.T) {
	for _, n := range []*model.Network{zoo.Latch(60), zoo.SymmetricRepression(3, 30), zoo.InducibleRepression(0, 3), operator(t)} {
		m := surveyed(t, n)
		l := NewLattice(m)
		for k := 1; k <= 300; k++ {
			counts := make([]int64, len(n.Species))
			for i := range counts {
				counts[i] = int64(1.8 * halton(k, i) * m.High[i] * n.Unit(i))
			}
			if len(m.Totals) > 0 {
				counts[1] = 200 - counts[0]%200
				counts[0] = 200 - counts[1]
			}
			agree(t, m, l, counts)
		}
		for _, c := range traced(t, m, Options{}) {
			for k := 0; k < len(c.Points); k += 20 {
				if len(m.Totals) == 0 {
					agree(t, m, l, []int64{int64(c.Points[k][0] * n.Unit(0)), int64(c.Points[k][1] * n.Unit(1))})
				}
			}
		}
	}
}

func agree(t *testing.T, m *deterministic.Map, l *Lattice, counts []int64) {
	t.Helper()
	want, err := m.Basin(m.Network.Amounts(nil, counts))
	for range 2 { // found, then remembered
		got, ok := l.Label(counts)
		if ok != (err == nil) || (ok && got != want) {
			t.Errorf("%s: label %d, %t at %v, want %d (%v)", m.Network.Title, got, ok, counts, want, err)
		}
	}
}

func TestLatticeOffTheMap(t *testing.T) {
	l := NewLattice(surveyed(t, operator(t)))
	if _, ok := l.Label([]int64{200, 5, 0}); ok {
		t.Error("counts off the conserved total have a label")
	}
	if _, ok := l.Label([]int64{205, -5, 0}); ok {
		t.Error("counts below 0 have a label")
	}
	if s, ok := l.Label([]int64{200, 0, 0}); !ok || s != 0 {
		t.Errorf("the start has label %d, %t, want 0", s, ok)
	}
	if s, ok := l.Label([]int64{0, 200, 1_000_000}); !ok || s != 1 {
		t.Errorf("far up the label is %d, %t, want 1", s, ok)
	}
}

// The separatrix itself, where counts can lie on it exactly, has no label.
func TestLatticeOnTheSeparatrix(t *testing.T) {
	l := NewLattice(surveyed(t, zoo.SymmetricRepression(3, 100)))
	if s, ok := l.Label([]int64{150, 150}); ok {
		t.Errorf("a point on the diagonal has label %d", s)
	}
}

func TestLatticeIsSafeForConcurrentUse(t *testing.T) {
	m := surveyed(t, zoo.Latch(20))
	l := NewLattice(m)
	var wait sync.WaitGroup
	results := make([][]int, 4)
	for g := range results {
		wait.Go(func() {
			for i := range int64(400) {
				s, ok := l.Label([]int64{i % 20, i / 20 * 6}) // inside the array and outside
				if !ok {
					s = -1
				}
				results[g] = append(results[g], s)
			}
		})
	}
	wait.Wait()
	for g := range results {
		for i, s := range results[g] {
			if s != results[0][i] {
				t.Fatalf("goroutine %d has label %d at point %d, the first %d", g, s, i, results[0][i])
			}
		}
	}
}

func BenchmarkLatticeLookUp(b *testing.B) {
	m, err := deterministic.Survey(context.Background(), zoo.Latch(100), deterministic.Options{})
	if err != nil {
		b.Fatal(err)
	}
	l := NewLattice(m)
	counts := []int64{50, 100}
	l.Label(counts)
	for b.Loop() {
		l.Label(counts)
	}
}

func BenchmarkLatticeFill(b *testing.B) {
	m, err := deterministic.Survey(context.Background(), zoo.Latch(100), deterministic.Options{})
	if err != nil {
		b.Fatal(err)
	}
	points := 0
	for b.Loop() {
		l := NewLattice(m)
		for i := range int64(60) {
			for j := range int64(60) {
				l.Label([]int64{i, 3 * j})
				points++
			}
		}
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(points), "ns/point")
}
