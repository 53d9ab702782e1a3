package hold

import (
	"context"
	"errors"
	"fmt"
	"slices"
	"strings"

	"holdfast/analysis/lattice"
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

	// Staged makes exact runs by stages, for flips that are rare.
	Staged = "staged"

	// absorbing marks what needs no route: no reaction leads out of the state.
	absorbing = "absorbing"
)

// Routes lists the routes that can be asked for.
func Routes() []string { return []string{Auto, Runs, Staged, Lattice, Langevin} }

// patience is the longest that auto lets the lattice take, in seconds of one core of
// a usual machine by its own estimate, before it turns to runs. Neither this machine nor
// its number of cores has a say, so that the same design takes the same route anywhere.
const patience = 120

func checkRoute(name, route string) error {
	if !slices.Contains(Routes(), route) {
		return &OptionError{name, fmt.Sprintf("%q", route), "one of " + strings.Join(Routes(), ", ")}
	}
	return nil
}

// takeRoutes estimates the hold times by the route asked for and, if a second one
// is asked for, by that as well, and holds the two against each other.
func (j *job) takeRoutes(ctx context.Context) error {
	first, reason, err := j.choose(ctx)
	if err != nil {
		return err
	}
	j.report.Route = first + ": " + reason
	second := j.options.Second
	if second == Auto {
		second = j.other(first)
	}
	if err := j.checkRoutes(first, second); err != nil {
		return err
	}
	if err := j.take(ctx, first); err != nil || second == "" {
		return err
	}
	if err := j.take(ctx, second); err != nil {
		return err
	}
	j.report.Verdicts = verdicts(j.report.Dwells, first, second)
	return nil
}

// checkRoutes refuses routes that are the same, or that know nothing of constants that
// vary, before any work is done.
func (j *job) checkRoutes(first, second string) error {
	if err := j.checkVaried(first); err != nil {
		return err
	}
	if second == "" {
		return nil
	}
	if second == first {
		return &OptionError{"second", fmt.Sprintf("%q", second), "another route than the first, which is " + first + " (--route chooses it)"}
	}
	return j.checkVaried(second)
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

// choose gives the route to take first and why.
func (j *job) choose(ctx context.Context) (route, reason string, err error) {
	switch o := j.options; {
	case o.Route != Auto:
		return o.Route, "as asked for", nil
	case j.varies():
		return Runs, "exact stochastic runs, since constants vary: " + j.varyingNames(), nil
	case o.sampled && o.Second != Runs && o.Second != Langevin:
		return Runs, "exact stochastic runs, since a precision, a number of runs or a budget was given", nil
	}
	e, err := j.problem().Estimate(ctx)
	if ctx.Err() != nil {
		return "", "", context.Cause(ctx)
	}
	if err != nil {
		return Runs, "exact stochastic runs; " + why(err), nil
	}
	if e.Seconds > patience {
		return Runs, fmt.Sprintf("exact stochastic runs; the lattice of %d states would take about %.0f s", e.States, e.Seconds), nil
	}
	return Lattice, fmt.Sprintf("the master equation itself, the cheapest here: %d lattice states, about %.1g s", e.States, e.Seconds), nil
}

// why says in a few words why the lattice cannot serve.
func why(err error) string {
	var dimensions *lattice.DimensionError
	var large *lattice.TooLargeError
	switch {
	case errors.As(err, &dimensions):
		return fmt.Sprintf("the lattice serves three independent species at most, and this design has %d", dimensions.Dimensions)
	case errors.As(err, &large):
		return fmt.Sprintf("the lattice would need about %.3g GiB or more", float64(large.Estimate.Bytes)/(1<<30))
	}
	return "the lattice cannot serve: " + err.Error()
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
	}
	return j.byRuns(ctx)
}
