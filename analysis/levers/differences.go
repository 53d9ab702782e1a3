package levers

import (
	"context"
	"math"
	"slices"

	"holdfast/analysis/hold"
	"holdfast/model"
)

// byDifferences takes the slopes from hold jobs on either side of today's value.
func (j *job) byDifferences(ctx context.Context) error {
	today, err := j.holdAt(ctx, 0, j.parameters(), 1)
	if err != nil {
		return err
	}
	j.addRows(today)
	for k := range j.parameters() {
		slopes, note, err := j.difference(ctx, k)
		if err != nil {
			return err
		}
		for i := range j.report.Blocks {
			if b := &j.report.Blocks[i]; b.Note == "" {
				l := j.lever(k)
				l.take(slopes[i], note)
				b.Levers = append(b.Levers, l)
			}
		}
	}
	return nil
}

// take puts a slope in, or says why there is none.
func (l *Lever) take(s Slope, note string) {
	l.Slopes = append(l.Slopes, s)
	if math.IsNaN(float64(s.Value)) || note == ownCores {
		l.Note = note
	}
}

// addRows starts a block for each hold time of today.
func (j *job) addRows(today *hold.Report) {
	for _, w := range today.Warnings {
		j.warn("%s", w)
	}
	j.report.Interrupted = today.Interrupted
	for i := range today.Dwells {
		if d := &today.Dwells[i]; !d.Never {
			j.report.Blocks = append(j.report.Blocks, Block{
				From: d.From, To: d.To, Mean: d.Mean, Low: d.Low, High: d.High, HoldRoute: d.Route, Levers: []Lever{},
			})
		}
	}
	for s, state := range j.survey.Stable() {
		from := func(d hold.DwellReport) bool { return d.From == state.Name }
		left := func(d hold.DwellReport) bool { return from(d) && !d.Never }
		if slices.ContainsFunc(today.Dwells, from) && !slices.ContainsFunc(today.Dwells, left) {
			j.neverLeft(s)
		}
	}
}

// none gives one slope for each block, all of a value that is exact, or not known.
func (j *job) none(value float64) []Slope {
	out := make([]Slope, len(j.report.Blocks))
	for i := range out {
		out[i] = newSlope(Differences, value, 0)
	}
	return out
}

// ownCores is the note on a slope between cores that move.
const ownCores = "between each number of copies' own cores: a conserved total changes with it"

// difference gives the slopes in one parameter, one for each block, and what there is
// to say of them, or why there are none.
func (j *job) difference(ctx context.Context, k int) (slopes []Slope, note string, err error) {
	unknown := j.none(math.NaN())
	switch _, value := j.parameter(k); {
	case !j.read(k):
		return j.none(0), "", nil
	case value == 0:
		return unknown, "0 today, which has no per cent: try a small value with --with", nil
	}
	step := j.step(k)
	wide, err := j.sides(ctx, k, step)
	if ctx.Err() != nil || j.report.Interrupted {
		j.report.Interrupted = true
		return unknown, "stopped before it was done", nil
	}
	if err != nil {
		return unknown, "no hold time a step away: " + err.Error(), nil
	}
	for i := range j.report.Blocks {
		slopes = append(slopes, wide.slope(&j.report.Blocks[i]))
	}
	if !wide.sampled() {
		if err := j.refine(ctx, k, step, slopes); err != nil {
			return nil, "", err
		}
	}
	if k == len(j.network.Constants) && j.network.TotalsScale() {
		return slopes, ownCores, nil
	}
	return slopes, "no flip seen a step away: more events (--events) may show some", nil
}

// sides are hold jobs with a constant turned up and down.
type sides struct {
	up, down *hold.Report
	step     float64
}

// sides makes the two hold jobs.
func (j *job) sides(ctx context.Context, k int, step float64) (*sides, error) {
	s := &sides{step: step}
	var err error
	if s.up, err = j.holdAt(ctx, 2*k+1, k, math.Exp(step)); err != nil {
		return nil, err
	}
	if s.down, err = j.holdAt(ctx, 2*k+2, k, math.Exp(-step)); err != nil {
		return nil, err
	}
	j.report.Interrupted = j.report.Interrupted || s.up.Interrupted || s.down.Interrupted
	return s, nil
}

