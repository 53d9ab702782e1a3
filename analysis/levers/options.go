package levers

import (
	"fmt"
	"math"
	"runtime"
	"slices"
	"strings"

	"holdfast/analysis/hold"
)

// The routes to the slopes.
const (
	// Auto takes the lattice where it serves, with action beside it; action where it takes
	// too long; and differences elsewhere.
	Auto = "auto"
	// Lattice differentiates the master equation's mean dwell times.
	Lattice = "lattice"
	// Action differentiates the exponent by which hold times grow with copies, and takes
	// the prefactor's part from lattices at fewer copies.
	Action = "action"
	// Differences makes two hold jobs for each constant.
	Differences = "differences"
)

// Routes lists the routes that can be asked for.
func Routes() []string { return []string{Auto, Lattice, Action, Differences} }

const (
	// defaultStep, 10 % up, balances two errors of a difference of sampled hold times:
	// intervals of ±10 % on the two leave ±0.7 on the slope, while the mean slope over the
	// step differs from today's by about its second derivative over 600.
	defaultStep = 0.0953101798
	leastStep   = 9.995e-4 // 0.1 % up
	mostStep    = 0.5      // 64 % up
)

// Options say how the slopes are found. The zero value is right for most designs.
type Options struct {
	// Route is one of Routes; empty: Auto.
	Route string
	// Step is the logarithm of the factor by which a constant is turned up and down for
	// a difference; 0: that of 10 %. Where a fold is nearer than two steps, the step is half the
	// way to it.
	Step float64
	// Hold says how the hold jobs of differences are done: route, precision, budget
	// (each job has its own), seed. Threads and Memory serve the lattice too. Folder and
	// Command are for the levers' own records; Progress is told how far the job is.
	Hold hold.Options
}

// complete gives the options with zeros replaced, or a *hold.OptionError.
func (o Options) complete() (Options, error) {
	if o.Route == "" {
		o.Route = Auto
	}
	if !slices.Contains(Routes(), o.Route) {
		return o, &hold.OptionError{Name: "route", Value: fmt.Sprintf("%q", o.Route), Allowed: "one of " + strings.Join(Routes(), ", ")}
	}
	if o.Step != 0 && o.Route != Auto && o.Route != Differences {
		return o, &hold.OptionError{Name: "step", Value: fmt.Sprintf("given for the route %s", o.Route), Allowed: "left out there: only the route " + Differences + " turns constants by steps"}
	}
	if o.Step == 0 {
		o.Step = defaultStep
	}
	if !(o.Step >= leastStep && o.Step <= mostStep) {
		return o, &hold.OptionError{Name: "step", Value: fmt.Sprintf("%.4g %%", 100*math.Expm1(o.Step)), Allowed: "from 0.1 % to 64 %"}
	}
	if err := o.Hold.Check(); err != nil {
		return o, err
	}
	if o.Hold.Threads == 0 {
		o.Hold.Threads = runtime.GOMAXPROCS(0)
	}
	return o, nil
}
