package deterministic

import (
	"context"
	"math/rand/v2"
	"testing"

	"holdfast/deterministic/proof"
	"holdfast/model"
)

// vanishingPair is two genes that activate themselves, with or without leak, and may
// be repressed by the other, lost at first order and by an enzyme that saturates:
// states with one or both species absent, and up to nine in all.
func vanishingPair(t *testing.T, r *rand.Rand) *model.Network {
	d := newDraft(100, "a", "b")
	for i := range 2 {
		act := hillOf(logUniform(r, 1, 10), i, 1, 1.2+3*r.Float64())
		switch r.IntN(3) {
		case 0:
			act = sumOf(model.Number(0.02), act)
		case 1:
			act = model.Call(model.OpMul, act, fallOf(1, 1-i, logUniform(r, 0.3, 3), 1+2*r.Float64()))
		}
		d.law(nil, terms(i), act).add(terms(i), nil, nil, logUniform(r, 0.3, 1))
		if r.IntN(2) == 0 {
			d.law(terms(i), nil, hillOf(logUniform(r, 0.1, 2), i, logUniform(r, 0.1, 3), 1))
		}
	}
	return d.network(t)
}

// randomOperator is two genes whose dimers compete for one to five operators, each
// gene made from its own; rates over two decades, seven species, one total.
func randomOperator(t *testing.T, r *rand.Rand) *model.Network {
	d := newDraft(1, "a", "a2", "b", "b2", "o", "oa2", "ob2")
	for i := 4; i < 7; i++ {
		d.Species[i].Fixed = true
	}
	d.Species[4].Start = float64(1 + r.IntN(5))
	k := func() float64 { return logUniform(r, 0.1, 10) }
	both := func(left, right []model.Term) { d.add(left, nil, right, k()).add(right, nil, left, k()) }
	both(several(0, 2), terms(1))
	both(several(2, 2), terms(3))
	both(terms(4, 1), terms(5))
	both(terms(4, 3), terms(6))
	d.add(nil, terms(5), terms(0), 10*k()).add(nil, terms(6), terms(2), 10*k())
	d.add(nil, terms(4), terms(0), 0.1*k()).add(nil, terms(4), terms(2), 0.1*k())
	return d.add(terms(0), nil, nil, 0.3*k()).add(terms(2), nil, nil, 0.3*k()).network(t)
}

// TestAgainstProof holds the states found against lists proved complete by interval
// branch and prune, a computation of its own.
func TestAgainstProof(t *testing.T) {
	r := rand.New(rand.NewPCG(19, 20))
	proved := 0
	for trial := range 30 {
		n := vanishingPair(t, r)
		if trial%6 == 5 {
			n = randomOperator(t, r)
		}
		p, err := proof.Prove(context.Background(), proof.Problem{Network: n})
		if err != nil || !p.Complete {
			continue
		}
		proved++
		m := survey(t, n)
		if len(m.States) != len(p.Roots) {
			t.Errorf("trial %d: %d states, %d are proved", trial, len(m.States), len(p.Roots))
		}
		for _, s := range m.States {
			inside := false
			for _, root := range p.Roots {
				inside = inside || encloses(root, s)
			}
			if !inside {
				t.Errorf("trial %d: no proved state at %v", trial, s.Amounts)
			}
		}
	}
	if proved < 27 {
		t.Errorf("only %d of 30 lists were proved", proved)
	}
}

// encloses tells whether a state lies in a proved box, up to its own error.
func encloses(root proof.Root, s State) bool {
	for i, x := range s.Amounts {
		slack := s.Quality.Error[i] + 4*epsilon*x
		if x < root.Box[i].Lo-slack || x > root.Box[i].Hi+slack {
			return false
		}
	}
	return true
}
