package staged_test

import (
	"context"
	"testing"
	

	"holdfast/analysis/staged"
	"holdfast/deterministic"
	"holdfast/internal/zoo"
)

func TestTrial(t *testing.T) {
	truth := map[float64][2]float64{20: {566.3464, 151.775}, 40: {3129.498, 734.3997}, 100: {441370.8, 80908.79}, 200: {1.784666e9, 2.445223e8}, 300: {7.346424e12, 7.592606e11}}
	for _, copies := range []float64{40, 100, 200} {
		n := zoo.Latch(copies)
		m, err := deterministic.Survey(context.Background(), n, deterministic.Options{})
		if err != nil {
			t.Fatal(err)
		}
		for from := range 2 {
			a, b := m.States[from], m.States[1-from]
			begun := cpu()
			r, err := staged.Run(context.Background(), staged.Plan{Network: n, Cores: m.Cores, From: from, To: 1 - from, Along: staged.Line(a.Molecules, b.Molecules, a.Covariance), Relaxation: 1 / a.SlowRate, Precision: 0.1, Seed: 1})
			if err != nil {
				t.Fatal(err)
			}
			t.Logf("%v %d: ratio %.3f [%.3f %.3f] stages %d repeats %d×%d eff %.0f dis %.2f flux %.3g events %.3g (watch %.2g) %v", copies, from, truth[copies][from]*r.Rate, truth[copies][from]*r.Low, truth[copies][from]*r.High, len(r.Stages), len(r.Repeats), r.Stages[0].Runs/int64(len(r.Repeats)), r.Effective, r.Disagreement, r.Flux, float64(r.Events), float64(r.WatchEvents), cpu()-begun)
		}
	}
}
