package deterministic

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// TestFastBindings: the resting states of the dimer switch depend on the ratios of
// binding and parting only, so that they stay the same when both are faster by
// up to 1e9 than the rest.
func TestFastBindings(t *testing.T) {
	want := survey(t, zoo.DimerSwitch())
	if len(want.States) != 3 || want.Stable()[1].Name != "high" {
		t.Fatalf("%d states", len(want.States))
	}
	for _, factor := range []float64{1e-3, 1e3, 1e6, 1e9} {
		got := survey(t, fastDimers(t, factor))
		if len(got.States) != 3 {
			t.Errorf("factor %g: %d states, want 3", factor, len(got.States))
			continue
		}
		for k := range got.States {
			for i, x := range want.States[k].Amounts {
				// Cancellation between rates factor times larger than what is left.
				near(t, "amount", got.States[k].Amounts[i], x, 1e-13*max(factor, 1))
			}
			if got.States[k].Kind != want.States[k].Kind {
				t.Errorf("factor %g: %v, want %v", factor, got.States[k].Kind, want.States[k].Kind)
			}
		}
	}
}

// TestSlowAmongFast: rates 1e21 apart do not hide that a state is stable; where a slow
// rate is the small difference of fast ones, it is trusted as far as its digits go.
func TestSlowAmongFast(t *testing.T) {
	d := newDraft(1, "x", "y")
	d.add(nil, nil, terms(0), 1e-8).add(terms(0), nil, nil, 1e-9)
	d.add(nil, nil, terms(1), 1e13).add(terms(1), nil, nil, 1e12)
	s := survey(t, d.network(t)).States[0]
	if s.Kind != StableNode {
		t.Errorf("kind %v", s.Kind)
	}
	near(t, "slow rate", s.SlowRate, 1e-9, 1e-14)
	// A ⇌ B at f each way, A lost at l: the slow rate is l/2 up to l/f of itself
	// (algebra); f+l is rounded to f·2⁻⁵³, which is 1e-5 of l here.
	d = newDraft(1, "a", "b").add(nil, nil, terms(0), 1e-5).add(terms(0), nil, nil, 1e-6)
	d.add(terms(0), nil, terms(1), 1e5).add(terms(1), nil, terms(0), 1e5)
	s = survey(t, d.network(t)).States[0]
	if s.Kind != StableNode {
		t.Errorf("kind %v", s.Kind)
	}
	near(t, "slow rate of the pair", s.SlowRate, 0.5e-6, 1e-4)
}

// TestUnitsOfAmount: amounts measured in units from 1e-5 to 1e3 molecules give the
// same states in molecules.
func TestUnitsOfAmount(t *testing.T) {
	for _, unit := range []float64{1e-5, 1e-2, 1e3} {
		d := newDraft(1/unit, "u", "v")
		for i := range 2 {
			d.law(nil, terms(i), fallOf(300*unit, 1-i, 100*unit, 2))
			d.add(terms(i), nil, nil, 1)
		}
		m := survey(t, d.network(t))
		low, high := zoo.SymmetricStates(3)
		if len(m.States) != 3 {
			t.Fatalf("unit %g: %d states", unit, len(m.States))
		}
		near(t, "low", m.States[0].Molecules[0], 100*low, 1e-12)
		near(t, "high", m.States[1].Molecules[0], 100*high, 1e-12)
	}
}

// TestOrderOfReactions: permuting species and reactions changes nothing but the
// order of the amounts.
func TestOrderOfReactions(t *testing.T) {
	r := rand.New(rand.NewPCG(13, 14))
	g := randomToggle(r)
	n, _ := g.count()
	for n != 3 {
		g = randomToggle(r)
		n, _ = g.count()
	}
	net := g.network(t)
	want := survey(t, net)
	slices.Reverse(net.Reactions)
	got := survey(t, net)
	for k := range want.States {
		for i := range want.States[k].Amounts {
			near(t, "amount", got.States[k].Amounts[i], want.States[k].Amounts[i], 1e-12)
		}
	}
}

// TestBox: every resting state lies in the box, and the box of a latch is no larger
// than production at its most over loss: leak + drive over b, times k over a.
func TestBox(t *testing.T) {
	m := survey(t, zoo.Latch(100))
	if m.High[0] > 1.02*1.01 || m.High[1] > 1.02/0.45*1.02 || m.Basis[0] != ByBalance {
		t.Errorf("box up to %v by %v", m.High, m.Basis)
	}
	for _, c := range knownCases() {
		m := survey(t, c.net)
		for _, s := range m.States {
			for i, x := range s.Amounts {
				if x < m.Low[i] || x > m.High[i] {
					t.Errorf("%s: species %d of %s at %g, box %g to %g", c.name, i, s.Name, x, m.Low[i], m.High[i])
				}
			}
		}
	}
	m = survey(t, zoo.Telegraph())
	if m.Basis[0] != ByTotals && m.Basis[0] != ByBalance || m.High[0] > 1.01 {
		t.Errorf("gene up to %v by %v", m.High[0], m.Basis[0])
	}
}

