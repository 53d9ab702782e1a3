package sizing_test

import (
	"context"
	"errors"
	"math"
	"strings"
	"testing"

	"holdfast/analysis/hold"
	"holdfast/analysis/sizing"
	"holdfast/internal/zoo"
	"holdfast/model"
)

// twoStates is a chain of two states with the mean dwells 1/forth and 1/back.
func twoStates(forth, back float64) *model.Network {
	n := *zoo.TwoStateChain(forth, back)
	core := func(state string, a int64) model.DeclaredCore {
		return model.DeclaredCore{State: state, Ranges: []model.Range{{Species: 0, Min: a, Max: a}}}
	}
	n.Declared = []model.DeclaredCore{core("low", 1), core("high", 0)}
	return &n
}

// Of a chain of two states the dwell is 1/forth: a dwell of at least 50 min needs a
// forth of at most 0.02, and a chance of 0.9 to hold 10 min one of at most
// −ln 0.9/10 (closed forms), to the tolerance.
func TestNearestSettingOfChain(t *testing.T) {
	n := twoStates(0.1, 0.05)
	for _, c := range []struct {
		text string
		want float64
	}{
		{"low >= 50 min", 0.02},
		{"low holds 10 min with chance 0.9", -math.Log(0.9) / 10},
		{"low >= 1e4 min", 1e-4},
	} {
		for _, k := range []sizing.Knob{{Name: "forth", Low: 1e-5, High: 1}, {Name: "forth", Low: 0, High: 0.15}} {
			r := size(t, n, sizing.Options{Knob: k}, c.text)
			if r.Outcome != sizing.Met {
				t.Errorf("%s over %v: %s", c.text, k, r.Outcome)
				continue
			}
			at, beyond := float64(r.Answer.Setting), float64(r.Answer.Short)
			if !(at <= c.want && c.want < beyond) || beyond/at > 1+2e-3 {
				t.Errorf("%s over %v: %v meets it and %v does not, want %v between them", c.text, k, at, beyond, c.want)
			}
			w := r.Window
			if w.High.Setting != r.Answer.Setting || w.High.By != sizing.BySpec || !strings.Contains(w.High.Text, "low") || w.Low.By == sizing.BySpec {
				t.Errorf("%s over %v: window %+v", c.text, k, w)
			}
		}
	}
}

// Two specifications pull a constant to two sides: the window has an end by each. With
// back as with forth, high dwells 1/back.
func TestSpecsTogether(t *testing.T) {
	n := demo(t, "latch", 20)
	r := size(t, n, sizing.Options{Knob: sizing.Knob{Name: "a", Low: 0.3, High: 0.6}}, "low >= 400 min", "high >= 200 min")
	if r.Outcome != sizing.Met {
		t.Fatalf("%s", r.Outcome)
	}
	w := r.Window
	if w.Low.By != sizing.BySpec || !strings.Contains(w.Low.Text, "low >= 400") || w.High.By != sizing.BySpec || !strings.Contains(w.High.Text, "high >= 200") {
		t.Fatalf("window %+v", w)
	}
	if w.High.Setting != r.Answer.Setting {
		t.Errorf("the answer, %v, is not the end nearest to 0.45: %+v", r.Answer.Setting, w)
	}
	for _, c := range []struct {
		at    hold.Value
		state string
		least float64
		slope float64 // side on which it is met
	}{{w.Low.Setting, "low", 400, 1}, {w.High.Setting, "high", 200, -1}} {
		inside := meanAt(t, n, float64(c.at), c.state)
		outside := meanAt(t, n, float64(c.at)*(1-2e-3*c.slope), c.state)
		if inside < c.least || outside >= c.least {
			t.Errorf("%s: %v at %v, %v beyond it, want a crossing of %v", c.state, inside, c.at, outside, c.least)
		}
	}
}

func meanAt(t testing.TB, n *model.Network, a float64, state string) float64 {
	t.Helper()
	bound, err := n.Rebind(0, map[string]float64{"a": a})
	if err != nil {
		t.Fatal(err)
	}
	return latticeMean(t, bound, n.Copies, state)
}

// Where the specification is met up to where the switch vanishes, the window ends there:
// for the latch with leak s at the fold a = 2x/(1+x²)², s = x²(1−x²)/(1+x²)² (Lewis,
// Slack, Wolpert, J. Theor. Biol. 65 (1977) 579), which for s = 0.02 is at x = 0.959094.
func TestWindowEndsAtFold(t *testing.T) {
	x := 0.959
	for range 50 {
		f := x*x*(1-x*x)/((1+x*x)*(1+x*x)) - 0.02
		x += f / 0.5 // the slope there is near −0.5
	}
	fold := 2 * x / ((1 + x*x) * (1 + x*x))
	n := demo(t, "latch", 15)
	r := size(t, n, sizing.Options{Knob: sizing.Knob{Name: "a", Low: 0.42, High: 0.6}}, "low >= 10 min")
	w := r.Window
	if r.Outcome != sizing.MetAlready || w == nil || w.High.By != sizing.ByVanish {
		t.Fatalf("%s, %+v", r.Outcome, w)
	}
	if end := float64(w.High.Setting); end > fold || end < fold*(1-2e-3) || !strings.Contains(w.High.Text, "high ends in a fold at 0.52041722") {
		t.Errorf("window ends at %v: %s; the fold is at %v", end, w.High.Text, fold)
	}
	if w.Low.By != sizing.ByRange || w.Low.Setting != 0.42 {
		t.Errorf("low end %+v", w.Low)
	}
}

