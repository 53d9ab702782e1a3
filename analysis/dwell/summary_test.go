package dwell

import (
	"errors"
	"math"
	"strings"
	"testing"

	"holdfast/internal/stream"
)

// Four complete dwells of total 10: mean 2.5, limits 20/17.535 and 20/2.180 (χ² with
// 8 degrees of freedom, Pearson and Hartley, Biometrika Tables for Statisticians,
// vol. 1, table 8, from memory).
func TestCompleteByHand(t *testing.T) {
	obs := []Observation{{To: 1, Time: 1}, {To: 1, Time: 2}, {To: 1, Time: 3}, {To: 1, Time: 4}}
	s := summarise(t, obs, 2, Options{Generation: 0.5})
	e := s.Any
	if e.Method != Gamma || e.Mean != 2.5 || relative(e.Low, 20/17.535) > 1e-4 || relative(e.High, 20/2.180) > 1e-3 {
		t.Errorf("%+v", e)
	}
	if e.StandardError != 1.25 || e.PerGeneration.Value != 0.2 || e.PerGeneration.Low != 0.5/e.High {
		t.Errorf("%+v", e)
	}
	pair := s.To[0]
	if len(s.To) != 1 || pair.To != 1 || pair.Low != e.Low || pair.High != e.High {
		t.Errorf("the only pair %+v differs from any %+v", pair, e)
	}
	hold := e.Hold[0] // ten generations are a time of 5: exp(−2)
	if len(e.Hold) != 3 || hold.Generations != 10 || relative(hold.Value, math.Exp(-2)) > 1e-15 ||
		hold.Low != math.Exp(-5/e.Low) || hold.High != math.Exp(-5/e.High) || hold.Source != Constant {
		t.Errorf("%+v", hold)
	}
}

// Two flips to 1 and one to 2 in an exposure of 12, one dwell cut off: limits of the
// counts by Garwood over 12 (0.2422 and 7.2247 for two events, from memory).
func TestPairsByHand(t *testing.T) {
	obs := []Observation{{To: 1, Time: 1}, {To: 2, Time: 2}, {To: 1, Time: 4}, {To: Censored, Time: 5}}
	s := summarise(t, obs, 4, Options{})
	if s.Flips != 3 || s.Censored != 1 || s.Exposure != 12 || len(s.To) != 3 {
		t.Fatalf("%+v", s)
	}
	one, two, three := s.To[0], s.To[1], s.To[2]
	if one.Method != Poisson || one.Mean != 6 || relative(one.Low, 12/7.2247) > 1e-4 || relative(one.High, 12/0.2422) > 1e-3 {
		t.Errorf("to 1: %+v", one)
	}
	if two.Mean != 12 || relative(two.High, 12/0.025318) > 1e-4 {
		t.Errorf("to 2: %+v", two)
	}
	if !math.IsInf(three.Mean, 1) || !math.IsInf(three.High, 1) || relative(three.Low, 12/3.688879) > 1e-6 || three.Method != NoneSeen {
		t.Errorf("to 3: %+v", three)
	}
	if three.Rate.Value != 0 || three.Rate.Low != 0 || !math.IsNaN(three.StandardError) || !math.IsNaN(three.PerGeneration.Value) || three.Hold != nil {
		t.Errorf("to 3: %+v", three)
	}
}

func TestNoFlipSeen(t *testing.T) {
	s := summarise(t, []Observation{{To: Censored, Time: 368.8879}}, 2, Options{Generation: 1})
	e := s.Any
	if !math.IsInf(e.Mean, 1) || relative(e.Low, 100) > 1e-6 || e.Hold[1].Value != 1 ||
		relative(e.Hold[1].Low, math.Exp(-1)) > 1e-6 || e.Hold[1].High != 1 {
		t.Errorf("%+v", e)
	}
	if len(s.Warnings) != 1 || !strings.Contains(s.Warnings[0], "lower limit only") {
		t.Errorf("warnings %q", s.Warnings)
	}
}

func TestAbsorbedElsewhere(t *testing.T) {
	obs := []Observation{{To: 1, Absorbed: true, Time: 3}, {To: Elsewhere, Absorbed: true, Time: 1}}
	s := summarise(t, obs, 2, Options{})
	if s.Absorbed != 2 || s.Flips != 2 || len(s.To) != 2 || s.To[1].To != Elsewhere || s.To[1].Flips != 1 {
		t.Errorf("%+v", s)
	}
}

