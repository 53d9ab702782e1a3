package sizing_test

import (
	"context"
	"path/filepath"
	"testing"

	"holdfast/analysis/hold"
	"holdfast/analysis/sizing"
	"holdfast/model"
)

// demo gives a demo design at a copy number.
func demo(t testing.TB, name string, copies float64) *model.Network {
	t.Helper()
	draft, err := model.Load(filepath.Join("..", "..", "testdata", "designs", name+".toml"))
	if err != nil {
		t.Fatal(err)
	}
	n, err := draft.Bind(copies, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

func specs(t testing.TB, n *model.Network, texts ...string) []sizing.Spec {
	t.Helper()
	out, err := sizing.ParseSpecs(texts, n)
	if err != nil {
		t.Fatal(err)
	}
	return out
}

func size(t testing.TB, n *model.Network, o sizing.Options, texts ...string) *sizing.Report {
	t.Helper()
	o.Specs = specs(t, n, texts...)
	r, err := sizing.Run(context.Background(), n, o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func TestDraft(t *testing.T) {
	n := demo(t, "latch", 100)
	for _, text := range []string{"high>=1000 generations", "high >= 2 generations", "every holds 200 generations with chance 0.9"} {
		r := size(t, n, sizing.Options{Hold: hold.Options{Seed: 1}}, text)
		t.Logf("%s: %s %+v %v", text, r.Outcome, r.Answer, r.Warnings)
		for _, e := range r.Evaluations {
			t.Logf("  %v %s %.5f %s %v %v", e.Setting, e.Verdict, e.Margin, e.Vanished+e.Failure, e.Checks[0].Found, e.Checks[0].Route)
		}
	}
	n = demo(t, "latch", 30)
	for _, k := range []struct {
		knob sizing.Knob
		text string
	}{
		{sizing.Knob{"a", 0.3, 0.6}, "high >= 20 generations"},
		{sizing.Knob{"a", 0.3, 0.6}, "low >= 1 generations"},
		{sizing.Knob{"a", 0.3, 0.6}, "every >= 10 generations"},
		{sizing.Knob{"a", 0.3, 0.6}, "every >= 10000 generations"},
		{sizing.Knob{"leak", 0, 0.6}, "every >= 10 generations"},
	} {
		r := size(t, n, sizing.Options{Knob: k.knob, Hold: hold.Options{Seed: 1}}, k.text)
		t.Logf("%s: %s %+v %+v %v", k.text, r.Outcome, r.Answer, r.Window, r.Warnings)
		for _, e := range r.Evaluations {
			t.Logf("  %v %s %.5f %s %v %v", e.Setting, e.Verdict, e.Margin, e.Vanished+e.Failure, e.Checks[0].Found, e.Checks[0].Route)
		}
	}
}