// slope is the mean slope between the two sides, with an interval that takes their
// errors to be independent: their logarithms' half-widths added in quadrature.
func (s *sides) slope(b *Block) Slope {
	up, down := rowOf(s.up, b), rowOf(s.down, b)
	if up == nil || down == nil || !(up.Mean > 0) || !(down.Mean > 0) || up.Never || down.Never {
		return noSlope(Differences)
	}
	v := math.Log(float64(up.Mean/down.Mean)) / (2 * s.step)
	above := math.Hypot(math.Log(float64(up.High/up.Mean)), math.Log(float64(down.Mean/down.Low))) / (2 * s.step)
	below := math.Hypot(math.Log(float64(up.Mean/up.Low)), math.Log(float64(down.High/down.Mean))) / (2 * s.step)
	out := newSlope(Differences, v, 0)
	out.Low, out.High = hold.Value(v-below), hold.Value(v+above)
	return out
}

// sampled tells whether any of the hold times comes from runs.
func (s *sides) sampled() bool {
	sampled := func(d hold.DwellReport) bool { return d.Sampled }
	return slices.ContainsFunc(s.up.Dwells, sampled) || slices.ContainsFunc(s.down.Dwells, sampled)
}

// refine takes half the step as well, since hold times carry no sampling error, and
// extrapolates: the error left is of the fourth order in the step, and the interval is
// what the extrapolation changed (Richardson, Phil. Trans. R. Soc. A 210 (1911) 307).
func (j *job) refine(ctx context.Context, k int, step float64, slopes []Slope) error {
	near, err := j.sides(ctx, k, step/2)
	if err != nil {
		return err
	}
	for i := range slopes {
		s := &slopes[i]
		n := near.slope(&j.report.Blocks[i])
		change := (n.Value - s.Value) / 3
		half := hold.Value(math.Abs(float64(change))) + (n.High-n.Low)/2
		s.Value = n.Value + change
		s.Low, s.High = s.Value-half, s.Value+half
	}
	return nil
}

// rowOf finds the same hold time in another report.
func rowOf(r *hold.Report, b *Block) *hold.DwellReport {
	for i := range r.Dwells {
		if d := &r.Dwells[i]; d.From == b.From && d.To == b.To {
			return d
		}
	}
	return nil
}

// step is the one asked for, or half the way to a nearer fold.
func (j *job) step(k int) float64 {
	step := j.options.Step
	_, value := j.parameter(k)
	for _, l := range j.losses[k] {
		if l != nil {
			step = math.Min(step, math.Abs(math.Log(float64(l.At)/value))/2)
		}
	}
	return step
}

// holdAt makes the hold job number n, with parameter k multiplied by a factor, between
// today's cores. Each has random numbers of its own, so that errors are independent, as
// the intervals of differences take them to be.
func (j *job) holdAt(ctx context.Context, n, k int, factor float64) (*hold.Report, error) {
	network, err := j.turned(k, factor)
	if err != nil {
		return nil, err
	}
	o := j.options.Hold
	o.Point, o.Folder, o.Cores = uint64(n), "", j.survey.Cores
	if network == j.network {
		o.States = j.list
	}
	if k == len(j.network.Constants) && j.network.TotalsScale() {
		o.Cores = nil // another total has other counts
	}
	jobs := float64(2*j.parameters() + 1)
	o.Progress = func(p hold.Progress) {
		j.tell(j.jobName(n), (float64(n)+p.Share)/jobs)
	}
	return hold.Run(ctx, network, o)
}

// turned gives the network with parameter k multiplied by a factor.
func (j *job) turned(k int, factor float64) (*model.Network, error) {
	if factor == 1 {
		return j.network, nil
	}
	name, value := j.parameter(k)
	if k == len(j.network.Constants) {
		return j.network.Rebind(value*factor, nil)
	}
	return j.network.Rebind(0, map[string]float64{name: value * factor})
}

// jobName names a hold job.
func (j *job) jobName(n int) string {
	if n == 0 {
		return "hold times of today"
	}
	name, _ := j.parameter((n - 1) / 2)
	return "hold times a step away in " + name
}
