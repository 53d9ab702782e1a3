package dwell

import "math"

// A Source is where a chance of holding comes from.
type Source uint8

// The sources.
const (
	Constant Source = iota // exp(−t/mean): memoryless dwells
	Observed               // the Kaplan–Meier curve: dwells that are not memoryless
	// Beyond is exp(−t/mean) for dwells that are not memoryless, past the longest
	// one watched; its interval runs from 0 to the upper limit of the curve's end.
	Beyond
)

// String names the source in a few words.
func (s Source) String() string {
	switch s {
	case Constant:
		return "constant rate"
	case Observed:
		return "observed survival"
	case Beyond:
		return "beyond the dwells watched"
	}
	return "unknown"
}

// A Hold is the chance that a state holds for a number of generations from its
// start on.
type Hold struct {
	Generations float64
	Range
	Source Source
}

// holds sets the chances of holding; survival is nil for memoryless dwells.
func (e *Estimate) holds(o Options, survival *Survival) {
	if !(o.Generation > 0) {
		return
	}
	for _, g := range o.Holds {
		e.Hold = append(e.Hold, e.hold(g, g*o.Generation, survival))
	}
}

func (e *Estimate) hold(generations, t float64, survival *Survival) Hold {
	h := Hold{Generations: generations}
	h.Range = Range{math.Exp(-t * e.Rate.Value), math.Exp(-t / e.Low), math.Exp(-t / e.High)}
	if survival == nil {
		return h
	}
	if chance, low, high, ok := survival.At(t); ok {
		h.Range, h.Source = Range{chance, low, high}, Observed
		return h
	}
	_, _, end, ok := survival.At(survival.longest())
	if !ok {
		end = 1
	}
	h.Range, h.Source = Range{math.Min(h.Value, end), 0, end}, Beyond
	return h
}

// longest gives the longest time watched.
func (s *Survival) longest() float64 {
	if len(s.watched) == 0 {
		return 0
	}
	return s.watched[len(s.watched)-1]
}