// A design that has lost its switch is brought back to the side of the fold on which
// it is one.
func TestFromVanished(t *testing.T) {
	n, err := demo(t, "latch", 15).Rebind(0, map[string]float64{"a": 0.55})
	if err != nil {
		t.Fatal(err)
	}
	r := size(t, n, sizing.Options{Knob: sizing.Knob{Name: "a", Low: 0.3, High: 0.6}}, "high >= 100 min")
	if r.Outcome != sizing.Met || r.At(0.55) == nil || r.At(0.55).Vanished == "" {
		t.Fatalf("%s, %+v", r.Outcome, r.Answer)
	}
	at := float64(r.Answer.Setting)
	if in, out := meanAt(t, n, at, "high"), meanAt(t, n, at*1.002, "high"); in < 100 || out >= 100 {
		t.Errorf("%v at %v, %v beyond", in, at, out)
	}
}

func TestNothingMeets(t *testing.T) {
	n := demo(t, "latch", 15)
	r := size(t, n, sizing.Options{Knob: sizing.Knob{Name: "a", Low: 0.35, High: 0.55}}, "every >= 1e5 min")
	if r.Outcome != sizing.NotMet || r.Answer != nil {
		t.Fatalf("%s %+v", r.Outcome, r.Answer)
	}
	for i := range r.Evaluations {
		if r.Evaluations[i].Margin > r.Best.Margin {
			t.Errorf("best is %v, but %v is better", r.Best.Setting, r.Evaluations[i].Setting)
		}
	}
	r = size(t, n, sizing.Options{Knob: sizing.Knob{Name: "copies", Low: 5, High: 20}}, "high >= 1e5 min")
	if r.Outcome != sizing.NotMet || r.Best.Setting != 20 {
		t.Errorf("%s, best %v", r.Outcome, r.Best.Setting)
	}
	r = size(t, n, sizing.Options{Knob: sizing.Knob{Name: "copies", Low: 8, High: 20}}, "high >= 10 min")
	if r.Outcome != sizing.MetAlready || r.Answer.Setting != 8 || !math.IsNaN(float64(r.Answer.Short)) {
		t.Errorf("%s, %+v", r.Outcome, r.Answer)
	}
}

// A state that is never left meets everything.
func TestNeverLeft(t *testing.T) {
	r := size(t, demo(t, "leakless", 15), sizing.Options{Knob: sizing.Knob{Name: "copies", Low: 8, High: 20}}, "low >= 1e300 min")
	if r.Outcome != sizing.MetAlready || !math.IsInf(float64(r.Evaluations[0].Margin), 1) {
		t.Errorf("%s, margin %v", r.Outcome, r.Evaluations[0].Margin)
	}
}

func TestRefused(t *testing.T) {
	n := demo(t, "latch", 15)
	for _, c := range []struct {
		knob sizing.Knob
		text string
		want string
	}{
		{sizing.Knob{}, "hihg >= 10 min", `there is no state "hihg"`},
		{sizing.Knob{}, "hihg >= 10 min", `did you mean "high"?`},
		{sizing.Knob{}, "middle >= 10 min", "low, high, every"},
		{sizing.Knob{Name: "aa", Low: 1, High: 2}, "high >= 10 min", "there is no such constant"},
		{sizing.Knob{Name: "a", Low: 2, High: 1}, "high >= 10 min", "lower end first"},
		{sizing.Knob{Name: "a", Low: 1, High: 1}, "high >= 10 min", "two different ends"},
		{sizing.Knob{Name: "a", Low: -1, High: 1}, "high >= 10 min", "not below 0"},
		{sizing.Knob{Name: "a", Low: 0.1, High: math.Inf(1)}, "high >= 10 min", "finite"},
		{sizing.Knob{Name: "copies", Low: 0.2, High: 0.9}, "high >= 10 min", "holds no whole number"},
		{sizing.Knob{Name: "copies", Low: 0, High: 9}, "high >= 10 min", "whole numbers from 1"},
	} {
		_, err := sizing.Run(context.Background(), n, sizing.Options{Knob: c.knob, Specs: specs(t, n, c.text)})
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%+v, %s: %v, want %q", c.knob, c.text, err, c.want)
		}
	}
	if _, err := sizing.Run(context.Background(), n, sizing.Options{}); err == nil || !strings.Contains(err.Error(), "specification is missing") {
		t.Errorf("%v", err)
	}
}

func TestStopsWhenTold(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	n := demo(t, "latch", 15)
	if _, err := sizing.Run(ctx, n, sizing.Options{Specs: specs(t, n, "high >= 10 min")}); !errors.Is(err, context.Canceled) {
		t.Errorf("%v", err)
	}
}
