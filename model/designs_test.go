package model_test

import (
	"math"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

func load(t *testing.T, name string) *model.Network {
	t.Helper()
	d, err := model.Load("../testdata/designs/" + name + ".toml")
	if err != nil {
		t.Fatal(err)
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// TestLatchIsTheZoos checks that the file and the network built in code give the
// same bits everywhere: the parser against trees written by hand.
func TestLatchIsTheZoos(t *testing.T) {
	file, code := load(t, "latch"), zoo.Latch(100)
	dx, dy := make([]float64, 2), make([]float64, 2)
	for m := int64(0); m < 300; m += 7 {
		for p := int64(0); p < 500; p += 11 {
			for r := range file.Reactions {
				a, b := file.Propensity(r, []int64{m, p}), code.Propensity(r, []int64{m, p})
				if a != b {
					t.Fatalf("reaction %d at %d, %d: propensity %v and %v", r, m, p, a, b)
				}
				x := []float64{float64(m) / 100, float64(p) / 100}
				file.FluxGradient(r, x, dx)
				code.FluxGradient(r, x, dy)
				if dx[0] != dy[0] || dx[1] != dy[1] {
					t.Fatalf("reaction %d at %v: gradient %v and %v", r, x, dx, dy)
				}
			}
		}
	}
}

// rest follows the rate equations by the classical Runge–Kutta method until they
// rest; the step is short against the fastest rate of the designs.
func rest(t *testing.T, n *model.Network, x []float64) []float64 {
	t.Helper()
	const step = 0.05
	for range 400_000 {
		k1 := drift(n, x)
		k2 := drift(n, along(x, k1, step/2))
		k3 := drift(n, along(x, k2, step/2))
		k4 := drift(n, along(x, k3, step))
		fastest := 0.0
		for i := range x {
			d := (k1[i] + 2*k2[i] + 2*k3[i] + k4[i]) / 6
			x[i] += step * d
			fastest = max(fastest, math.Abs(d))
		}
		if fastest < 1e-9 {
			return x
		}
	}
	t.Fatalf("%s does not come to rest from %v", n.Title, x)
	return nil
}

func along(x, d []float64, step float64) []float64 {
	out := make([]float64, len(x))
	for i := range x {
		out[i] = x[i] + step*d[i]
	}
	return out
}

func drift(n *model.Network, x []float64) []float64 {
	out := make([]float64, len(x))
	for r := range n.Reactions {
		v := n.Flux(r, x)
		for i := range out {
			out[i] += n.AmountChange(r, i) * v
		}
	}
	return out
}

// TestDesignsAreSwitches checks that each demo design comes to rest in two places,
// by integration from either side. The latch's digits are those of the zoo; those
// of pair and operator are computed (Euler's method with a step of 0.005, another
// program). The integration stops at a drift of 1e-9, which leaves an error of
// that over the slowest rate, about 1e-7.
func TestDesignsAreSwitches(t *testing.T) {
	_, sink := zoo.LeaklessStates(0.45, 1)
	for _, c := range []struct {
		design    string
		low, high []float64 // where to begin
		readout   [2]float64
	}{
		{"latch", []float64{0, 0}, []float64{1, 2}, [2]float64{0.04998221, 1.69076586}},
		{"leakless", []float64{0.01, 0.01}, []float64{1, 2}, [2]float64{0, sink}},
		{"pair", []float64{3, 0}, []float64{0, 3}, [2]float64{0.39170604, 2.18765398}},
		{"operator", []float64{0, 0, 6, 6, 0, 0, 1}, []float64{6, 6, 0, 0, 0, 1, 0}, [2]float64{1.02620642, 5.84677693}},
	} {
		n := load(t, c.design)
		for i, start := range [][]float64{c.low, c.high} {
			got := rest(t, n, append([]float64(nil), start...))[n.Readout]
			if math.Abs(got-c.readout[i]) > 1e-6 {
				t.Errorf("%s rests at %.8f from %v, want %.8f", c.design, got, start, c.readout[i])
			}
		}
	}
}
