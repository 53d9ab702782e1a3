package resting

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"holdfast/deterministic"
	"holdfast/internal/zoo"
	"holdfast/model"
)

func network(t *testing.T, text string) *model.Network {
	t.Helper()
	d, err := model.Parse("test.toml", []byte("title = \"t\"\ntime = \"min\"\ncopies = 100\n"+text))
	if err != nil {
		t.Fatal(err)
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// spike is x' = 1 + 2 exp(−(10⁴(x−2))²) − x, y' = x − y: besides x = 1 two states at
// x = 2 ∓ 10⁻⁴√ln(2/(x−1)), a ten-thousandth of the box wide (algebra).
const spike = `
[species]
x = { start = 1, readout = true }
y = { start = 1 }
[[reaction]]
name = "make x"
makes = { x = 1 }
rate = "1 + 2*exp(-(1e4*(x - 2))^2)"
[[reaction]]
name = "make y"
needs = { x = 1 }
makes = { y = 1 }
mass_action = 1
[[reaction]]
name = "lose x"
uses = { x = 1 }
mass_action = 1
[[reaction]]
name = "lose y"
uses = { y = 1 }
mass_action = 1
`

// A pair of states that multi-start Newton does not see is proved, and then is in
// the map with its stability.
func TestMissedStatesAreSurveyedFromTheProof(t *testing.T) {
	n := network(t, spike)
	var one *deterministic.OneStateError
	if _, err := deterministic.Survey(t.Context(), n, deterministic.Options{}); !errors.As(err, &one) {
		t.Fatalf("the survey alone gives %v; the test needs a narrower spike", err)
	}
	l, err := States(t.Context(), n)
	if err != nil {
		t.Fatal(err)
	}
	if !l.Complete() || len(l.Map.States) != 3 || len(l.Map.Stable()) != 2 {
		t.Fatalf("%v: %d states", l, len(l.Map.States))
	}
	for _, s := range l.Map.States[1:] {
		sign := map[deterministic.Kind]float64{deterministic.StableNode: 1, deterministic.Saddle: -1}[s.Kind]
		x := s.Amounts[0]
		if want := 2 + sign*1e-4*math.Sqrt(math.Log(2/(x-1))); math.Abs(x-want) > 1e-12 {
			t.Errorf("%s at %.15g, want %.15g", s.Name, x, want)
		}
	}
	if text := strings.Join(l.Warnings, "\n"); !strings.Contains(text, "the proof found: saddle, high") {
		t.Errorf("warnings %q", text)
	}
}

// At the fold itself nothing can be proved: ab = 1/2, mrna 1/2, protein 1 (Griffith,
// J. Theor. Biol. 20 (1968) 209; the closed form is common practice).
func TestFoldResists(t *testing.T) {
	l, err := States(t.Context(), zoo.LeaklessLatch(0.5, 1, 100))
	if l == nil {
		t.Fatal(err)
	}
	text := l.String()
	if l.Complete() || !strings.HasPrefix(text, "not proved; what resisted: mrna 0.") || !strings.Contains(text, "protein ") {
		t.Errorf("%q", text)
	}
}

// A law with a kink at a state: x' = min(1 + 2 max(x − 1, 0), 3) − x rests at 3 and,
// where max changes over, at 1.
func TestStateAtAKink(t *testing.T) {
	l, _ := States(t.Context(), network(t, `
[species]
x = { start = 1 }
[[reaction]]
name = "make"
makes = { x = 1 }
rate = "min(1 + 2*max(x - 1, 0), 3)"
[[reaction]]
name = "lose"
uses = { x = 1 }
mass_action = 1
`))
	if l == nil || len(l.Map.States) != 2 {
		t.Fatalf("%v", l)
	}
	if text := strings.Join(l.Map.Warnings, "\n"); !strings.Contains(text, `degenerate1 lies at a kink, and its stability is not told: the law of reaction "make" has no derivative there, at the kink of max(`) {
		t.Errorf("%v; warnings %q", l, text)
	}
}

// Beyond MostFree free amounts no proof is tried, and that is said.
func TestManyAmounts(t *testing.T) {
	var text strings.Builder
	text.WriteString("[species]\n")
	for s := range strings.SplitSeq("abcdefg", "") {
		text.WriteString(s + " = { start = 1 }\n")
	}
	for s := range strings.SplitSeq("abcdefg", "") {
		text.WriteString("[[reaction]]\nname = \"make " + s + "\"\nmakes = { " + s + " = 1 }\nmass_action = 1\n")
		text.WriteString("[[reaction]]\nname = \"lose " + s + "\"\nuses = { " + s + " = 1 }\nmass_action = 1\n")
	}
	l, _ := States(t.Context(), network(t, text.String()))
	if l == nil || l.Complete() || !strings.HasPrefix(l.String(), "multi-start, not proved: 7 amounts are free") {
		t.Errorf("%v", l)
	}
}

func TestCancelled(t *testing.T) {
	ctx, cancel := context.WithCancel(t.Context())
	cancel()
	if _, err := States(ctx, zoo.Latch(100)); !errors.Is(err, context.Canceled) {
		t.Errorf("error %v", err)
	}
}
