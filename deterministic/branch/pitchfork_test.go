package branch

import (
	"fmt"
	"testing"

	"holdfast/internal/zoo"
)

// Symmetric repression becomes bistable at α = n(n−1)^{−(n+1)/n}: 2, 1.4171383,
// 1.1905508 for n = 2, 2.5, 3 (computed; algebra). With both α turned together the
// network keeps its symmetry, and the threshold is a pitchfork and no fold.
func TestSymmetricRepressionPitchforks(t *testing.T) {
	for _, n := range []float64{2, 2.5, 3} {
		for _, alpha := range []float64{3, 0.9} { // bistable today, and not
			d := follow(t, zoo.AsymmetricRepression(alpha, alpha, n, n, 100), "alpha1*alpha2", 0.25, 25)
			m := one(t, d, Pitchfork)
			want := zoo.SymmetricPitchfork(n)
			near(t, fmt.Sprintf("pitchfork for n = %g", n), m.Knob, want*want, 2*located)
			near(t, "v = u", m.Amounts[1], m.Amounts[0], located)
			if folds := d.Folds(); len(folds) != 0 {
				t.Errorf("n = %g: the pitchfork was called a fold: %v", n, folds)
			}
			if len(d.Branches) != 2 {
				t.Errorf("n = %g: %d branches, want the symmetric one and the pair", n, len(d.Branches))
			}
			for _, w := range d.Windows {
				end := w.Low
				if alpha < want {
					end = w.High
				}
				if end.Mark.Kind != Pitchfork {
					t.Errorf("n = %g, α = %g: state %s ends at %v, want the pitchfork", n, alpha, w.State, end.Mark.Kind)
				}
			}
		}
	}
}

// Turned alone, α₁ breaks the symmetry: what was a pitchfork are folds.
func TestBrokenSymmetryHasFolds(t *testing.T) {
	d := follow(t, zoo.SymmetricRepression(3, 100), "alpha1", 0.5, 8)
	if len(d.Folds()) != 2 || len(d.Marks(Pitchfork)) != 0 {
		t.Errorf("%d folds and %d pitchforks, want 2 and none", len(d.Folds()), len(d.Marks(Pitchfork)))
	}
}

// x' = βx/(K+x) − γx has x = 0 and x = β/γ − K, which cross at β = γK (algebra).
func TestTranscriticalPoint(t *testing.T) {
	for _, beta := range []float64{0.5, 4} {
		d := follow(t, zoo.SelfActivator(beta, 2, 0.5, 1, 100), "beta", 0.1, 5)
		m := one(t, d, Transcritical)
		near(t, "crossing", m.Knob, 1, located)
		if m.Amounts[0] != 0 {
			t.Errorf("crossing at x = %v, want 0", m.Amounts[0])
		}
		if len(d.Folds()) != 0 || len(d.Branches) != 2 {
			t.Errorf("%d folds, %d branches, want none and 2", len(d.Folds()), len(d.Branches))
		}
		for _, b := range d.Branches {
			for _, p := range b.Points {
				if p.Amounts[0] < 0 {
					t.Errorf("amount %v at %v", p.Amounts[0], p.Knob)
				}
			}
		}
		w := d.Windows[0]
		end := w.High
		if beta > 1 {
			end = w.Low
		}
		if len(d.Windows) != 1 || end.Mark.Kind != Transcritical {
			t.Errorf("β = %g: the stable state ends at %v, want the crossing", beta, end.Mark.Kind)
		}
	}
}
