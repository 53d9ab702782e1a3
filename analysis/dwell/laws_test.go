package dwell

import "holdfast/internal/stream"

// A law draws a dwell of mean 1.
type law struct {
	name string
	draw func(*stream.Stream) float64
}

func exponential() law {
	return law{"exponential", func(s *stream.Stream) float64 { return s.Exp() }}
}

// erlang is the sum of two equal stages: variance ½.
func erlang() law {
	return law{"two stages", func(s *stream.Stream) float64 { return (s.Exp() + s.Exp()) / 2 }}
}

// mixture has a short mean in three cases of ten, a long one otherwise: variance 1.8.
func mixture() law {
	return law{"mixture", func(s *stream.Stream) float64 {
		mean := 1.37 / 0.97
		if s.Float64() < 0.3 {
			mean = (1 - 0.7*mean) / 0.3
		}
		return mean * s.Exp()
	}}
}

// sample draws n dwells of the law to state 1, cut off at horizon if it is positive.
func (l law) sample(s *stream.Stream, n int, horizon float64) []Observation {
	obs := make([]Observation, n)
	for i := range obs {
		obs[i] = Observation{To: 1, Time: l.draw(s)}
		if horizon > 0 && obs[i].Time > horizon {
			obs[i] = Observation{To: Censored, Time: horizon}
		}
	}
	return obs
}
