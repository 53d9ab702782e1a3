package levers

import (
	"context"
	"errors"
	"math"
	"strconv"
	"strings"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"

	"holdfast/analysis/action"
	"holdfast/analysis/hold"
	"holdfast/analysis/lattice"
	"holdfast/internal/race"
	"holdfast/internal/zoo"
	"holdfast/model"
)

// leakyAction gives S and its derivatives in r and s for the way from one root of
// x' = s − r x + x²/(1+x²) to another, by quadrature: S = ∫ ln(d/b) dx for a chain of
// single steps with birth b and death d (Gardiner, Handbook of Stochastic Methods, section
// 7.4, by Laplace's method), and its derivatives under the integral.
func leakyAction(r, s, from, to float64) [3]float64 {
	birth := func(x float64) float64 { return s + x*x/(1+x*x) }
	along := func(f func(x float64) float64) float64 {
		if to < from {
			return -quad.Fixed(f, to, from, 200, nil, 0)
		}
		return quad.Fixed(f, from, to, 200, nil, 0)
	}
	return [3]float64{
		along(func(x float64) float64 { return math.Log(r * x / birth(x)) }),
		(to - from) / r,
		along(func(x float64) float64 { return -1 / birth(x) }),
	}
}

// root finds the root of the drift between two amounts by halving.
func root(r, s, low, high float64) float64 {
	drift := func(x float64) float64 { return s - r*x + x*x/(1+x*x) }
	for range 200 {
		middle := (low + high) / 2
		if drift(low)*drift(middle) <= 0 {
			high = middle
		} else {
			low = middle
		}
	}
	return low
}

// The leading order against quadrature, Ω S for copies among it, and the whole slope
// against the lattice's.
func TestActionOfOneSpecies(t *testing.T) {
	const r, s, copies = 0.45, 0.02, 400
	rep := run(t, zoo.LeakyActivator(r, s, copies), Options{})
	low, saddle, high := root(r, s, 0, 0.2), root(r, s, 0.2, 1), root(r, s, 1, 5)
	for state, from := range map[string]float64{"low": low, "high": high} {
		want := leakyAction(r, s, from, saddle)
		b := block(t, rep, state)
		for name, lead := range map[string]float64{"copies": copies * want[0], "r": copies * r * want[1], "s": copies * s * want[2]} {
			l := b.lever(name)
			a := l.By(Action)
			if math.Abs(float64(a.Leading)/lead-1) > 1e-5 {
				t.Errorf("%s, %s: leading order %v, by quadrature %v", state, name, a.Leading, lead)
			}
			if l.Agreement != "agree" || !(float64(a.High-a.Low) < 0.5+0.02*math.Abs(lead)) {
				t.Errorf("%s, %s: %v by lattice, %v by action: %q", state, name, l.Slope(), a, l.Agreement)
			}
		}
	}
}

// What the lattice's slopes have beside the leading order settles as copies grow: from
// copies to twice and four times as many it must change by less each time. A gradient of
// S off by δ would make it grow by δ times the copies instead. In bursts, whose mean is
// made of two constants.
func TestPrefactorSettles(t *testing.T) {
	if race.Enabled {
		t.Skip("takes a minute under the race detector")
	}
	n := zoo.BurstLatch(100)
	var parts [3][]float64
	for i, copies := range []float64{100, 200, 400} {
		m, err := n.Rebind(copies, nil)
		if err != nil {
			t.Fatal(err)
		}
		rep := run(t, m, Options{})
		for _, state := range []string{"low", "high"} {
			for _, name := range []string{"leak", "drive", "steep", "size", "plenty", "loss"} {
				l := block(t, rep, state).lever(name)
				parts[i] = append(parts[i], float64(l.By(Lattice).Value-l.By(Action).Leading))
			}
		}
	}
	for k := range parts[0] {
		first, second := math.Abs(parts[1][k]-parts[0][k]), math.Abs(parts[2][k]-parts[1][k])
		if second > first || second > 0.2 {
			t.Errorf("slope %d: parts %v, %v, %v", k, parts[0][k], parts[1][k], parts[2][k])
		}
	}
}

// In two species: the slopes by action, prefactor's part and all, are those of the lattice
// within their error.
func TestActionAgrees(t *testing.T) {
	if race.Enabled {
		t.Skip("takes a minute under the race detector")
	}
	for name, copies := range map[string]float64{"latch": 18, "leakless": 20, "pair": 26} {
		rep := run(t, design(t, name, copies, nil), Options{})
		for i := range rep.Blocks {
			for k := range rep.Blocks[i].Levers {
				if l := &rep.Blocks[i].Levers[k]; l.Agreement != "agree" {
					t.Errorf("%s, %s, %s: %v by lattice, %v by action", name, rep.Blocks[i].From, l.Name, l.Slope(), l.By(Action))
				}
			}
		}
	}
}

