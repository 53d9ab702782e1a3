package hold

import (
	"context"
	"errors"
	"fmt"
	"math"

	"holdfast/analysis/action"
	"holdfast/analysis/records"
	"holdfast/deterministic"
)

// An ActionReport tells how hold times were carried on to the design's copies by least
// action.
type ActionReport struct {
	// Paths has one for each ordered pair of states that a saddle joins.
	Paths []ActionPath `json:"paths"`
}

// An ActionPath is the cheapest way from a state to another.
type ActionPath struct {
	From   string `json:"from"`
	To     string `json:"to"`
	Saddle string `json:"saddle"`
	// Exponent is S of the mean time C·exp(S·copies), with its error; Others is how many
	// more saddles join the two, at no smaller S.
	Exponent Value `json:"exponent"`
	Error    Value `json:"exponent_error"`
	Others   int   `json:"other_saddles"`
	// Prefactor is C at the design's copies in TimeUnit, with its interval; Copies are
	// those at which it was found, Source is the route that it was found by.
	Prefactor     Value   `json:"prefactor"`
	PrefactorLow  Value   `json:"prefactor_low"`
	PrefactorHigh Value   `json:"prefactor_high"`
	Copies        []Value `json:"copies"`
	Source        string  `json:"source"`
}

// leastExponent is the Ω S Ω S below which flips are not rare, and least action says
// nothing of them.
const leastExponent = 3

// A way is one pair of states as least action sees it.
type way struct {
	from, to  int // index of the state, or records.Elsewhere
	pair      *action.Pair
	prefactor action.Prefactor
	source    string
	log, half float64 // ln of the mean time, and the half-width of its interval
}

// byAction takes the exponents of the hold times from paths of least action and the
// rest from what can be had at fewer copies.
func (j *job) byAction(ctx context.Context) error {
	if err := j.checkDeclared(); err != nil {
		return err
	}
	j.tell("action: paths", 0)
	routes, err := action.Survey(ctx, j.survey, action.Options{})
	if err == nil {
		j.report.Action = &ActionReport{Paths: []ActionPath{}}
		err = j.actionWays(ctx, routes)
	}
	if ctx.Err() != nil {
		j.report.Interrupted = true
		j.warn("least action did not come to its end: nothing is known of the hold times by it")
		return nil
	}
	var fixed *action.FixedNoiseError
	if errors.As(err, &fixed) {
		return fmt.Errorf("reaction %q changes %s, a species of fixed count, and its noise does not vanish as copies grow: there is no least action; take --route runs, staged or lattice", fixed.Reaction, fixed.Species)
	}
	return err
}

// checkDeclared sees that all states are resting ones, and says what becomes of cores
// that are declared in molecules.
func (j *job) checkDeclared() error {
	for _, s := range j.survey.Stable() {
		if s.Kind == deterministic.Declared {
			return fmt.Errorf("the declared core %q is no resting state, and least action goes from one resting state to another: take --route runs, staged or lattice", s.Name)
		}
	}
	if len(j.network.Declared) > 0 {
		j.warn("action: the design's own cores, in molecules, mean something else at other copies: the prefactors are found with cores by linear noise")
	}
	return nil
}

func (j *job) tell(stage string, share float64) {
	if j.options.Progress != nil {
		j.options.Progress(Progress{Stage: stage, Share: share, Events: j.report.Work.Events})
	}
}

// actionWays finds the mean time of every pair and reports it.
func (j *job) actionWays(ctx context.Context, routes *action.Routes) error {
	ways, err := j.ways(routes)
	if err != nil {
		return err
	}
	if err := j.findPrefactors(ctx, ways); err != nil {
		return err
	}
	for s, state := range j.survey.Stable() {
		if state.Absorbing {
			j.neverLeft(s)
			continue
		}
		j.addWays(s, routes, ways)
	}
	j.warnWide(ways)
	for _, w := range routes.Warnings {
		j.warn("%s", w)
	}
	return j.recordPaths(routes)
}

