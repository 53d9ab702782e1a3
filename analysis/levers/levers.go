package levers

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"strconv"
	"time"

	"holdfast/analysis/hold"
	"holdfast/analysis/lattice"
	"holdfast/analysis/survey/resting"
	"holdfast/deterministic"
	"holdfast/model"
)

// A job is one levers job at work.
type job struct {
	network *model.Network
	options Options
	list    *resting.List
	survey  *deterministic.Map // of the list
	report  *Report
	losses  [][2]*Loss // by parameter: below and above
	paths   []exponent // once exponents has found them
}

// Run surveys the network, finds the slopes of every hold time in every constant and in
// copies, and the way to the nearest fold, and writes the records if a folder is given.
//
// Errors are a *hold.OptionError, those of deterministic.Survey, of package lattice
// where that route is asked for, of hold.Run and of the records. If ctx is done before
// the job is, the report holds what was known by then and has Interrupted set; there is
// no error then, but ctx's where nothing was known.
func Run(ctx context.Context, network *model.Network, options Options) (*Report, error) {
	begun := time.Now()
	options, err := options.complete()
	if err != nil {
		return nil, err
	}
	list, err := resting.States(ctx, network)
	if err != nil {
		return nil, err
	}
	j := &job{network: network, options: options, list: list, survey: list.Map, report: newReport(network, options)}
	for _, w := range slices.Concat(list.Map.Warnings, list.Warnings) {
		j.warn("%s", w)
	}
	if err := j.findLosses(ctx); err != nil {
		return nil, err
	}
	if err := j.takeRoute(ctx); err != nil {
		return nil, err
	}
	j.finish()
	j.report.Seconds = time.Since(begun).Seconds()
	return j.report, j.write()
}

// parameters counts the constants, and copies, which come last.
func (j *job) parameters() int { return len(j.network.Constants) + 1 }

// copiesName is what copies are called among the constants.
const copiesName = "copies"

// parameter gives the name and today's value of a constant, or of copies.
func (j *job) parameter(k int) (name string, value float64) {
	if k == len(j.network.Constants) {
		return copiesName, j.network.Copies
	}
	return j.network.Constants[k].Name, j.network.Constants[k].Value
}

// read tells whether anything depends on the parameter.
func (j *job) read(k int) bool {
	return k == len(j.network.Constants) || j.network.ReadsConstant(k)
}

// patience is the longest that auto lets the lattice take, in seconds by its own
// estimate.
const patience = 60

// takeRoute finds the slopes by the route asked for, or by the cheapest that serves.
func (j *job) takeRoute(ctx context.Context) error {
	switch j.options.Route {
	case Lattice:
		j.report.Route = "lattice: as asked for"
		if j.varies() {
			j.warn("some constants vary, and the lattice takes each at its median: --route differences takes in how they vary")
		}
		return j.latticeAndAction(ctx)
	case Action:
		j.report.Route = "action: as asked for"
		return j.byAction(ctx, true)
	case Differences:
		j.report.Route = j.differencesText("as asked for")
		return j.byDifferences(ctx)
	}
	return j.choose(ctx)
}

// choose takes the cheapest route that serves.
func (j *job) choose(ctx context.Context) error {
	if j.varies() {
		j.report.Route = j.differencesText("some constants vary, and the other routes know their medians alone")
		return j.byDifferences(ctx)
	}
	reason, err := j.tooLarge(ctx)
	if err != nil {
		return err
	}
	if reason == "" {
		j.report.Route = "lattice: the master equation itself, differentiated in all constants at once"
		if err = j.latticeAndAction(ctx); !beyond(err) {
			return err
		}
		reason = why(err)
	}
	if err := j.byAction(ctx, false); err == nil || ctx.Err() != nil {
		j.report.Route = "action: the exponent of large copies, differentiated; " + reason
		return err
	}
	j.report.Route = j.differencesText(reason)
	return j.differencesAndAction(ctx)
}

// beyond tells that only the lattice's numbers are at fault.
func beyond(err error) bool {
	var far *lattice.RangeError
	var box *lattice.BoxError
	return errors.As(err, &far) || errors.As(err, &box)
}

// hopeless is the size of a box whose lattice is not even counted: far beyond patience.
const hopeless = 4e6

// tooLarge says why the lattice cannot serve; empty where it can.
func (j *job) tooLarge(ctx context.Context) (string, error) {
	if points := j.points(j.network.Copies); points > hopeless {
		return fmt.Sprintf("the lattice would have about %.2g states", points), nil
	}
	p := j.problem(j.survey)
	e, err := p.Estimate(ctx)
	switch {
	case ctx.Err() != nil:
		return "", context.Cause(ctx)
	case err != nil:
		return why(err), nil
	case e.Seconds > patience:
		return fmt.Sprintf("the lattice of %d states would take about %.0f s", e.States, e.Seconds), nil
	}
	return "", nil
}

