package branch

import (
	"math"
	"testing"

	"holdfast/model"
)

// hopfLocated is the accuracy promised for Hopf points.
const hopfLocated = 1e-8

// brusselator is ∅→X (a), X→Y (b), 2X+Y→3X (1), X→∅ (1).
func brusselator(t testing.TB, a, b float64) *model.Network {
	s := newSketch(100)
	x, y := s.species("x", 1), s.species("y", 1)
	ka, kb, unit := s.constant("a", a), s.constant("b", b), s.constant("unit", 1)
	s.massAction(ka, nil, nil, turn{x})
	s.massAction(kb, turn{x}, nil, turn{y})
	s.massAction(unit, turn{x, x, y}, nil, turn{x, x, x})
	s.massAction(unit, turn{x}, nil, nil)
	return s.network(t)
}

// The scheme rests at x = a, y = b/a and begins to oscillate at b = 1 + a², with
// frequency a: Prigogine and Lefever, J. Chem. Phys. 48 (1968) 1695 (from memory;
// algebra re-derived: trace b − 1 − a², determinant a²).
func TestTrimolecularSchemeHopfPoint(t *testing.T) {
	const a = 1.5
	d := follow(t, brusselator(t, a, 2), "b", 0.5, 6)
	m := one(t, d, Hopf)
	near(t, "b", m.Knob, 1+a*a, hopfLocated)
	near(t, "frequency", m.Frequency, a, hopfLocated)
	near(t, "x", m.Amounts[0], a, hopfLocated)
	near(t, "y", m.Amounts[1], (1+a*a)/a, hopfLocated)
	if len(d.Folds()) != 0 || len(d.Windows) != 1 {
		t.Fatalf("%d folds, %d windows, want 0 and 1", len(d.Folds()), len(d.Windows))
	}
	w := d.Windows[0]
	if w.High.Mark.Kind != Hopf || w.Low.Mark.Kind != RangeEnd {
		t.Errorf("window from %v to %v, want from the range's end to the Hopf point", w.Low.Mark.Kind, w.High.Mark.Kind)
	}
	near(t, "distance in per cent", w.High.Distance, 100*(1+a*a-2)/2, hopfLocated)
}

// The ring of three with one repression, x' = α/(1+zⁿ) − x, y' = x − y, z' = y − z,
// begins to oscillate where n zⁿ/(1+zⁿ) = 8, with frequency √3: for n = 10 at zⁿ = 4,
// α = 5·4^{1/10}. Goodwin's loop; Griffith, J. Theor. Biol. 20 (1968) 202 (from
// memory; algebra: (1+λ)³ = −8 at λ = i√3).
func TestRepressionRingHopfPoint(t *testing.T) {
	s := newSketch(100)
	x, y, z := s.species("x", 1), s.species("y", 1), s.species("z", 1)
	alpha, n, unit := s.constant("alpha", 3), s.constant("n", 10), s.constant("unit", 1)
	s.law("make", over(alpha, plus(num(1), raise(z, n))), nil, turn{x})
	s.massAction(unit, nil, turn{x}, turn{y})
	s.massAction(unit, nil, turn{y}, turn{z})
	for _, w := range []*model.Node{x, y, z} {
		s.massAction(unit, turn{w}, nil, nil)
	}
	d := follow(t, s.network(t), "alpha", 1, 50)
	m := one(t, d, Hopf)
	near(t, "α", m.Knob, 5*math.Pow(4, 0.1), hopfLocated)
	near(t, "frequency", m.Frequency, math.Sqrt(3), hopfLocated)
	near(t, "z", m.Amounts[2], math.Pow(4, 0.1), hopfLocated)
}