// TestLeaklessPair: two genes that activate themselves without leak have 3 × 3
// states, x = (3 ± √5)/2 and 0 each (algebra), four of them with an absent species.
func TestLeaklessPair(t *testing.T) {
	d := newDraft(100, "a", "b")
	for i := range 2 {
		d.law(nil, terms(i), hillOf(3, i, 1, 2))
		d.add(terms(i), nil, nil, 1)
	}
	m := survey(t, d.network(t))
	if len(m.States) != 9 || len(m.Stable()) != 4 || !m.Search.Balanced {
		t.Fatalf("%d states, %d stable, %+v", len(m.States), len(m.Stable()), m.Search)
	}
	high := (3 + math.Sqrt(5)) / 2
	for k, want := range [][]float64{{0, 0}, {0, high}, {high, 0}, {high, high}} {
		s := m.States[k]
		for i, x := range want {
			near(t, s.Name, s.Amounts[i], x, 1e-14)
		}
		if s.Absorbing != (k == 0) {
			t.Errorf("%s: absorbing %v", s.Name, s.Absorbing)
		}
	}
}

// ring is n genes each repressed by the one before.
func ring(t *testing.T, n int, top, steep float64) *model.Network {
	d := newDraft(100, []string{"a", "b", "c", "d", "e"}[:n]...)
	for i := range n {
		d.law(nil, terms(i), fallOf(top, (i+n-1)%n, 1, steep))
		d.add(terms(i), nil, nil, 1)
	}
	return d.network(t)
}

// TestOscillator: three genes in a ring oscillate where the slope at the middle
// state, x(1+xⁿ) = top, is steeper than −2 (the roots of (1+λ)³ = −s³ cross at s = 2;
// algebra): n xⁿ/(1+xⁿ) > 2.
func TestOscillator(t *testing.T) {
	_, err := Survey(context.Background(), ring(t, 3, 10, 4), Options{})
	if !errors.Is(err, ErrNoRestingState) || !strings.Contains(err.Error(), "keep moving") {
		t.Errorf("error %v", err)
	}
	m := survey(t, ring(t, 3, 10, 1.9))
	if len(m.States) != 1 || m.States[0].Kind != StableFocus {
		t.Errorf("states %+v", m.States)
	}
}

// bad are networks without separate stable states, and what the error says.
func TestNoSwitch(t *testing.T) {
	up := newDraft(1, "x").add(nil, terms(0), terms(0), 1)
	piling := newDraft(1, "x", "y").add(nil, nil, terms(0), 1).add(terms(0), nil, terms(1), 1)
	balanced := newDraft(1, "x").add(nil, terms(0), terms(0), 1).add(terms(0), nil, nil, 1)
	balanced.Species[0].Start = 5
	epidemic := newDraft(1, "s", "i", "r").add(terms(0), terms(1), terms(1), 1).add(terms(1), nil, terms(2), 1)
	epidemic.Species[0].Start = 10
	follow := newDraft(1, "x", "y")
	follow.add(nil, terms(1), terms(0), 1).add(terms(0), nil, nil, 1)
	follow.add(nil, terms(0), terms(1), 1).add(terms(1), nil, nil, 1)
	follow.Species[0].Start = 7

	var runaway *RunawayError
	for name, d := range map[string]*draft{"x": up, "y": piling} {
		_, err := Survey(context.Background(), d.network(t), Options{})
		if !errors.As(err, &runaway) || runaway.Species != name {
			t.Errorf("%s: error %v", name, err)
		}
	}
	var drift *ContinuumError
	for name, d := range map[string]*draft{"x": balanced, "s, r": epidemic, "x, y": follow} {
		_, err := Survey(context.Background(), d.network(t), Options{})
		if !errors.As(err, &drift) || strings.Join(drift.Species, ", ") != name {
			t.Errorf("%s: error %v", name, err)
		}
	}
	_, err := Survey(context.Background(), zoo.SymmetricRepression(2, 100), Options{})
	if !errors.Is(err, ErrNoRestingState) || !strings.Contains(err.Error(), "fold or branch point") {
		t.Errorf("on the pitchfork: %v", err)
	}
}

