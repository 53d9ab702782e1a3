package deterministic

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// survey is Survey where one stable state only, or two that share a lattice point,
// are no error: the map is whole all the same.
func survey(t testing.TB, n *model.Network) *Map {
	t.Helper()
	m, err := Survey(context.Background(), n, Options{})
	var one *OneStateError
	var same *IndistinctError
	if err != nil && !errors.As(err, &one) && !errors.As(err, &same) {
		t.Fatalf("Survey: %v", err)
	}
	return m
}

// near tells whether got is want to within tolerance relative to want.
func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance*math.Abs(want)) {
		t.Errorf("%s = %.17g, want %.17g within %g", what, got, want, tolerance)
	}
}

// sortedAmounts lists species i of all states in ascending order.
func sortedAmounts(m *Map, i int) []float64 {
	var out []float64
	for _, s := range m.States {
		out = append(out, s.Amounts[i])
	}
	slices.Sort(out)
	return out
}

// knownStates are networks whose resting states are known from outside: amounts of
// one species, ascending, and the number of stable states.
type knownStates struct {
	name      string
	net       *model.Network
	species   int
	amounts   []float64
	stable    int
	tolerance float64
}

func knownCases() []knownStates {
	// Lewis, Slack, Wolpert, J. Theor. Biol. 65 (1977) 579: the double state at the
	// fold point is known, the third from Vieta's formula on the cubic.
	saddle, sink := zoo.LeaklessStates(0.45, 0.9) // Griffith, J. Theor. Biol. 20 (1968) 209
	low, high := zoo.SymmetricStates(3)           // Gardner, Cantor, Collins, Nature 403 (2000) 339; algebra
	mid := zoo.SymmetricSaddle(3)                 // Cardano
	latch := zoo.LatchStates()                    // computed, 30 digits
	ind := zoo.InducibleStates()                  // computed, six digits; constants from memory
	powers, _ := zoo.SchloglRoots()
	// A tolerance of 1e-13 is a few hundred roundings, the worst conditioning here.
	return []knownStates{
		{"latch", zoo.Latch(100), 1, []float64{latch[0][1], latch[1][1], latch[2][1]}, 2, 1e-13},
		{"latch transcript", zoo.Latch(100), 0, []float64{latch[0][0], latch[1][0], latch[2][0]}, 2, 1e-13},
		{"leakless latch", zoo.LeaklessLatch(0.45, 0.9, 100), 1, []float64{0, saddle, sink}, 2, 1e-13},
		{"symmetric repression", zoo.SymmetricRepression(3, 50), 0, []float64{low, mid, high}, 2, 1e-13},
		{"inducible repression", zoo.InducibleRepression(0, 1), 0, ind[:], 2, 2e-5},
		{"Schlögl", zoo.Schlogl(), 0, powers[:], 2, 1e-13},
		// u = v with u(1+uⁿ) = α below the pitchfork: α = 1.2, n = 2 gives u = 0.75514… by Cardano.
		{"below the pitchfork", zoo.SymmetricRepression(1.2, 50), 0, []float64{zoo.SymmetricSaddle(1.2)}, 1, 1e-13},
		// x' = β x²/(1+x²) − x: x = (β ± √(β²−4))/2 and 0 (algebra).
		{"self-activator", zoo.SelfActivator(2.5, 1, 1, 2, 10), 0, []float64{0, 0.5, 2}, 2, 1e-13},
		{"batches", zoo.BatchesOfFive(), 0, []float64{25}, 1, 1e-13},
		{"birth–death", zoo.BirthDeath(), 0, []float64{0}, 1, 0},
		// P + 2 P2 = 100, 0.0005 P² = 0.01 P2: P = −5 + √1025·… from P² + 10 P − 1000 = 0.
		{"dimerisation", zoo.Dimerisation(), 0, []float64{-5 + math.Sqrt(1025)}, 1, 1e-13},
		// mean 103.8·4.3/23.1: Peccoud and Ycart, Theor. Popul. Biol. 48 (1995) 222.
		{"telegraph", zoo.Telegraph(), 2, []float64{103.8 * 4.3 / 23.1}, 1, 1e-13},
		{"chain", zoo.Chain(8, 1, 100), 8, []float64{100}, 1, 0},
	}
}