// From one lattice at very few copies, where the prefactor's part and the leading order
// nearly cancel, the error still holds what the lattice says.
func TestActionFromOneLattice(t *testing.T) {
	for _, name := range []string{"latch", "leakless", "pair"} {
		for _, copies := range []float64{2.5, 3, 3.5, 3.9} {
			rep := run(t, design(t, name, copies, nil), Options{})
			if !strings.Contains(rep.Action, "lattices at "+strconv.FormatFloat(copies/2, 'g', 4, 64)+" copies") {
				t.Fatalf("%s: by action: %s", name, rep.Action)
			}
			for i := range rep.Blocks {
				for k := range rep.Blocks[i].Levers {
					if l := &rep.Blocks[i].Levers[k]; l.Agreement != "agree" {
						t.Errorf("%s at %v copies, %s, %s: %v by lattice, %v by action", name, copies, rep.Blocks[i].From, l.Name, l.Slope(), l.By(Action))
					}
				}
			}
		}
	}
}

// By action alone, from lattices at fewer copies, against the lattice there.
func TestActionAlone(t *testing.T) {
	n := zoo.LeakyActivator(0.45, 0.02, 2000)
	exact, far := run(t, n, Options{Route: Lattice}), run(t, n, Options{Route: Action})
	for i := range far.Blocks {
		b := &far.Blocks[i]
		for k := range b.Levers {
			s, want := b.Levers[k].Slope(), block(t, exact, b.From).lever(b.Levers[k].Name).Slope()
			if !(s.Low <= want.Value && want.Value <= s.High) || !(float64(s.High-s.Low) < 0.5+0.001*math.Abs(float64(s.Value))) {
				t.Errorf("%s, %s: %v, want %v", b.From, b.Levers[k].Name, s, want)
			}
		}
	}
}

// transcribedPair is the pair of genes with their transcripts, in four species, which no
// lattice holds at any number of copies.
func transcribedPair(t *testing.T, copies float64) *model.Network {
	t.Helper()
	d, err := model.Parse("transcribed.toml", []byte(`
title = "Two genes and their transcripts (invented)"
time = "min"
copies = 60
[species]
tide = {}
ebb = { readout = true }
tow = {}
flow = {}
[constants]
rate = 2.5
half = 1.0
loss = 1.0
make = 1.0
dilution = 0.7
[[reaction]]
name = "tide"
makes = { tide = 1 }
rate = "rate*hill_fall(flow, half, 2)"
[[reaction]]
name = "tow"
makes = { tow = 1 }
rate = "rate*hill_fall(ebb, half, 2)"
[[reaction]]
name = "tide lost"
uses = { tide = 1 }
mass_action = "loss"
[[reaction]]
name = "tow lost"
uses = { tow = 1 }
mass_action = "loss"
[[reaction]]
name = "ebb"
needs = { tide = 1 }
makes = { ebb = 1 }
mass_action = "make"
[[reaction]]
name = "flow"
needs = { tow = 1 }
makes = { flow = 1 }
mass_action = "make"
[[reaction]]
name = "ebb lost"
uses = { ebb = 1 }
mass_action = "dilution"
[[reaction]]
name = "flow lost"
uses = { flow = 1 }
mass_action = "dilution"
`))
	if err != nil {
		t.Fatal(err)
	}
	n, err := d.Bind(copies, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// Where no lattice is in reach, auto takes differences and puts the leading order by
// action beside them, with no error: the prefactor's part is not known. The exponent has no
// unit of time, so that its slopes in all rates add up to 0; and none of amount, so that
// those in rate and half do to that in copies.
func TestActionBesideDifferences(t *testing.T) {
	if race.Enabled {
		t.Skip("takes a minute under the race detector")
	}
	rep := run(t, transcribedPair(t, 12), Options{Hold: hold.Options{Route: hold.Runs, Runs: 20, Seed: 1}})
	if !strings.HasPrefix(rep.Route, "differences") || !strings.Contains(rep.Action, "leading order") {
		t.Fatalf("route %q, by action %q", rep.Route, rep.Action)
	}
	b := block(t, rep, "low")
	slope := func(name string) float64 {
		s := b.lever(name).By(Action)
		if !math.IsNaN(float64(s.Low)) || s.Value != s.Leading {
			t.Errorf("%s: %+v, want the leading order with no error", name, s)
		}
		return float64(s.Value)
	}
	rates := slope("rate") + slope("loss") + slope("make") + slope("dilution")
	if math.Abs(rates) > 0.02*slope("rate") {
		t.Errorf("slopes in the rates add up to %v, want 0 beside %v", rates, slope("rate"))
	}
	if sum, copies := slope("rate")+slope("half"), slope("copies"); math.Abs(sum-copies) > 0.02*copies || copies < 1 {
		t.Errorf("slopes in rate and half add up to %v, that in copies is %v", sum, copies)
	}
}

// What each route refuses, and what stands in its place.
func TestRoutesRefuse(t *testing.T) {
	if race.Enabled {
		t.Skip("takes a minute under the race detector")
	}
	n := design(t, "operator", 0, nil)
	var noise *action.FixedNoiseError
	if _, err := Run(context.Background(), n, Options{Route: Action}); !errors.As(err, &noise) {
		t.Errorf("action of an operator: %v", err)
	}
	var deep *lattice.DimensionError
	if _, err := Run(context.Background(), n, Options{Route: Lattice}); !errors.As(err, &deep) {
		t.Errorf("lattice of seven species: %v", err)
	}
}