// latticeAndAction takes the slopes from the lattice and puts those by action beside.
func (j *job) latticeAndAction(ctx context.Context) error {
	if err := j.byLattice(ctx); err != nil {
		return err
	}
	return j.addAction(ctx)
}

// differencesAndAction takes the slopes from hold jobs, with those by action beside.
func (j *job) differencesAndAction(ctx context.Context) error {
	beside, err := j.leadingOrder(ctx)
	if err != nil {
		return err
	}
	if err := j.byDifferences(ctx); err != nil {
		return err
	}
	beside()
	return nil
}

// varies tells whether a constant varies across cells or in time.
func (j *job) varies() bool {
	return slices.ContainsFunc(j.network.Constants, func(c model.Constant) bool { return c.Spread > 0 })
}

func (j *job) differencesText(reason string) string {
	return fmt.Sprintf("differences: the mean slope between each constant divided by %[1]g and multiplied by %[1]g; %[2]s", round(math.Exp(j.options.Step)), reason)
}

// round gives four significant digits.
func round(v float64) float64 {
	out, _ := strconv.ParseFloat(strconv.FormatFloat(v, 'g', 4, 64), 64)
	return out
}

// why says in a few words why the lattice cannot serve.
func why(err error) string {
	var dimensions *lattice.DimensionError
	var large *lattice.TooLargeError
	var far *lattice.RangeError
	switch {
	case errors.As(err, &far):
		return "the lattice's hold times are beyond what double precision holds"
	case errors.As(err, &dimensions):
		return fmt.Sprintf("the lattice serves three independent species at most, and this design has %d", dimensions.Dimensions)
	case errors.As(err, &large):
		return fmt.Sprintf("the lattice would need about %.3g GiB or more", float64(large.Estimate.Bytes)/(1<<30))
	}
	return "the lattice cannot serve: " + err.Error()
}

// finish sorts the levers and puts what they say into words.
func (j *job) finish() {
	for i := range j.report.Blocks {
		b := &j.report.Blocks[i]
		slices.SortStableFunc(b.Levers, func(x, y Lever) int { return cmp.Compare(rank(&y), rank(&x)) })
	}
	for i := range j.report.Blocks {
		j.report.Blocks[i].First = j.first(i)
	}
	j.report.Together = j.together()
}

// rank is what levers are sorted by: slopes by their size, then constants that are 0
// today, then what is not known.
func rank(l *Lever) float64 {
	v := math.Abs(float64(l.Slope().Value))
	switch {
	case math.IsNaN(v):
		return -2
	case l.PerUnit:
		return -1
	}
	return v
}

// lever starts the entry of one parameter.
func (j *job) lever(k int) Lever {
	name, value := j.parameter(k)
	l := Lever{Name: name, Value: hold.Value(value), PerUnit: value == 0, Below: j.losses[k][0], Above: j.losses[k][1], Slopes: []Slope{}}
	switch {
	case !j.read(k):
		l.Note = "no reaction reads it"
	case k < len(j.network.Constants) && j.network.Constants[k].Spread > 0:
		l.Note = "varies: its median is turned"
	case l.PerUnit:
		l.Note = "0 today: % for each 0.01 added"
	}
	return l
}

// warn adds a warning, once.
func (j *job) warn(format string, a ...any) {
	if text := fmt.Sprintf(format, a...); !slices.Contains(j.report.Warnings, text) {
		j.report.Warnings = append(j.report.Warnings, text)
	}
}

// tell reports progress.
func (j *job) tell(stage string, share float64) {
	if j.options.Hold.Progress != nil {
		j.options.Hold.Progress(hold.Progress{Stage: stage, Share: share})
	}
}

// neverLeft reports a state that nothing leads out of.
func (j *job) neverLeft(s int) {
	inf := hold.Value(math.Inf(1))
	j.report.Blocks = append(j.report.Blocks, Block{
		From: j.survey.Stable()[s].Name, To: anyState, Mean: inf, Low: inf, High: inf, Levers: []Lever{},
		Note: "no reaction leads out of it: it never returns, and no constant changes that",
	})
}

// anyState stands for leaving a state by whichever way; elsewhere for an absorbing state
// that is none of the resting states.
const (
	anyState  = "any"
	elsewhere = "absorbed"
)