// Dwells that are not memoryless: what holds, and for how long, comes from the
// curve, and a reader is told.
func TestNotMemoryless(t *testing.T) {
	stream := stream.New(31, 0, 0)
	s := summarise(t, erlang().sample(&stream, 300, 1.5), 2, Options{Generation: 0.1})
	if !s.Memory.Rejected || s.Any.Method != Ratio || len(s.Warnings) != 2 {
		t.Fatalf("%+v, %v, %q", s.Memory, s.Any.Method, s.Warnings)
	}
	chance, low, high, _ := s.Survival.At(1)
	if h := s.Any.Hold[0]; h.Source != Observed || h.Range != (Range{chance, low, high}) {
		t.Errorf("ten generations: %+v", h)
	}
	_, _, end, _ := s.Survival.At(1.5)
	if h := s.Any.Hold[1]; h.Source != Beyond || h.Low != 0 || h.High != end || !(h.Value <= h.High) {
		t.Errorf("a hundred generations, past the horizon: %+v", h)
	}
	// (1+2t)e^(−2t) at 1 is 0.406: the curve's 95 % interval at this seed holds it.
	if want := 3 * math.Exp(-2); low > want || high < want {
		t.Errorf("curve at 1: %v [%v, %v], truth %v", chance, low, high, want)
	}
}

// Dwells known to be a mixture are taken as such though the test sees nothing.
func TestMixed(t *testing.T) {
	stream := stream.New(33, 0, 0)
	obs := exponential().sample(&stream, 300, 0)
	plain := summarise(t, obs, 2, Options{Generation: 0.1})
	s := summarise(t, obs, 2, Options{Generation: 0.1, Mixed: true})
	if s.Memory.Rejected || plain.Any.Method != Gamma || s.Any.Method != Ratio || s.Any.Mean != plain.Any.Mean {
		t.Errorf("%v, %v and %v", s.Memory, plain.Any.Method, s.Any.Method)
	}
	if h := s.Any.Hold[0]; h.Source != Observed || len(s.Warnings) != 1 || !strings.Contains(s.Warnings[0], "mixture") {
		t.Errorf("%+v, %q", h, s.Warnings)
	}
}

func TestFewFlipsTakeTheWider(t *testing.T) {
	obs := make([]Observation, 20) // as regular as can be
	for i := range obs {
		obs[i] = Observation{To: 1, Time: 10 + float64(i)/100}
	}
	s := summarise(t, obs, 2, Options{})
	e := s.Any
	e.exponential(20, Options{Confidence: 0.95})
	if !s.Memory.Rejected || s.Any.Method != Widest || s.Any.Low != e.Low || s.Any.High != e.High {
		t.Errorf("%+v", s.Any)
	}
}

func TestRefused(t *testing.T) {
	good := []Observation{{To: 1, Time: 1}}
	for _, c := range []struct {
		obs     []Observation
		options Options
		words   string
	}{
		{nil, Options{}, "no time was spent"},
		{[]Observation{{To: 1}}, Options{}, "no time was spent"},
		{[]Observation{{To: 1, Time: 1}, {To: 1, Time: math.NaN()}}, Options{}, "dwell 1 "},
		{[]Observation{{To: 1, Time: -1}}, Options{}, "not below 0"},
		{[]Observation{{To: 1, Time: math.Inf(1)}}, Options{}, "finite"},
		{[]Observation{{To: 2, Time: 1}}, Options{}, "there are 2 states"},
		{[]Observation{{To: -3, Time: 1}}, Options{}, "there are 2 states"},
		{[]Observation{{To: 0, Time: 1}}, Options{}, "itself"},
		{[]Observation{{To: Censored, Absorbed: true, Time: 1}}, Options{}, "cut off"},
		{[]Observation{{To: Elsewhere, Time: 1}}, Options{}, "absorbing"},
		{good, Options{From: 2}, "state 2"},
		{good, Options{From: -1}, "state -1"},
		{good, Options{Confidence: 1}, "confidence = 1"},
		{good, Options{Confidence: math.NaN()}, "confidence = NaN"},
		{good, Options{Level: -1}, "level = -1"},
		{good, Options{Generation: math.Inf(1)}, "generation = +Inf"},
		{good, Options{Holds: []float64{-10}}, "-10 generations"},
	} {
		if _, err := Summarise(c.obs, 2, c.options); err == nil || !strings.Contains(err.Error(), c.words) {
			t.Errorf("%v %+v: error %v lacks %q", c.obs, c.options, err, c.words)
		}
	}
	var wrong *ObservationError
	if _, err := Summarise([]Observation{{To: 7, Time: 1}}, 2, Options{}); !errors.As(err, &wrong) || wrong.Observation.To != 7 {
		t.Errorf("%v is no *ObservationError", err)
	}
}

func summarise(t *testing.T, obs []Observation, states int, o Options) Summary {
	t.Helper()
	s, err := Summarise(obs, states, o)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func BenchmarkSummarise(b *testing.B) {
	s := stream.New(41, 0, 0)
	obs := exponential().sample(&s, 10_000, 0)
	for b.Loop() {
		if _, err := Summarise(obs, 2, Options{Generation: 1}); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*len(obs)), "ns/dwell")
}
