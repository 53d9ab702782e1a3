package survey

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"holdfast/analysis/hold"
	"holdfast/deterministic"
	"holdfast/deterministic/branch"
	"holdfast/internal/zoo"
	"holdfast/model"
)

// run maps a network with the knobs.
func run(t *testing.T, n *model.Network, k ...Knob) *Report {
	t.Helper()
	r, err := Run(t.Context(), n, Options{Knobs: k})
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func near(t *testing.T, what string, got hold.Value, want, relative float64) {
	t.Helper()
	if !(math.Abs(float64(got)-want) <= relative*math.Abs(want)) {
		t.Errorf("%s is %.15g, want %.15g", what, float64(got), want)
	}
}

// specials lists the special points of one kind.
func specials(r *Report, kind branch.Kind) []Special {
	var out []Special
	for _, s := range r.Diagram.Specials {
		if s.Kind == kind.String() {
			out = append(out, s)
		}
	}
	return out
}

// located is the accuracy promised for folds.
const located = 1e-10

// The leakless latch folds at ab = 1/2 (Griffith, J. Theor. Biol. 20 (1968) 209; the
// closed form is common practice): with the product as the knob, the window of the
// high state ends there, and the low one, at zero molecules, never does.
func TestLeaklessLatchWindow(t *testing.T) {
	const a, b = 0.4, 0.9
	r := run(t, zoo.LeaklessLatch(a, b, 100), Knob{"a*b", 0.1, 1})
	if !r.List.Proved || len(r.Diagram.Windows) != 2 {
		t.Fatalf("%v; %v", r.List, r.Diagram.Windows)
	}
	low, high := r.Diagram.Windows[0], r.Diagram.Windows[1]
	near(t, "fold", high.High.Knob, 0.5, located)
	near(t, "distance", high.High.Distance, 100*(0.5-a*b)/(a*b), located)
	near(t, "distance", high.Low.Distance, 100*(a*b-0.1)/(a*b), 1e-14)
	if high.High.Kind != "fold" || high.Low.Kind != "end of the range" || low.High.Kind != "end of the range" {
		t.Errorf("windows %+v", r.Diagram.Windows)
	}
	folds := specials(r, branch.Fold)
	if len(folds) != 1 || len(r.Diagram.Specials) != 1 || folds[0].States != "below" {
		t.Fatalf("special points %+v", r.Diagram.Specials)
	}
	near(t, "protein at the fold", folds[0].Amounts[1], 1, located)
	for i, want := range []Stretch{{0.1, 0.5, 2}, {0.5, 1, 1}} {
		got := r.Diagram.Stretches[i]
		near(t, "stretch", got.Low, float64(want.Low), located)
		near(t, "stretch", got.High, float64(want.High), located)
		if got.Stable != want.Stable {
			t.Errorf("%d stable states, want %d", got.Stable, want.Stable)
		}
	}
}

// The Jacobian of the leakless latch has trace −(a+b) and determinant ab − f', with
// f' = 2x/(1+x²)², so that the slow rate on the way to the fold is known in closed
// form; the distances fall by halves. In a alone the fold is at 1/(2b).
func TestNoiseTowardsTheFold(t *testing.T) {
	const a, b = 0.4, 0.9
	n := zoo.LeaklessLatch(a, b, 100)
	r := run(t, n, Knob{"a", 0.1, 1})
	if len(r.Diagram.Noise) != 1 || len(r.Diagram.Noise[0].Rows) != noiseRows {
		t.Fatalf("noise %+v", r.Diagram.Noise)
	}
	for k, row := range r.Diagram.Noise[0].Rows {
		left := (0.5/b - a) * math.Exp2(-float64(k))
		near(t, "knob", row.Knob, 0.5/b-left, located)
		near(t, "distance", row.Distance, 100*left/a, 1e-6)
		_, x := zoo.LeaklessStates(float64(row.Knob), b)
		trace, det := float64(row.Knob)+b, float64(row.Knob)*b-2*x/math.Pow(1+x*x, 2)
		// The root of 1 − 4a²b² magnifies rounding by up to 2¹⁰, as det does by its size.
		near(t, "protein", row.Molecules, 100*x, 1e-10)
		near(t, "slow rate", row.SlowRate, 2*det/(trace+math.Sqrt(trace*trace-4*det)), 1e-9)
		near(t, "correlation time", row.CorrelationTime, 1/float64(row.SlowRate), 1e-14)
	}
	near(t, "sd today", r.Diagram.Noise[0].Rows[0].Deviation, float64(r.States[1].Deviation[1]), 1e-9)
}

// Two genes that repress each other alike lose their two states in a pitchfork at
// α = 2, α₁α₂ = 4 (algebra), which is not a fold.
func TestPitchforkIsNotAFold(t *testing.T) {
	r := run(t, zoo.SymmetricRepression(3, 100), Knob{"alpha1*alpha2", 1, 25})
	p := specials(r, branch.Pitchfork)
	if len(p) != 1 || len(r.Diagram.Specials) != 1 {
		t.Fatalf("special points %+v", r.Diagram.Specials)
	}
	near(t, "pitchfork", p[0].Knob, 4, located)
	for _, w := range r.Diagram.Windows {
		if w.Low.Kind != "pitchfork" {
			t.Errorf("%s ends in a %s", w.State, w.Low.Kind)
		}
	}
}

// The pair with an inducer folds at the inducer that zoo gives (computed; Gardner,
// Cantor, Collins, Nature 403 (2000) 339, constants from memory), to its
// four digits.
func TestInducerFold(t *testing.T) {
	r := run(t, zoo.InducibleRepression(0, 100), Knob{"inducer", 0, 1e-4})
	folds := specials(r, branch.Fold)
	if len(folds) != 1 {
		t.Fatalf("special points %+v", r.Diagram.Specials)
	}
	near(t, "fold", folds[0].Knob, zoo.InducibleFold(), 0.5/3923)
	for _, w := range r.Diagram.Windows {
		if !math.IsNaN(float64(w.Low.Distance)) {
			t.Errorf("distance %v in per cent of 0", w.Low.Distance)
		}
	}
}

// The fold curve of the leaky activator is r = 2x/(1+x²)², s = x²(1−x²)/(1+x²)², with
// its cusp at x = 1/√3, r = 3√3/8, s = 1/8: Lewis, Slack, Wolpert, J. Theor. Biol. 65
// (1977) 579 (from memory; algebra re-derived).
func TestLeakyCurveAndCusp(t *testing.T) {
	d := run(t, zoo.LeakyActivator(0.5, 0.03, 100), Knob{"r", 0.2, 0.8}, Knob{"s", 0.001, 0.2}).FoldDiagram
	cusps := 0
	for _, c := range d.Curves {
		if len(c.Shown) < shownPoints || c.Shown[0] != 0 || c.Shown[len(c.Shown)-1] != len(c.Points)-1 {
			t.Errorf("shown %v of %d", c.Shown, len(c.Points))
		}
		for _, p := range c.Points {
			r, s := zoo.LeakyFold(float64(p.Amounts[0]))
			near(t, "r", p.First, r, located)
			near(t, "s", p.Second, s, 1e-9) // s is flat in x at the cusp and steep at x = 0
			if p.Cusp {
				cusps++
				near(t, "r at the cusp", p.First, 3*math.Sqrt(3)/8, located)
				near(t, "s at the cusp", p.Second, 0.125, located)
			}
		}
	}
	if cusps != 1 {
		t.Errorf("%d cusps", cusps)
	}
}

// Folds of u' = α₁/(1+v²) − u, v' = α₂/(1+u²) − v are where 4pq = 1 with p = v²/(1+v²),
// q = u²/(1+u²) (computed; algebra), the cusp at α₁ = α₂ = 2.
func TestAsymmetricCurve(t *testing.T) {
	d := run(t, zoo.AsymmetricRepression(3, 3, 2, 2, 100), Knob{"alpha1", 1.5, 5}, Knob{"alpha2", 1.5, 5}).FoldDiagram
	points, cusps := 0, 0
	for _, c := range d.Curves {
		for _, p := range c.Points {
			u2, v2 := math.Pow(float64(p.Amounts[0]), 2), math.Pow(float64(p.Amounts[1]), 2)
			near(t, "4pq", hold.Value(4*u2/(1+u2)*v2/(1+v2)), 1, 1e-9)
			points++
			if p.Cusp {
				cusps++
				near(t, "α₁ at the cusp", p.First, 2, located)
				near(t, "α₂ at the cusp", p.Second, 2, located)
			}
		}
	}
	if points < 20 || cusps != 1 {
		t.Errorf("%d points, %d cusps", points, cusps)
	}
}

// One stable state: an error without knobs, and with one a diagram that shows where
// the switch is born, at ab = 1/2 as above.
func TestNoSwitchToday(t *testing.T) {
	n := zoo.LeaklessLatch(0.7, 0.9, 100)
	var one *deterministic.OneStateError
	r, err := Run(t.Context(), n, Options{})
	if !errors.As(err, &one) || r == nil || len(r.States) != 1 {
		t.Fatalf("%v", err)
	}
	r = run(t, n, Knob{"a", 0.1, 1})
	folds := specials(r, branch.Fold)
	if len(folds) != 1 || len(r.Diagram.Stretches) != 2 || r.Diagram.Stretches[0].Stable != 2 {
		t.Fatalf("%+v", r.Diagram)
	}
	near(t, "fold", folds[0].Knob, 0.5/0.9, located)
	if text := strings.Join(r.Warnings, "\n"); !strings.Contains(text, "at today's setting: not a switch here") {
		t.Errorf("warnings %q", text)
	}
}

// A ring of three repressors x' = α/(1+y⁴) − x rests at a = b = c = x with the slope
// −4x⁴/(1+x⁴) of its loop, and oscillates from where that is −2: x = 1, α = 2, with
// frequency √3 (the eigenvalues are −1 − 2 ω with ω³ = 1; algebra). There today has no
// stable state.
func TestNoStateToday(t *testing.T) {
	var text strings.Builder
	text.WriteString("time = \"min\"\ncopies = 100\n[species]\na = { start = 1 }\nb = { start = 0.5 }\nc = { start = 0.1 }\n[constants]\nalpha = 20\n")
	for _, p := range []string{"ac", "ba", "cb"} {
		text.WriteString("[[reaction]]\nname = \"make " + p[:1] + "\"\nmakes = { " + p[:1] + " = 1 }\nrate = \"alpha*hill_fall(" + p[1:] + ", 1, 4)\"\n" +
			"[[reaction]]\nname = \"lose " + p[:1] + "\"\nuses = { " + p[:1] + " = 1 }\nmass_action = 1\n")
	}
	d, err := model.Parse("ring.toml", []byte(text.String()))
	if err != nil {
		t.Fatal(err)
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := Run(t.Context(), n, Options{}); !errors.Is(err, deterministic.ErrNoRestingState) {
		t.Errorf("error %v", err)
	}
	r := run(t, n, Knob{"alpha", 0.5, 21})
	hopf := specials(r, branch.Hopf)
	if len(hopf) != 1 || len(r.States) != 0 {
		t.Fatalf("%+v", r.Diagram.Specials)
	}
	near(t, "Hopf point", hopf[0].Knob, 2, located)
	near(t, "frequency", hopf[0].Frequency, math.Sqrt(3), 1e-9)
}

// Bad knobs, each refused before any work.
func TestKnobErrors(t *testing.T) {
	n := zoo.Latch(100)
	for want, knobs := range map[string][]Knob{
		`no constant, total or product "aa"`: {{"aa", 0.2, 0.8}},
		"write 0.2:0.8":                      {{"a", 0.8, 0.2}},
		"the range is empty":                 {{"a", 0.8, 0.8}},
		"today's a is 0.45":                  {{"a", 0.5, 0.8}},
		"turn the same thing":                {{"a", 0.2, 0.8}, {"a*b", 0.2, 0.8}},
		"3 knobs are given":                  {{"a", 0.2, 0.8}, {"b", 0.2, 2}, {"k", 0.2, 2}},
	} {
		var knob *KnobError
		r, err := Run(t.Context(), n, Options{Knobs: knobs})
		if r != nil || !errors.As(err, &knob) || !strings.Contains(err.Error(), want) {
			t.Errorf("%v: error %v", knobs, err)
		}
	}
}

// A context that is done stops a map.
func TestCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	if r, err := Run(ctx, zoo.Latch(100), Options{Knobs: []Knob{{"a", 0.2, 0.8}}}); r != nil || !errors.Is(err, context.Canceled) {
		t.Errorf("%v", err)
	}
}

// The basins of two genes that repress each other alike mirror each other in the
// diagonal, which is the separatrix.
func TestSymmetricBasins(t *testing.T) {
	r := run(t, zoo.SymmetricRepression(3, 100))
	for _, s := range r.Basins.Shares {
		if math.Abs(float64(s.Share)-50) > float64(s.Error)+1e-9 {
			t.Errorf("%s has %v ± %v %%", s.State, s.Share, s.Error)
		}
	}
	if len(r.Separatrices) != 1 {
		t.Fatalf("%d separatrices", len(r.Separatrices))
	}
	s := r.Separatrices[0]
	for _, p := range s.Points {
		near(t, "u on the separatrix", p[0], float64(p[1]), 1e-8)
	}
	near(t, "the saddle", s.Points[s.At][0], zoo.SymmetricSaddle(3), 1e-12)
}
