package lattice

import (
	"context"
	"math"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// The chance that immigration–death, begun at 0, has not yet reached 19, against
// uniformisation of the killed chain of 19 states (Jensen, Skand. Aktuarietidskr. 36
// (1953) 87; attribution from memory).
func TestPersistenceIsTheWeightOfTheSlowMode(t *testing.T) {
	const in, out, target = 1.0, 0.1, 19
	s, err := Solve(context.Background(), Problem{
		Network: zoo.ImmigrationDeath(in, out),
		Cores:   []model.Core{zoo.Interval("low", 0, 0, 0), zoo.Interval("high", target, math.MaxInt64, target)},
	})
	if err != nil {
		t.Fatal(err)
	}
	for _, at := range []float64{150, 400, 1000, 3000} {
		want := survival(in, out, target, at)
		got := s.Persistence[0] * math.Exp(-s.Escape[0]*at)
		allowed := math.Abs(s.Persistence[0]-1)*math.Exp(-s.Forgetting[0]*at) + 1e-8*want
		if math.Abs(got-want) > allowed {
			t.Errorf("t = %v: %v, want %v within %v", at, got, want, allowed)
		}
	}
	if s.Persistence[0] < 1 || s.Forgetting[0] < 10*s.Escape[0] {
		t.Errorf("persistence %v, forgetting %v, escape %v", s.Persistence[0], s.Forgetting[0], s.Escape[0])
	}
}

// survival sums Poisson-many steps of the uniformised chain.
func survival(in, out float64, target int, t float64) float64 {
	rate := in + out*float64(target)
	p := make([]float64, target)
	p[0] = 1
	sum, logWeight := 0.0, -rate*t
	for k := 0; float64(k) < rate*t+20*math.Sqrt(rate*t)+50; k++ {
		alive := 0.0
		for _, v := range p {
			alive += v
		}
		sum += math.Exp(logWeight) * alive
		logWeight += math.Log(rate*t) - math.Log(float64(k+1))
		next := make([]float64, target)
		for n, v := range p {
			next[n] += v * (1 - (in+out*float64(n))/rate)
			if n+1 < target {
				next[n+1] += v * in / rate
			}
			if n > 0 {
				next[n-1] += v * out * float64(n) / rate
			}
		}
		p = next
	}
	return sum
}
