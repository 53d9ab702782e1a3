package hold

import (
	"context"
	"fmt"
	"slices"
	"strings"
)

// The routes that can be asked for.
const (
	// Auto takes the cheapest route that is valid for the design.
	Auto = "auto"
	// Runs makes exact stochastic runs.
	Runs = "runs"
	// Lattice solves the master equation on its lattice.
	Lattice = "lattice"
	// Langevin makes paths of the chemical Langevin equation, an approximation.
	Langevin = "langevin"
	// Action takes exponents from paths of least action, the rest from fewer copies.
	Action = "action"

	// Staged makes exact runs by stages, for flips that are rare.
	Staged = "staged"

	// absorbing marks what needs no route: no reaction leads out of the state.
	absorbing = "absorbing"
)

// Routes lists the routes that can be asked for.
func Routes() []string { return []string{Auto, Runs, Staged, Lattice, Action, Langevin} }

func checkRoute(name, route string) error {
	if !slices.Contains(Routes(), route) {
		return &OptionError{name, fmt.Sprintf("%q", route), "one of " + strings.Join(Routes(), ", ")}
	}
	return nil
}

// takeRoutes estimates the hold times by the route asked for and, if a second one
// is asked for, by that as well, and holds the two against each other.
func (j *job) takeRoutes(ctx context.Context) error {
	if err := j.checkSecond(); err != nil {
		return err
	}
	first, err := j.takeFirst(ctx)
	if err != nil || j.options.Second == "" {
		return err
	}
	second := j.options.Second
	if second == Auto {
		second = j.other(first)
	}
	if second == first {
		return &OptionError{"second", fmt.Sprintf("%q", second), "another route than the first, which is " + first + " (--route chooses it)"}
	}
	if err := j.take(ctx, second); err != nil {
		return err
	}
	j.report.Verdicts = verdicts(j.report.Dwells, first, second)
	return nil
}

// checkSecond refuses a second route that knows nothing of constants that vary, before
// any work is done.
func (j *job) checkSecond() error {
	if j.options.Second == "" || j.options.Second == Auto {
		return nil
	}
	return j.checkVaried(j.options.Second)
}

// other is the route that auto holds against the first.
func (j *job) other(route string) string {
	switch {
	case route == Lattice, j.varies() && route != Runs:
		return Runs
	case j.varies():
		return Langevin
	}
	return Lattice
}

// take estimates the hold times by one route.
func (j *job) take(ctx context.Context, route string) error {
	switch route {
	case Lattice:
		return j.byLattice(ctx)
	case Langevin:
		return j.byLangevin(ctx)
	case Staged:
		return j.byStaged(ctx)
	case Action:
		return j.byAction(ctx)
	}
	return j.byRuns(ctx)
}
