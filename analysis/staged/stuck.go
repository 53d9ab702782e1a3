package staged

import (
	"fmt"

	"holdfast/ssa"
)

// A StuckError says that runs did not get on: no rate can be told.
type StuckError struct {
	From, To string // names of the states
	// Share is how far along the coordinate the last rung is that was met, from 0 to 1;
	// 0 where none was.
	Share float64
	// Runs were made from there, or Time was watched where no rung was met.
	Runs int
	Time float64
	// Elsewhere names the state whose core most of the runs entered instead, if any.
	Elsewhere string
	// Emptied tells that runs came to a state that no reaction leads out of.
	Emptied bool
	// Rate is an upper limit of the rate of the flip with 95 % confidence, as far as
	// this coordinate can tell; 0 if there is none.
	Rate float64
}

// Error says where the runs were stuck.
func (e *StuckError) Error() string {
	switch {
	case e.Emptied && e.Share == 0:
		return fmt.Sprintf("%s empties before it leaves its core towards %s: its runs end where no reaction can happen", e.From, e.To)
	case e.Share == 0:
		return fmt.Sprintf("runs of %s never left its core towards %s in %.4g units of time", e.From, e.To, e.Time)
	case e.Elsewhere != "":
		return fmt.Sprintf("none of %d runs came from %s to %s: from %.3g %% of the way on they entered the core of %s instead", e.Runs, e.From, e.To, 100*e.Share, e.Elsewhere)
	}
	return fmt.Sprintf("the coordinate does not advance from %s to %s: none of %d runs got beyond %.3g %% of the way", e.From, e.To, e.Runs, 100*e.Share)
}

// neverLeft says that the first rung was not met.
func (j *job) neverLeft(seen []ssa.Climb, watched float64) *StuckError {
	e := &StuckError{From: j.name(j.plan.From), To: j.name(j.plan.To), Time: watched}
	for i := range seen {
		e.Emptied = e.Emptied || seen[i].Ending == ssa.Emptied
	}
	e.Elsewhere = j.elsewhere(seen)
	return e
}

// neverAdvances says that no rung beyond the last was met, nor the other core entered,
// often enough.
func (j *job) neverAdvances(l *ladder, made []ssa.Climb, share float64) *StuckError {
	rate := l.flux
	for _, p := range l.chances {
		rate *= p
	}
	// none of n: the chance is below 3/n with 95 % confidence, −ln 0.05 being 3.0
	e := &StuckError{From: j.name(j.plan.From), To: j.name(j.plan.To), Share: share, Runs: len(made), Rate: rate * 3 / float64(len(made))}
	e.Elsewhere = j.elsewhere(made)
	return e
}

// elsewhere names the third state that a tenth of the runs or more entered, if any.
func (j *job) elsewhere(made []ssa.Climb) string {
	counts := make([]int, len(j.plan.Cores))
	for i := range made {
		if made[i].Ending == ssa.Arrived {
			counts[made[i].Core]++
		}
	}
	for core, n := range counts {
		if core != j.plan.To && n > 0 && 10*n >= len(made) {
			return j.name(core)
		}
	}
	return ""
}

func (j *job) name(core int) string { return j.plan.Cores[core].State }
