package model_test

import (
	"math"
	"testing"

	"holdfast/model"
)

// A network bound again is the one that its draft gives at the same setting, and the
// first stays as it was.
func TestRebind(t *testing.T) {
	draft, err := model.Load("../testdata/designs/latch.toml")
	if err != nil {
		t.Fatal(err)
	}
	first, err := draft.Bind(30, map[string]float64{"leak": 0.03})
	if err != nil {
		t.Fatal(err)
	}
	first.Generation = 50
	again, err := first.Rebind(200, map[string]float64{"a": 0.4})
	if err != nil {
		t.Fatal(err)
	}
	want, err := draft.Bind(200, map[string]float64{"leak": 0.03, "a": 0.4})
	if err != nil {
		t.Fatal(err)
	}
	if again.Copies != 200 || again.Generation != 50 || again.Digest != want.Digest || first.Copies != 30 {
		t.Errorf("copies %v, generation %v; the first has copies %v", again.Copies, again.Generation, first.Copies)
	}
	amounts := []float64{0.3, 0.7}
	for i := range want.Reactions {
		got, want := again.Reactions[i].Law.Eval(amounts, nil), want.Reactions[i].Law.Eval(amounts, nil)
		if math.Abs(got-want) > 0 || again.Reactions[i].Scale != 200 {
			t.Errorf("reaction %d: law %v, want %v", i, got, want)
		}
	}
	if _, err := first.Rebind(0, map[string]float64{"aa": 1}); err == nil {
		t.Error("a constant that is not there was set")
	}
}
