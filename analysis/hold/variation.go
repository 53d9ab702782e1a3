package hold

import (
	"context"
	"fmt"
	"math"
	"slices"
	"strings"

	"gonum.org/v1/gonum/stat"

	"holdfast/analysis/dwell"
	"holdfast/internal/variation"
	"holdfast/model"
)

const (
	// evenShare of a state's budget goes into the runs that count, where as many are
	// made with half the interval.
	evenShare = 1. / 2
	// perCorrelation is the least number of intervals in which a resting state forgets
	// where it was.
	perCorrelation = 10
	// leastEvents is the fewest events in an interval, at a resting state, that runs are
	// made with.
	leastEvents = 1e-3
	// mixedCap is capDwells where constants vary: long dwells are common there, and some
	// cells may have no way out at all.
	mixedCap = 100
	// mixedRuns is the most runs that share a budget in which few flips are in reach:
	// each cell is another one.
	mixedRuns = 256
	// tailShare of the time watched in the longest hundredth of the dwells is a sign that
	// the mean hangs on few cells; of memoryless dwells it is 5.6 %, (1 + ln 100)/100.
	tailShare = 0.15
	// mixedSpread is the most by which a pilot's spread of dwells raises the number of
	// runs that a precision takes.
	mixedSpread = 10
)

// A VariationReport tells how constants vary, and what holding them still for an
// interval does.
type VariationReport struct {
	Constants []VaryingReport `json:"constants"`
	// Interval is the time for which constants that vary in time are held, in
	// TimeUnit; NaN where none does.
	Interval Value `json:"interval"`
	// States has a row for each state that was left by exact runs, where a constant
	// varies in time.
	States []IntervalReport `json:"states,omitempty"`
}

// A VaryingReport is a constant that varies.
type VaryingReport struct {
	Name   string  `json:"name"`
	Median float64 `json:"median"`
	Spread float64 `json:"spread"` // standard deviation of the natural logarithm
	Memory Value   `json:"memory"` // correlation time, in TimeUnit; NaN where each cell keeps its own value
}

// An IntervalReport is what halving the interval does to the mean dwell of one state.
type IntervalReport struct {
	State string `json:"state"`
	Runs  int    `json:"runs"` // at each of the two intervals
	// Mean dwell with the interval and with half of it, each from runs of its own.
	Mean Value `json:"mean"`
	Half Value `json:"mean_at_half_interval"`
	// Change is what halving moves the mean by, relative to it, and Sampling the
	// standard error of that. NaN where one of the two saw no flip.
	Change   Value `json:"change"`
	Sampling Value `json:"sampling_error"`
}

// setVariation works out how the network's constants vary, or refuses it.
func (j *job) setVariation() error {
	varying := j.network.Varying()
	if len(varying) == 0 {
		if j.options.Interval > 0 {
			return &OptionError{"interval", j.options.Interval, "left out: no constant of this design varies in time"}
		}
		return nil
	}
	v := &VariationReport{Interval: Value(math.NaN())}
	for _, i := range varying {
		c := &j.network.Constants[i]
		r := VaryingReport{c.Name, c.Value, c.Spread, Value(c.Memory)}
		if c.Memory == 0 {
			r.Memory = Value(math.NaN())
		}
		v.Constants = append(v.Constants, r)
	}
	j.report.Variation = v
	return j.setInterval()
}

// setInterval chooses the interval, or takes the one asked for.
func (j *job) setInterval() error {
	longest := variation.DefaultInterval(j.network)
	if longest == 0 {
		if j.options.Interval > 0 {
			return &OptionError{"interval", j.options.Interval, "left out: no constant of this design varies in time"}
		}
		return nil
	}
	j.interval = longest
	for _, s := range j.survey.Stable() {
		if t := s.CorrelationTime(); t > 0 {
			j.interval = math.Min(j.interval, t/perCorrelation)
		}
	}
	if j.options.Interval > 0 {
		j.interval = j.options.Interval
	}
	j.report.Variation.Interval = Value(j.interval)
	return j.checkInterval()
}

// checkInterval refuses intervals so short that runs would do little else than draw
// constants.
func (j *job) checkInterval() error {
	for s, state := range j.survey.Stable() {
		events := 0.0
		for r := range j.network.Reactions {
			events += j.network.Propensity(r, j.survey.Cores[s].Start)
		}
		if events = events * j.interval; events >= leastEvents || state.Absorbing {
			continue
		}
		if j.options.Interval > 0 {
			return &OptionError{"interval", j.interval, fmt.Sprintf("longer: there would be %.2g reactions in an interval", events)}
		}
		c := j.briefest()
		return fmt.Errorf("the memory of %s, %g %s, is so short that it averages out: there would be %.2g reactions in an interval that follows it; "+
			"write its mean, %s = %.6g, as a plain number", c.Name, c.Memory, j.network.TimeUnit, events, c.Name, c.Value*math.Exp(c.Spread*c.Spread/2))
	}
	return nil
}

// briefest gives the constant of the shortest memory.
func (j *job) briefest() model.Constant {
	var moving []model.Constant
	for _, i := range j.network.Varying() {
		if c := j.network.Constants[i]; c.Memory > 0 {
			moving = append(moving, c)
		}
	}
	return slices.MinFunc(moving, func(a, b model.Constant) int {
		if a.Memory < b.Memory {
			return -1
		}
		return 1
	})
}

// varies tells whether some constant varies.
func (j *job) varies() bool { return j.report.Variation != nil }

