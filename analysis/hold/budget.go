package hold

import "math"

const (
	// pilotShare of a state's events goes into its pilot, whose runs serve only to
	// plan the ones that count and are then forgotten: a plan drawn from the runs it
	// governs would favour short dwells.
	pilotShare = 0.05
	pilotRuns  = 32
	// pilotFlips is how many flips of the pilot make its mean good enough (to
	// about a third) to plan with.
	pilotFlips = 8
	// capDwells is the length, in mean dwells as the pilot saw them, at which a run
	// of a planned job is cut off all the same: so far out that it cuts next to none.
	capDwells = 30
	// spareEvents is the shortest run worth making, in events or steps, where flips are
	// not in reach: it must outlast the relaxation from its start many times.
	spareEvents = 1_000_000
)

// An allowance is what the runs of one state may spend.
type allowance struct {
	runs   int
	work   int64 // most of one run, in events or steps; 0: no limit
	expect int64 // work that all of them are likely to take; 0: not known
	again  bool  // what is left of the budget afterwards goes into more runs
	// chunk, where above 0, is the most runs that are made before their work is held
	// against limit, beyond which no more are.
	chunk int
	limit int64
}

// pilotAllowance is the pilot of a state with so many events to spend.
func pilotAllowance(events int64) allowance {
	return allowance{runs: pilotRuns, work: max(1, int64(pilotShare*float64(events))/pilotRuns)}
}

// plan gives the runs that count. flips is what the precision takes; events is
// what the state may spend; seenFlips and seenEvents are the pilot's.
//
// Where the pilot saw flips enough, every run goes on to its flip, as many runs
// as the precision takes or the budget pays: the number of flips is then fixed
// beforehand, and 2·flips·mean/θ is χ² with 2·flips degrees of freedom. Where it
// did not, a few long runs share the budget, and flips are counted in a time
// fixed beforehand but for chance; what runs that flip leave of it goes into more runs.
// Neither depends on threads, nor on the runs
// themselves.
func plan(flips int, events int64, seenFlips int, seenEvents int64) allowance {
	left := float64(events) * (1 - pilotShare)
	if seenFlips >= pilotFlips {
		perDwell := float64(seenEvents) / float64(seenFlips)
		runs := min(float64(flips), math.Max(1, math.Floor(left/perDwell)))
		return allowance{runs: int(runs), work: int64(math.Ceil(perDwell * capDwells)), expect: int64(perDwell * runs)}
	}
	return longRuns(int64(left))
}

// longRuns shares so many events among a few long runs.
func longRuns(events int64) allowance { return shared(events, pilotRuns) }

// shared shares so many events among at most so many runs.
func shared(events, most int64) allowance {
	runs := min(max(events/spareEvents, 1), most)
	return allowance{runs: int(runs), work: max(1, events/runs), expect: events, again: true}
}

// doubled allows the same runs twice the work.
func (a allowance) doubled() allowance {
	a.work, a.expect, a.limit = 2*a.work, 2*a.expect, 2*a.limit
	return a
}
