package sizing

import (
	"math"

	"holdfast/analysis/hold"
)

// A Verdict says what an evaluation tells of a specification.
type Verdict string

// The verdicts.
const (
	// Meets: even the lower limit of what was found is enough.
	Meets Verdict = "meets"
	// Fails: even the upper limit is too little, or there is no such state.
	Fails Verdict = "fails"
	// Open: what was asked lies between the limits.
	Open Verdict = "open"
)

// An Evaluation is one setting of the knob and what was found there.
type Evaluation struct {
	Setting float64 `json:"setting"`
	// Verdict on all specifications together.
	Verdict Verdict `json:"verdict"`
	// Margin is the least of ln(found/asked) over the checks, with its limits: at 0
	// the specifications are just met. −Inf where the switch has vanished, +Inf where
	// a state is never left.
	Margin hold.Value `json:"margin"`
	Low    hold.Value `json:"margin_low"`
	High   hold.Value `json:"margin_high"`
	Checks []Check    `json:"checks"`
	// Vanished says why there is no switch at this setting; Failure why it could not
	// be evaluated. Both empty otherwise.
	Vanished string `json:"vanished,omitempty"`
	Failure  string `json:"failure,omitempty"`

	unseen bool // no flip was seen, and that leaves it open
}

// A Check is one specification held against one state at one setting.
type Check struct {
	Spec  int    `json:"spec"` // its index
	State string `json:"state"`
	Route string `json:"route"`
	// Found is the mean dwell in the specification's unit of time, or, for a
	// specification with a chance, that chance; with its 95 % interval, where Sampled,
	// or its bounds. NaN where no flip was seen; +Inf where the state is never left.
	Found   hold.Value `json:"found"`
	Low     hold.Value `json:"found_low"`
	High    hold.Value `json:"found_high"`
	Sampled bool       `json:"sampled"`
	// Losses are 1 minus a chance and its limits, which keep their digits where those
	// are near 1; NaN for a mean dwell.
	Losses [3]hold.Value `json:"-"`
	// Error is half the width between bounds, NaN where Sampled.
	Error   hold.Value `json:"-"`
	Verdict Verdict    `json:"verdict"`

	margin [3]float64 // of the mean and the two limits
	unseen bool
}

// nowhere is the check of a state that is not there.
func nowhere(spec int, state string) Check {
	nan, none := hold.Value(math.NaN()), math.Inf(-1)
	return Check{Spec: spec, State: state, Found: nan, Low: nan, High: nan, Losses: [3]hold.Value{nan, nan, nan}, Error: nan, Verdict: Fails, margin: [3]float64{none, none, none}}
}

// newCheck holds a row of a report against a specification.
func newCheck(index int, s *Spec, d *hold.DwellReport, generation float64) Check {
	c := Check{Spec: index, State: d.From, Route: d.Route, Sampled: d.Sampled, unseen: d.Sampled && d.Flips == 0}
	if s.Chance > 0 {
		c.holdChance(s, d, s.Time/generation)
	} else {
		c.holdMean(s, d)
	}
	c.Verdict = verdict(c.margin[1], c.margin[2])
	c.Error = (c.High - c.Low) / 2
	if c.unseen {
		c.Found = hold.Value(math.NaN())
	}
	if c.Sampled || d.Never {
		c.Error = hold.Value(math.NaN())
	}
	return c
}

// verdict of two limits of a margin.
func verdict(low, high float64) Verdict {
	switch {
	case low >= 0:
		return Meets
	case high < 0:
		return Fails
	}
	return Open
}

// holdMean compares mean dwells.
func (c *Check) holdMean(s *Spec, d *hold.DwellReport) {
	unit := hold.Value(s.Time / s.Amount)
	nan := hold.Value(math.NaN())
	c.Found, c.Low, c.High, c.Losses = d.Mean/unit, d.Low/unit, d.High/unit, [3]hold.Value{nan, nan, nan}
	c.margin = [3]float64{
		math.Log(middle(d) / s.Time), orElse(math.Log(float64(d.Low)/s.Time), -1), orElse(math.Log(float64(d.High)/s.Time), 1),
	}
}

// middle is the mean dwell or, where no flip was seen, the mean that would have left
// none in the time watched as often as not: exposure/ln 2.
func middle(d *hold.DwellReport) float64 {
	if d.Sampled && d.Flips == 0 {
		return float64(d.Exposure) / math.Ln2
	}
	return float64(d.Mean)
}

// orElse replaces a limit that is not known by none on its side.
func orElse(v float64, side int) float64 {
	if math.IsNaN(v) {
		return math.Inf(side)
	}
	return v
}

// holdChance compares chances, by the mean dwell of a memoryless state that has them:
// ln P = −t/τ. A route that gives no chance is taken for memoryless.
func (c *Check) holdChance(s *Spec, d *hold.DwellReport, generations float64) {
	asked := -math.Log(s.Chance)
	h := chanceOf(s, d, generations)
	c.Found, c.Low, c.High, c.Losses = h.Chance, h.Low, h.High, h.Loss
	for i, loss := range h.Loss {
		l := float64(loss)
		c.margin[i] = math.Log(asked) - math.Log(-math.Log1p(-l))
	}
	if c.unseen {
		c.margin[0] = math.Log(asked * middle(d) / s.Time)
	}
	c.margin[1], c.margin[2] = orElse(c.margin[1], -1), orElse(c.margin[2], 1)
}

// chanceOf gives the chance to hold so many generations.
func chanceOf(s *Spec, d *hold.DwellReport, generations float64) hold.HoldChance {
	for _, h := range d.Holds {
		if h.Generations == generations {
			return h
		}
	}
	var h hold.HoldChance
	for i, mean := range []hold.Value{d.Mean, d.Low, d.High} {
		h.Loss[i] = hold.Value(-math.Expm1(-s.Time / float64(mean)))
	}
	h.Chance, h.Low, h.High = 1-h.Loss[0], 1-h.Loss[1], 1-h.Loss[2]
	return h
}

// conclude sums the checks up.
func (e *Evaluation) conclude() {
	margin := [3]float64{math.Inf(1), math.Inf(1), math.Inf(1)}
	unseen := false
	for _, c := range e.Checks {
		for i := range margin {
			margin[i] = math.Min(margin[i], c.margin[i])
		}
		unseen = unseen || c.unseen && c.Verdict == Open
	}
	e.Margin, e.Low, e.High = hold.Value(margin[0]), hold.Value(margin[1]), hold.Value(margin[2])
	e.Verdict = verdict(margin[1], margin[2])
	e.unseen = unseen && e.Verdict == Open
}