// ways lists the pairs that a saddle joins.
func (j *job) ways(routes *action.Routes) ([]*way, error) {
	var out []*way
	names := j.stateNames()
	for k := range routes.Pairs {
		p := &routes.Pairs[k]
		from, to := indexOf(names, p.From), indexOf(names, p.To)
		if p.To == action.Absorbed {
			to = records.Elsewhere
		}
		if from < 0 || to == -1 && p.To != action.Absorbed {
			continue // a state without a core of its own
		}
		if p.Err != nil && !p.Never {
			return nil, fmt.Errorf("%s to %s: %w; take --route runs, staged or lattice", p.From, p.To, p.Err)
		}
		if len(p.Paths) == 0 {
			continue
		}
		if rare := p.S * j.network.Copies; rare < leastExponent {
			return nil, fmt.Errorf("flips from %s to %s are not rare: S·copies is %.3g, and least action needs %d or more; take --route lattice or runs, which see such flips",
				p.From, p.To, rare, leastExponent)
		}
		out = append(out, &way{from: from, to: to, pair: p, prefactor: action.Prefactor{Power: action.PowerOf(p.Paths[0])}})
	}
	if len(out) == 0 && !j.allAbsorbing() {
		return nil, errors.New("no saddle leads from one state to another: take --route runs")
	}
	return out, nil
}

func (j *job) allAbsorbing() bool {
	for _, s := range j.survey.Stable() {
		if !s.Absorbing {
			return false
		}
	}
	return true
}

func indexOf(names []string, name string) int {
	for i, n := range names {
		if n == name {
			return i
		}
	}
	return -1
}

// addWays adds the rows of one state.
func (j *job) addWays(from int, routes *action.Routes, ways []*way) {
	var mine []*way
	for _, w := range ways {
		if w.from == from {
			mine = append(mine, w)
		}
	}
	name := j.survey.Stable()[from].Name
	several := len(mine) > 1
	if several {
		j.addAction(from, records.Any, sumOf(mine), true)
	}
	for _, w := range mine {
		j.addAction(from, w.to, *w, !several)
		j.describeWay(w)
	}
	for k := range routes.Pairs {
		p := &routes.Pairs[k]
		if p.From != name || len(p.Paths) > 0 {
			continue
		}
		switch {
		case p.Never:
			j.addNever(from, indexOf(j.stateNames(), p.To), p)
		case len(p.Via) > 0:
			j.warn("%s to %s: no saddle joins the two; the likeliest way is by %s, with S = %.6g in all", p.From, p.To, listed(p.Via), p.S)
		}
	}
}

// sumOf is leaving by whichever way: the rates add up.
func sumOf(ways []*way) way {
	out := way{log: math.Inf(1)}
	low, high := math.Inf(1), math.Inf(1)
	for _, w := range ways {
		out.log = addRates(out.log, w.log)
		low, high = addRates(low, w.log-w.half), addRates(high, w.log+w.half)
	}
	out.half = math.Max(out.log-low, high-out.log)
	return out
}

// addRates gives the logarithm of the mean time of two ways out from those of each:
// −ln(e^−a + e^−b).
func addRates(a, b float64) float64 {
	if a > b {
		a, b = b, a
	}
	return a - math.Log1p(math.Exp(a-b))
}

// warnWide warns where an interval is wider than was asked for.
func (j *job) warnWide(ways []*way) {
	if !j.options.sampled {
		return
	}
	for _, w := range ways {
		if wide := math.Expm1(w.half); wide > j.options.Precision {
			j.warn("action: %s to %s: the interval reaches %.2g %% from the mean, wider than the %.2g %% asked: it is what the prefactor leaves open, and more work does not narrow it",
				w.pair.From, w.pair.To, 100*wide, 100*j.options.Precision)
		}
	}
}