func TestKnownStates(t *testing.T) {
	for _, c := range knownCases() {
		t.Run(c.name, func(t *testing.T) {
			m := survey(t, c.net)
			got := sortedAmounts(m, c.species)
			if len(got) != len(c.amounts) || countKind(m.States, Kind.Stable) != c.stable {
				t.Fatalf("states %v (%d stable), want %v (%d stable)",
					got, countKind(m.States, Kind.Stable), c.amounts, c.stable)
			}
			for k, want := range c.amounts {
				near(t, fmt.Sprint("state ", k), got[k], want, c.tolerance)
			}
			checkErrorBounds(t, m, c)
			for _, s := range m.States {
				if s.Quality.Residual > 1e-14 || s.Quality.Isolation > 1e-6 {
					t.Errorf("%s: residual %g, isolation %g", s.Name, s.Quality.Residual, s.Quality.Isolation)
				}
			}
			if m.Search.Checked && !m.Search.Balanced {
				t.Error("the indices do not add up")
			}
		})
	}
}

// checkErrorBounds checks that each state known to full precision lies within its
// own error bound, and half a unit in the last place of the known value.
func checkErrorBounds(t *testing.T, m *Map, c knownStates) {
	t.Helper()
	if c.tolerance > 1e-13 {
		return
	}
	for _, want := range c.amounts {
		inside := slices.ContainsFunc(m.States, func(s State) bool {
			return math.Abs(s.Amounts[c.species]-want) <= s.Quality.Error[c.species]+2*epsilon*want
		})
		if !inside {
			t.Errorf("no state holds %.17g within its error bound", want)
		}
	}
}

// TestLeaklessTypes: the origin is a sink with eigenvalues −a and −b, the outer pair
// a saddle and a sink (Griffith, J. Theor. Biol. 20 (1968) 209).
func TestLeaklessTypes(t *testing.T) {
	const a, b = 0.45, 0.9
	m := survey(t, zoo.LeaklessLatch(a, b, 100))
	low, high, saddle := m.States[0], m.States[1], m.States[2]
	if low.Kind != StableNode || high.Kind != StableNode || saddle.Kind != Saddle || saddle.UnstableDirections != 1 {
		t.Fatalf("kinds %v, %v, %v", low.Kind, high.Kind, saddle.Kind)
	}
	near(t, "slow eigenvalue at 0", real(low.Eigenvalues[0]), -a, 1e-15)
	near(t, "fast eigenvalue at 0", real(low.Eigenvalues[1]), -b, 1e-15)
	near(t, "slow rate", low.SlowRate, a, 1e-15)
	near(t, "correlation time", low.CorrelationTime(), 1/a, 1e-15)
	// det J = ab(1 − 2/(1+x²)) at the outer states (algebra).
	for _, s := range []State{high, saddle} {
		x := s.Amounts[1]
		det := real(s.Eigenvalues[0] * s.Eigenvalues[1])
		near(t, s.Name+" determinant", det, a*b*(1-2/(1+x*x)), 1e-12)
		near(t, s.Name+" trace", real(s.Eigenvalues[0]+s.Eigenvalues[1]), -a-b, 1e-14)
	}
	if !low.Absorbing || high.Absorbing {
		t.Errorf("absorbing: low %v, high %v, want true, false", low.Absorbing, high.Absorbing)
	}
}

// TestNames: states are named by the readout ascending.
func TestNames(t *testing.T) {
	m := survey(t, zoo.SymmetricRepression(3, 50)) // readout v
	if m.States[0].Name != "low" || m.States[1].Name != "high" || m.States[2].Name != "saddle" {
		t.Errorf("names %s, %s, %s", m.States[0].Name, m.States[1].Name, m.States[2].Name)
	}
	if !(m.States[0].Amounts[1] < m.States[1].Amounts[1]) {
		t.Error("low is not the lower of the readout")
	}
	near(t, "molecules", m.States[0].Molecules[0], 50*m.States[0].Amounts[0], 1e-15)
	if got := survey(t, zoo.ImmigrationDeath(1, 0.1)).States[0].Name; got != "only" {
		t.Errorf("the only state is called %q", got)
	}
}

// TestOneState: the error carries the state and says so.
func TestOneState(t *testing.T) {
	m, err := Survey(context.Background(), zoo.ImmigrationDeath(1, 0.1), Options{})
	var one *OneStateError
	if !errors.As(err, &one) || m == nil {
		t.Fatalf("map %v, error %v", m, err)
	}
	near(t, "state", one.State.Amounts[0], 10, 1e-14)
	want := "not a switch here: there is one stable state only, at a = 10 (10 molecules)"
	if err.Error() != want {
		t.Errorf("message %q, want %q", err, want)
	}
}
