package dwell

import (
	"errors"
	"fmt"
	"math"
)

const (
	defaultConfidence = 0.95
	defaultLevel      = 0.01
)

// Options say how dwells are summarised.
type Options struct {
	// From is the index of the state that the dwells were spent in.
	From int
	// Generation is the length of one in the unit of the dwells; 0: not given.
	Generation float64
	// Holds are the numbers of generations to give the chance of holding for;
	// nil: 10, 100 and 1000.
	Holds []float64
	// Confidence of all intervals, between 0 and 1; 0: 0.95.
	Confidence float64
	// Level of the test that the dwells are memoryless: the share of memoryless
	// samples that it rejects; 0: 0.01.
	Level float64

	// Mixed tells that the dwells are those of cells that differ, or whose rates vary in
	// time, and so are not memoryless, whatever the test can see of that.
	Mixed bool

	oneTarget bool // the state can be left for one other state only
}

// A Summary is what the dwells in one state say.
type Summary struct {
	From     int
	Dwells   int     // in all
	Flips    int     // ended by a flip
	Censored int     // cut off before one
	Absorbed int     // flips into a state that nothing leads out of
	Exposure float64 // sum of all dwells, in the design's unit
	// Any is for leaving the state at all; To has one estimate for each other state,
	// by index, and a last one for Elsewhere if a dwell ended there.
	Any Estimate
	To  []Estimate
	// Memory is the test that the dwells are memoryless, Survival the curve of the
	// chance of not having left.
	Memory   Memory
	Survival Survival
	// Warnings are plain sentences, without the state's name.
	Warnings []string
}

// ErrNoExposure is returned when there are no dwells, or all of them are of no length.
var ErrNoExposure = errors.New("no time was spent in the state: there is nothing to estimate from")

// Summarise estimates, from the dwells in one of so many states, the mean time
// until a flip to every other one and to any, with intervals. Errors are an
// *ObservationError, an ErrNoExposure, or an option out of its range.
func Summarise(obs []Observation, states int, options Options) (Summary, error) {
	o, err := options.complete(states)
	if err != nil {
		return Summary{}, err
	}
	if err := checkObservations(obs, states, o.From); err != nil {
		return Summary{}, err
	}
	s := Summary{From: o.From, Dwells: len(obs)}
	s.count(obs)
	if !(s.Exposure > 0) {
		return Summary{}, ErrNoExposure
	}
	sorted := byTime(obs)
	s.Memory = testSorted(sorted, o.Level)
	s.Survival = productLimit(sorted, Any, o.Confidence)
	s.Any = s.estimate(obs, Any, o)
	targets := s.targets(obs, states)
	o.oneTarget = len(targets) == 1
	for _, target := range targets {
		s.To = append(s.To, s.estimate(obs, target, o))
	}
	s.warn(o.Mixed)
	return s, nil
}

func (s *Summary) count(obs []Observation) {
	for _, d := range obs {
		s.Exposure += d.Time
		if d.To == Censored {
			s.Censored++
		} else {
			s.Flips++
		}
		if d.Absorbed {
			s.Absorbed++
		}
	}
}

func (s *Summary) targets(obs []Observation, states int) (targets []int) {
	for i := range states {
		if i != s.From {
			targets = append(targets, i)
		}
	}
	if countFlips(obs, Elsewhere) > 0 {
		targets = append(targets, Elsewhere)
	}
	return targets
}

func (s *Summary) estimate(obs []Observation, target int, o Options) Estimate {
	e := Estimate{To: target, Flips: countFlips(obs, target), Exposure: s.Exposure}
	memoryless := !s.Memory.Rejected && !o.Mixed
	e.interval(obs, o, memoryless)
	e.fill(o.Generation)
	switch {
	case memoryless:
		e.holds(o, nil)
	case target == Any:
		e.holds(o, &s.Survival)
	default:
		survival := KaplanMeier(obs, target, o.Confidence)
		e.holds(o, &survival)
	}
	return e
}

func (s *Summary) warn(mixed bool) {
	if s.Flips == 0 {
		s.Warnings = append(s.Warnings, fmt.Sprintf("no flip was seen in a time of %.4g: the mean dwell has a lower limit only", s.Exposure))
	}
	why := s.Memory.String()
	switch {
	case mixed:
		why = "a mixture over cells whose rates differ or vary, not memoryless"
	case !s.Memory.Rejected:
		return
	}
	s.Warnings = append(s.Warnings, "dwells are "+why+
		"; intervals come from the spread of the dwells, and chances of holding from the observed survival")
	if s.Censored > 0 {
		s.Warnings = append(s.Warnings, fmt.Sprintf("%d of %d dwells were cut off while dwells are not memoryless: "+
			"exposure over flips is a rate over the watched time, not a mean dwell; run longer", s.Censored, s.Dwells))
	}
}

// complete gives the options with zeros replaced, or what is wrong with them.
func (o Options) complete(states int) (Options, error) {
	if o.Confidence == 0 {
		o.Confidence = defaultConfidence
	}
	if o.Level == 0 {
		o.Level = defaultLevel
	}
	if o.Holds == nil {
		o.Holds = []float64{10, 100, 1000}
	}
	switch {
	case o.From < 0 || o.From >= states:
		return o, fmt.Errorf("state %d: there are %d states, numbered from 0", o.From, states)
	case !(o.Confidence > 0 && o.Confidence < 1):
		return o, fmt.Errorf("confidence = %v: must be between 0 and 1", o.Confidence)
	case !(o.Level > 0 && o.Level < 1):
		return o, fmt.Errorf("level = %v: must be between 0 and 1", o.Level)
	case !(o.Generation >= 0) || math.IsInf(o.Generation, 0):
		return o, fmt.Errorf("generation = %v: must be a positive number, or 0 if there is none", o.Generation)
	}
	for _, g := range o.Holds {
		if !(g >= 0) || math.IsInf(g, 0) {
			return o, fmt.Errorf("holding for %v generations: must be a finite number, not below 0", g)
		}
	}
	return o, nil
}