// TestThresholds: production that is exactly 0 below a threshold does not make the
// species count as absent for good: x' = 0.1 + max(0, min(x−2, 5)) − x has
// one state at 0.1 only up to the slope's balance; with production twice as steep,
// x' = 0.1 + max(0, min(2(x−2), 8)) − x, states 0.1, 3.9 and 8.1 (algebra).
func TestThresholds(t *testing.T) {
	x := model.SpeciesRef(0)
	rise := model.Call(model.OpMul, model.Number(2), model.Call(model.OpSub, x, model.Number(2)))
	law := model.Call(model.OpMax, model.Number(0), model.Call(model.OpMin, rise, model.Number(8)))
	d := newDraft(10, "x").law(nil, terms(0), sumOf(model.Number(0.1), law)).add(terms(0), nil, nil, 1)
	got := sortedAmounts(survey(t, d.network(t)), 0)
	want := []float64{0.1, 3.9, 8.1}
	if len(got) != 3 {
		t.Fatalf("states %v, want %v", got, want)
	}
	for k := range want {
		near(t, "state", got[k], want[k], 1e-14)
	}
	d = newDraft(10, "x").law(nil, terms(0), law).add(terms(0), nil, nil, 1) // 0, 4, 8
	if got := sortedAmounts(survey(t, d.network(t)), 0); len(got) != 3 || got[0] != 0 || math.Abs(got[2]-8) > 1e-13 {
		t.Errorf("states %v, want 0, 4, 8", got)
	}
}

// TestBadRates: a law that is negative or not finite at the start or at a state.
func TestBadRates(t *testing.T) {
	x, num := model.SpeciesRef(0), model.Number
	less := func(by float64) *model.Node { return model.Call(model.OpSub, x, num(by)) }
	for _, c := range []struct {
		law           *model.Node
		source, start float64
		want          string
	}{
		{less(50), 100, 0, "at the start"}, // x' = 50 − x, with −50 at 0
		{less(60), 110, 100, "at the state only"},
		{model.Call(model.OpDiv, num(1), x), 1, 0, "rate +Inf at the start"},
	} {
		d := newDraft(1, "x").law(nil, terms(0), c.law)
		d.Species[0].Start = c.start
		n := d.add(nil, nil, terms(0), c.source).add(terms(0), nil, nil, 2).network(t)
		_, err := Survey(context.Background(), n, Options{})
		var rate *RateError
		if !errors.As(err, &rate) || rate.Reaction != "reaction 0" || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: error %v", c.want, err)
		}
	}
}

func TestOptions(t *testing.T) {
	for _, o := range []Options{{Starts: -1}, {CoreShare: 1}, {CoreShare: -0.1}, {CoreShare: math.NaN()}} {
		if _, err := Survey(context.Background(), zoo.Latch(100), o); err == nil {
			t.Errorf("no error for %+v", o)
		}
	}
	m, err := Survey(context.Background(), zoo.Latch(100), Options{Starts: 5})
	if err != nil || len(m.States) != 3 {
		t.Errorf("few starts: %v", err)
	}
}

func TestCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := Survey(ctx, zoo.DimerSwitch(), Options{}); !errors.Is(err, context.Canceled) {
		t.Errorf("error %v", err)
	}
}

// TestWarnings: what is said about few molecules, merging states and the search.
func TestWarnings(t *testing.T) {
	m := survey(t, zoo.Latch(100))
	all := strings.Join(m.Warnings, "\n")
	if want := "low has fewer than 10 molecules"; !strings.Contains(all, want) {
		t.Errorf("no %q in %q", want, all)
	}
	if text := m.Search.String(); !strings.Contains(text, "multi-start") || !strings.Contains(text, "add up") {
		t.Errorf("search %q", text)
	}
	m = survey(t, zoo.LeaklessLatch(0.5*(1-1e-9), 1, 1000))
	if !strings.Contains(strings.Join(m.Warnings, "\n"), "nearly merge") {
		t.Errorf("warnings %q", m.Warnings)
	}
	m = survey(t, zoo.SelfActivator(2, 1, 1, 2, 100))
	if !strings.Contains(strings.Join(m.Warnings, "\n"), "degenerate") {
		t.Errorf("warnings %q", m.Warnings)
	}
}

// TestSeeds: the states that few starts miss are found from seeds near them, and no
// seed adds a state twice or one that is not there.
func TestSeeds(t *testing.T) {
	net := zoo.LeaklessLatch(0.4, 1, 100)
	saddle, sink := zoo.LeaklessStates(0.4, 1)
	var seeds [][]float64
	for _, x := range []float64{0, saddle * 1.001, sink * 0.999, sink} {
		seed := make([]float64, 2)
		seed[net.SpeciesIndex("protein")], seed[net.SpeciesIndex("mrna")] = x, 0.4*x
		seeds = append(seeds, seed)
	}
	m, err := Survey(context.Background(), net, Options{Starts: 1, Seeds: append(seeds, []float64{7, 0}, []float64{1})})
	if err != nil {
		t.Fatal(err)
	}
	if len(m.States) != 3 || m.States[0].Amounts[0] != 0 {
		t.Fatalf("%d states: %v", len(m.States), m.States)
	}
	near(t, "sink", m.States[1].Amounts[net.SpeciesIndex("protein")], sink, 1e-12)
	near(t, "saddle", m.States[2].Amounts[net.SpeciesIndex("protein")], saddle, 1e-12)
}