// varyingNames lists the constants that vary.
func (j *job) varyingNames() string {
	var names []string
	for _, i := range j.network.Varying() {
		names = append(names, j.network.Constants[i].Name)
	}
	return strings.Join(names, ", ")
}

// checkVaried refuses a route that knows no variation, for a design that has some.
func (j *job) checkVaried(route string) error {
	if !j.varies() || route == Runs || route == Langevin {
		return nil
	}
	option := "route"
	if j.options.Route != route {
		option = "second"
	}
	return &OptionError{option, fmt.Sprintf("%q", route), fmt.Sprintf("%s or %s: constants of this design vary (%s), and %s knows them at their medians only; "+
		"for the medians alone, take spread and memory out of the file", Runs, Langevin, j.varyingNames(), route)}
}

// byVariedRuns is byRuns where constants vary in time: as many runs again with half
// the interval show what it does.
func (j *job) byVariedRuns(ctx context.Context) error {
	return j.eachState(func(s int, budget int64) (int64, error) {
		full := &stateRuns{engine: j.exact(j.interval), state: s, span: evenShare}
		allowed, err := j.runState(ctx, full, int64(math.Ceil(float64(budget)*evenShare)))
		j.report.Work.Events += full.spent
		if err != nil {
			return full.spent, err
		}
		half := &stateRuns{engine: j.exact(j.interval / 2), state: s, next: halfReplicate, silent: true, base: evenShare, span: 1 - evenShare}
		if !full.interrupted {
			err = j.spendAll(ctx, half, allowed, full.spent)
			j.report.Work.Events += half.spent
		}
		if err == nil {
			err = j.estimate(full)
		}
		if err == nil {
			j.compareIntervals(full, half)
		}
		return full.spent + half.spent, err
	})
}

// mixed is what plan allows, a, for dwells that are not memoryless: as many more runs as
// the variance of the pilot's dwells is above that of memoryless ones, each cut off the
// earlier the more of the pilot's runs had found no way out. Runs are made an eighth at a
// time, until the budget is spent; that the last of them are left out where dwells are
// long makes the mean by a little too small, which its interval covers.
func (a allowance) mixed(flips int, budget int64, pilot made) allowance {
	left := float64(budget) * (1 - pilotShare)
	if a.again {
		return shared(int64(left), mixedRuns)
	}
	var times []float64
	for i := range pilot.paths {
		if pilot.paths[i].left() {
			times = append(times, pilot.paths[i].time)
		}
	}
	mean, variance := stat.MeanVariance(times, nil)
	stuck := 1 - float64(len(times))/float64(len(pilot.paths))
	perDwell := float64(pilot.work) / float64(len(times))
	most := perDwell * math.Min(mixedCap, math.Max(1/stuck, 3))
	perRun := perDwell + stuck*most
	runs := math.Ceil(float64(flips) * math.Min(math.Max(variance/mean/mean, 1), mixedSpread))
	runs = math.Min(runs, math.Max(1, math.Floor(left/perRun)))
	return allowance{
		runs: int(runs), work: int64(math.Ceil(most)), expect: int64(perRun * runs),
		chunk: int(math.Ceil(runs / 8)), limit: budget,
	}
}

// exhausted tells whether no more runs are to be made after so much work.
func (a *allowance) exhausted(spent int64) bool { return a.limit > 0 && spent >= a.limit }

// more is what is allowed of the rest of a budget.
func (j *job) more(rest int64) allowance {
	if j.varies() {
		return shared(rest, mixedRuns)
	}
	return longRuns(rest)
}

// compareIntervals reports what halving the interval does to the mean dwell of a state.
func (j *job) compareIntervals(full, half *stateRuns) {
	row := IntervalReport{State: j.survey.Stable()[full.state].Name, Runs: len(full.seen)}
	row.Mean, row.Half, row.Change, row.Sampling = j.halving(full, half)
	j.report.Variation.States = append(j.report.Variation.States, row)
	if c := math.Abs(float64(row.Change)); beyondChance(row.Change, row.Sampling) && c > j.options.Precision/2 {
		j.warn("%s: halving the interval of its constants moves the mean by %.2g %%, more than chance: take a shorter one (--interval)", row.State, 100*float64(row.Change))
	}
}

// tellStuck says how many runs were cut off where constants vary.
func (j *job) tellStuck(r *stateRuns) {
	if !j.varies() || r.interrupted || j.options.Until > 0 {
		return
	}
	cut := 0
	for i := range r.seen {
		if r.seen[i].To == dwell.Censored {
			cut++
		}
	}
	if cut > 0 {
		j.warn("%s: %d of %d runs were cut off by their budget of %s: in some cells the constants drawn hold this state very long, or leave no way out of it; "+
			"the chance of holding tells more than the mean", r.label(j.survey.Stable()[r.state].Name), cut, len(r.seen), r.work)
	}
}

// tellTail says where the mean hangs on the longest few dwells.
func (j *job) tellTail(r *stateRuns) {
	if !j.varies() || len(r.seen) < 100 {
		return
	}
	times, total := make([]float64, len(r.seen)), 0.0
	for i := range r.seen {
		times[i] = r.seen[i].Time
		total += times[i]
	}
	slices.Sort(times)
	longest := 0.0
	for _, t := range times[len(times)-len(times)/100:] {
		longest += t
	}
	if share := longest / total; share > tailShare {
		j.warn("%s: the longest hundredth of its dwells holds %.2g %% of the time watched: the mean hangs on few cells, and its interval may be too narrow; "+
			"the chance of holding tells more", r.label(j.survey.Stable()[r.state].Name), 100*share)
	}
}
