package batch

import (
	"context"
	"errors"
	"fmt"
	"strings"

	"holdfast/analysis/hold"
	"holdfast/analysis/records"
	"holdfast/analysis/survey/resting"
	"holdfast/deterministic"
	"holdfast/ssa"
)

// compute answers one point. The only error is that ctx was done before.
func compute(ctx context.Context, points *Points, size *Size, o hold.Options, at Point) (a *answer, err error) {
	a = &answer{Point: at}
	defer func() {
		switch r := recover(); {
		case r == nil:
		case ctx.Err() != nil:
			a, err = nil, context.Cause(ctx)
		default: // one point must not end a night's work
			a, err = &answer{Point: at, Status: Failed, Message: fmt.Sprintf("holdfast itself failed at this point: %v; please report it", r)}, nil
		}
	}()
	network, err := points.Bind(at)
	if err != nil {
		a.explain(err)
		return a, nil
	}
	list, err := resting.States(ctx, network)
	if ctx.Err() != nil {
		return nil, context.Cause(ctx)
	}
	a.takeStates(list)
	if err != nil {
		a.explain(err)
	}
	o.Seed, o.Point, o.States = points.base.Seed, uint64(at.Number), list
	if size != nil {
		a.takeSize(ctx, network, size, o)
		return a, context.Cause(ctx)
	}
	if err != nil {
		return a, nil
	}
	report, err := hold.Run(ctx, network, o)
	switch {
	case ctx.Err() != nil:
		return nil, context.Cause(ctx)
	case err != nil:
		a.explain(err)
	default:
		a.takeReport(report, list.Map.Stable())
	}
	return a, nil
}

// takeStates takes what the map tells.
func (a *answer) takeStates(list *resting.List) {
	if list == nil || list.Map == nil {
		return
	}
	a.Complete, a.States = list.Complete(), hold.StateRecords(list.Map)
	a.Warnings = append(append(a.Warnings, list.Map.Warnings...), list.Warnings...)
	for _, s := range list.Map.States {
		if s.Kind.Stable() || s.Kind == deterministic.Declared {
			a.Stable++
		}
	}
}

// takeReport takes the hold times.
func (a *answer) takeReport(r *hold.Report, stable []deterministic.State) {
	a.Status, a.Events, a.Warnings = Switch, r.Work.Events, r.Warnings
	for _, row := range r.Rates {
		named := rate{From: stable[row.From].Name, Row: row}
		if row.To >= 0 {
			named.To = stable[row.To].Name
		}
		a.Rates = append(a.Rates, named)
	}
	a.Route, _, _ = strings.Cut(r.Route, ":")
}

// explain takes an error as what came of the point.
func (a *answer) explain(err error) {
	var one *deterministic.OneStateError
	var away *deterministic.RunawayError
	var counts *ssa.RunawayError
	var same *deterministic.IndistinctError
	a.Status, a.Message = Failed, err.Error()
	switch {
	case errors.As(err, &one):
		a.Status = OneState
	case errors.As(err, &away), errors.As(err, &counts):
		a.Status = RunsAway
	case errors.As(err, &same):
		a.Status = Indistinct
	case errors.Is(err, deterministic.ErrNoRestingState):
		a.Status = NoState
	}
	a.Rates, a.Route = nil, ""
}

// slowRate is the slowest rate at which a stable state is returned to, which goes to 0
// towards a fold; 0 where no state is stable.
func (a *answer) slowRate() float64 {
	slow := 0.0
	for _, s := range a.States {
		if r := -real(s.Eigenvalue); stable(s) && r > 0 && (slow == 0 || r < slow) {
			slow = r
		}
	}
	return slow
}

func stable(s records.State) bool {
	return s.Type == deterministic.StableNode.String() || s.Type == deterministic.StableFocus.String()
}
