package action

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"holdfast/deterministic"
	"holdfast/internal/zoo"
)

// TestFixedCount: an operator that binds is refused; a plasmid that nothing changes is
// not, and counts as what it is in the laws.
func TestFixedCount(t *testing.T) {
	m, err := deterministic.Survey(context.Background(), zoo.DimerSwitch(), deterministic.Options{})
	if m == nil {
		t.Fatal(err)
	}
	_, err = Survey(context.Background(), m, Options{})
	var fixed *FixedNoiseError
	if !errors.As(err, &fixed) || fixed.Species != "o" {
		t.Errorf("dimer switch: %v", err)
	}
	with := strings.Replace(burstLatch, "p = { start = 0, readout = true }", "p = { start = 0, readout = true }\nplasmid = { start = 4, fixed_count = true }", 1)
	with = strings.Replace(with, "leak + drive", "(leak + drive", 1)
	with = strings.Replace(with, "/(1+p^2)", "/(1+p^2))*plasmid/4", 1)
	want := exponent(t, routes(t, parse(t, burstLatch, nil)), "low", "high").S
	near(t, "S with plasmids", exponent(t, routes(t, parse(t, with, nil)), "low", "high").S, want, 1e-9)
}

// TestNever: the leakless latch is never left from off; from on there is a path.
func TestNever(t *testing.T) {
	r := routes(t, zoo.LeaklessLatch(0.4, 1, 100))
	off := r.Find("low", "high")
	var never *NeverError
	if !off.Never || !math.IsInf(off.S, 1) || !errors.As(off.Err, &never) {
		t.Errorf("off: %+v", off)
	}
	if on := r.Find("high", "low"); on.Never || len(on.Paths) != 1 {
		t.Errorf("on: %+v", on)
	}
}

// TestEnds: a path starts at a stable state, climbs to a saddle, and keeps the totals.
func TestEnds(t *testing.T) {
	n := zoo.Latch(100)
	m, err := deterministic.Survey(context.Background(), n, deterministic.Options{})
	if err != nil {
		t.Fatal(err)
	}
	low, high, saddle := m.States[0], m.States[1], m.States[2]
	var end *EndError
	if _, err := Solve(context.Background(), Problem{Network: n, From: low, Saddle: high}); !errors.As(err, &end) {
		t.Errorf("to a stable state: %v", err)
	}
	if _, err := Solve(context.Background(), Problem{Network: n, From: saddle, Saddle: saddle}); !errors.As(err, &end) {
		t.Errorf("from a saddle: %v", err)
	}
	if _, err := Solve(context.Background(), Problem{Network: n, From: low, Saddle: saddle, Tolerance: math.NaN()}); err == nil {
		t.Error("a tolerance that is no number is taken")
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := Solve(ctx, Problem{Network: n, From: low, Saddle: saddle}); !errors.Is(err, context.Canceled) {
		t.Errorf("cancelled: %v", err)
	}
	pair := parse(t, changed, nil)
	state := deterministic.State{Kind: deterministic.StableNode, Amounts: []float64{0.05, 1, 0.05, 1}}
	pass := deterministic.State{Kind: deterministic.Saddle, UnstableDirections: 1, Amounts: []float64{0.4, 2, 0.1, 1}}
	var path *PathError
	if _, err := Solve(context.Background(), Problem{Network: pair, From: state, Saddle: pass}); !errors.As(err, &path) {
		t.Errorf("other totals: %v", err)
	}
}

// TestNegativeRate: a law that falls below 0 on the way is named with its place.
func TestNegativeRate(t *testing.T) {
	n := parse(t, strings.Replace(kinkedLatch, "leak + min(max(2*(p-0.3), 0), 1)", "leak + min(max(2*(p-0.3), 0), 1) - 30*max(0.05-abs(p-0.45), 0)", 1), nil)
	_, err := Solve(context.Background(), Problem{
		Network: n,
		From:    deterministic.State{Name: "low", Kind: deterministic.StableNode, Amounts: []float64{0.05}},
		Saddle:  deterministic.State{Name: "saddle", Kind: deterministic.Saddle, UnstableDirections: 1, Amounts: []float64{0.55}},
	})
	var rate *RateError
	if !errors.As(err, &rate) || rate.Reaction != "expression" || !(rate.Value < 0) {
		t.Errorf("a rate below 0: %v", err)
	}
}

// TestOneState: without a second state there is no pair, and no error.
func TestOneState(t *testing.T) {
	r := routes(t, zoo.ImmigrationDeath(1, 0.1))
	if len(r.Pairs) != 0 || len(r.Joins) != 0 {
		t.Errorf("pairs %v, joins %v", r.Pairs, r.Joins)
	}
}
