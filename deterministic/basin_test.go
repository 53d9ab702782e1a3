package deterministic

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"sync"
	"testing"

	"holdfast/internal/zoo"
)

// TestBasinSymmetric: in symmetric repression the line u = v is the separatrix, by
// symmetry; the side with more v leads to the state with more v, however near.
func TestBasinSymmetric(t *testing.T) {
	m := survey(t, zoo.SymmetricRepression(3, 50))
	r := rand.New(rand.NewPCG(11, 12))
	for range 100 {
		u := logUniform(r, 1e-2, 1e2)
		v := u * (1 + logUniform(r, 1e-3, 10))
		for want, x := range [][]float64{{v, u}, {u, v}} { // "low" has little v
			got, err := m.Basin(x)
			if err != nil || got != want {
				t.Errorf("basin of %v: %d, %v; want %d", x, got, err, want)
			}
		}
	}
	_, err := m.Basin([]float64{1, 1})
	var stuck *BasinError
	if !errors.As(err, &stuck) || stuck.State != "saddle" {
		t.Errorf("on the separatrix: %v", err)
	}
}

// TestBasinOneSpecies: the basins of Schlögl's chain meet at its middle root 220.
func TestBasinOneSpecies(t *testing.T) {
	m := survey(t, zoo.Schlogl())
	for x, want := range map[float64]int{0: 0, 100: 0, 219.99: 0, 220.01: 1, 400: 1, 1e6: 1} {
		if got, err := m.Basin([]float64{x}); err != nil || got != want {
			t.Errorf("basin of %v: %d, %v; want %d", x, got, err, want)
		}
	}
}

// TestBasinStiff: the dimer switch, its bindings a million times faster than its
// losses, is symmetric in a and b.
func TestBasinStiff(t *testing.T) {
	m := survey(t, fastDimers(t, 1e6))
	for want, x := range [][]float64{
		{20, 10, 19, 10, 0.25, 0.25, 0.25, 0.25}, {19, 10, 20, 10, 0.25, 0.25, 0.25, 0.25},
	} {
		if got, err := m.Basin(x); err != nil || got != want {
			t.Errorf("basin of %v: %d, %v; want %d", x, got, err, want)
		}
	}
	if _, err := m.Basin([]float64{20, 10, 19, 10, 1, 1, 0, 0}); err == nil {
		t.Error("no error for two operators")
	}
}

// TestBasinParallel: one map serves many goroutines.
func TestBasinParallel(t *testing.T) {
	m := survey(t, zoo.Schlogl())
	var wait sync.WaitGroup
	for k := range 8 {
		wait.Go(func() {
			x := 30 + 60*float64(k)
			want := 0
			if x > 220 {
				want = 1
			}
			if got, err := m.Basin([]float64{x}); err != nil || got != want {
				t.Errorf("basin of %v: %d, %v; want %d", x, got, err, want)
			}
		})
	}
	wait.Wait()
}

func TestBasinErrors(t *testing.T) {
	m := survey(t, zoo.Latch(100))
	for _, x := range [][]float64{{1}, {-1, 0}, {math.NaN(), 0}, {math.Inf(1), 0}} {
		if _, err := m.Basin(x); err == nil {
			t.Errorf("no error for %v", x)
		}
	}
	// x' = 1 − 3x + x² runs away from above its upper root (3+√5)/2.
	d := newDraft(1, "x")
	d.add(nil, nil, terms(0), 1).add(terms(0), nil, nil, 3).add(nil, several(0, 2), terms(0), 1)
	m = survey(t, d.network(t))
	if got, err := m.Basin([]float64{2.6}); got != 0 || err != nil {
		t.Errorf("basin of 2.6: %d, %v", got, err)
	}
	_, err := m.Basin([]float64{2.62})
	var runaway *RunawayError
	if !errors.As(err, &runaway) || runaway.Species != "x" {
		t.Errorf("basin of 2.62: %v", err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := survey(t, zoo.Latch(100)).BasinContext(ctx, []float64{3, 3}); !errors.Is(err, context.Canceled) {
		t.Errorf("cancelled: %v", err)
	}
}
