package hold

import (
	"context"

	"holdfast/analysis/dwell"
)

const (
	// block is the most runs that are in memory at once.
	block = 1 << 16
	// pilotReplicate is the first replicate of pilots: no run that counts has it.
	pilotReplicate = 1 << 39
)

// stateRuns are the runs of one state and what was seen in them.
type stateRuns struct {
	engine
	state       int
	seen        []dwell.Observation
	spent       int64  // work
	next        uint64 // replicate of the next run that counts
	silent      bool   // the runs are not recorded
	interrupted bool
	lost        int   // runs that went wrong and are not in seen
	problem     error // of the first of them
	// base and span are the part of the state's progress that these runs are.
	base, span float64
}

// byRuns estimates the hold time of every state in turn by exact runs.
func (j *job) byRuns(ctx context.Context) error {
	if j.interval > 0 {
		return j.byVariedRuns(ctx)
	}
	return j.eachState(func(s int, budget int64) (int64, error) {
		r := &stateRuns{engine: j.exact(0), state: s, span: 1}
		_, err := j.runState(ctx, r, budget)
		j.report.Work.Events += r.spent
		if err != nil {
			return r.spent, err
		}
		return r.spent, j.estimate(r)
	})
}

// eachState shares the budget among the states that can be left. sample spends up
// to so much on one of them (0: no limit) and says what it spent.
func (j *job) eachState(sample func(s int, budget int64) (int64, error)) error {
	states := len(j.survey.Stable())
	left := j.options.Events
	for s, state := range j.survey.Stable() {
		if state.Absorbing {
			j.neverLeft(s)
			continue
		}
		spent, err := sample(s, perRun(left, states-s))
		if err != nil {
			return err
		}
		left = remaining(left, spent)
	}
	return nil
}

// runState makes the runs of r's state, at a cost of at most budget (0: no limit),
// and gives what a pilot allowed.
func (j *job) runState(ctx context.Context, r *stateRuns, budget int64) (allowance, error) {
	allowed, err := j.allow(ctx, r, budget)
	if err != nil {
		return allowed, err
	}
	return allowed, j.spendAll(ctx, r, allowed, budget)
}

// spendAll makes the runs that are allowed, and more while the budget lasts where
// that is allowed too.
func (j *job) spendAll(ctx context.Context, r *stateRuns, allowed allowance, budget int64) error {
	err := j.spend(ctx, r, allowed)
	for err == nil && allowed.again && !r.interrupted && budget-r.spent >= spareEvents {
		err = j.spend(ctx, r, j.more(budget-r.spent))
	}
	return err
}

// spend makes the runs that are allowed, a block at a time.
func (j *job) spend(ctx context.Context, r *stateRuns, allowed allowance) error {
	size := block
	if allowed.chunk > 0 {
		size = allowed.chunk
	}
	for done := 0; done < allowed.runs && !r.interrupted && !allowed.exhausted(r.spent); done += size {
		b := batch{state: r.state, first: r.next, runs: min(size, allowed.runs-done), most: allowed.work}
		b.progress = j.progressOf(r, done, allowed)
		if err := j.count(ctx, r, b); err != nil {
			return err
		}
		r.next += uint64(b.runs)
	}
	return nil
}

// allow plans the runs of a state, by a pilot where the number is not given.
func (j *job) allow(ctx context.Context, r *stateRuns, budget int64) (allowance, error) {
	if j.options.Runs > 0 {
		return allowance{runs: int(j.options.Runs), work: perRun(budget, int(j.options.Runs))}, nil
	}
	flips := dwell.FlipsFor(j.options.Precision)
	if budget == 0 {
		return allowance{runs: flips}, nil
	}
	pilot := pilotAllowance(budget)
	m, err := r.run(ctx, batch{state: r.state, first: pilotReplicate, runs: pilot.runs, most: pilot.work})
	r.spent += m.work
	if m.stops || err != nil {
		r.interrupted = m.stops
		return allowance{}, err
	}
	seen := 0
	for i := range m.paths {
		if m.paths[i].left() {
			seen++
		}
	}
	allowed := plan(flips, budget, seen, m.work)
	if j.varies() {
		allowed = allowed.mixed(flips, budget, m)
	}
	return allowed, nil
}

// perRun shares work among runs; 0 stays no limit.
func perRun(work int64, runs int) int64 {
	if work == 0 {
		return 0
	}
	return max(1, work/int64(runs))
}

// count makes the runs of b, takes their dwells into r and records them.
func (j *job) count(ctx context.Context, r *stateRuns, b batch) error {
	m, err := r.run(ctx, b)
	r.spent += m.work
	r.interrupted = r.interrupted || m.stops
	for i := 0; i < len(m.paths) && err == nil; i++ {
		err = j.observe(r, &m.paths[i])
	}
	return err
}

// observe adds one path to what was seen.
func (j *job) observe(r *stateRuns, p *path) error {
	switch p.fate {
	case byStop:
		r.interrupted = true
		if p.work == 0 {
			return nil
		}
	case byFault:
		if r.lost++; r.problem == nil {
			r.problem = p.err
		}
		return j.record(r, p, dwell.Censored)
	}
	seen := j.observation(p)
	r.seen = append(r.seen, seen)
	return j.record(r, p, seen.To)
}
