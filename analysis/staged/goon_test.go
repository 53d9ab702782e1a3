package staged_test

import (
	"context"
	"strings"
	"testing"

	"holdfast/analysis/staged"
	"holdfast/internal/zoo"
)

// Where many repeats are made, they go on until the interval is as narrow as was asked.
func TestGoesOnToThePrecision(t *testing.T) {
	p := plan(survey(t, zoo.LeakyActivator(0.4, 0.01, 10)), 0, 1)
	for _, p.Precision = range []float64{0.06, 0.05} {
		r := estimate(t, p)
		if r.Ending != staged.Reached || r.High > r.Rate*(1+p.Precision) || len(r.Repeats) < 64 {
			t.Errorf("%v asked: %s, %v, %d repeats", p.Precision, r.Ending, r.High/r.Rate-1, len(r.Repeats))
		}
	}
}

// What is finished when the context ends is the result.
func TestCancelledKeepsRepeats(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	defer cancel()
	p := plan(survey(t, zoo.Latch(60)), 0, 1)
	p.Precision, p.Threads = 0.02, 1
	p.Progress = func(stage string, share float64, _ int64) {
		if strings.HasPrefix(stage, "repeats") && share > 0.2 {
			cancel()
		}
	}
	r, err := staged.Run(ctx, p)
	if err != nil {
		t.Fatal(err)
	}
	if n := len(r.Repeats); r.Ending != staged.Cancelled || !r.Ending.Early() || n < 2 || n >= 64 || !(r.Low < r.Rate && r.Rate < r.High) {
		t.Errorf("%s after %d repeats: %v in [%v, %v]", r.Ending, n, r.Rate, r.Low, r.High)
	}
}
