package hold

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"

	"holdfast/analysis/lattice"
)

const (
	// atOnce is the longest that the lattice may take, in seconds of one core of a usual
	// machine by its own estimate, to be taken before any other route is weighed.
	atOnce = 5
	// patience is the longest that auto lets the lattice take, in the same seconds. Neither
	// this machine nor its number of cores has a say in the choice, so that the same
	// design takes the same route anywhere.
	patience = 120
	// noticeable is the time from which on auto says beforehand what it is likely to be.
	noticeable = 10
)

// A candidate is a route that auto may take.
type candidate struct {
	route  string
	reason string
	// seconds that it is likely to take on one core of a usual machine; NaN: not known.
	seconds float64
	beside  string // what other routes would take, or why they cannot serve
}

// words give the reason with the time.
func (c *candidate) words() string {
	out := c.reason
	if !math.IsNaN(c.seconds) {
		out += fmt.Sprintf(", about %.1g s", c.seconds)
	}
	if c.beside != "" {
		out += "; " + c.beside
	}
	return out
}

// A chooser finds the routes that auto may take, the best one first.
type chooser struct {
	*job
	lattice *lattice.Estimate // nil: it cannot serve, and why says why
	why     string
	weighed bool
}

// first gives the candidates that are known without weighing.
func (c *chooser) first(ctx context.Context) ([]candidate, error) {
	switch o := c.options; {
	case o.Route != Auto:
		c.weighed = true
		return []candidate{{route: o.Route, reason: "as asked for", seconds: math.NaN()}}, nil
	case c.varies():
		c.weighed = true
		return []candidate{{route: Runs, reason: "exact stochastic runs, since constants vary: " + c.varyingNames(), seconds: math.NaN()}}, nil
	case o.sampled && !slices.Contains([]string{Runs, Langevin, Staged}, o.Second):
		c.weighed = true
		return []candidate{{route: Runs, reason: "exact stochastic runs, since a number of runs or a budget was given", seconds: math.NaN()}}, nil
	}
	e, err := c.problem().Estimate(ctx)
	switch {
	case ctx.Err() != nil:
		return nil, context.Cause(ctx)
	case err != nil:
		c.why = why(err)
	case e.Seconds > patience:
		c.why = fmt.Sprintf("the lattice of %d states would take about %.2g s", e.States, e.Seconds)
	default:
		c.lattice = &e
	}
	if c.lattice != nil && e.Seconds <= atOnce {
		return []candidate{c.byMaster("the cheapest here")}, nil
	}
	return c.weigh(ctx)
}

// byMaster is the lattice as a candidate.
func (c *chooser) byMaster(because string) candidate {
	return candidate{route: Lattice, reason: fmt.Sprintf("the master equation itself, %s: %d lattice states", because, c.lattice.States), seconds: c.lattice.Seconds}
}

// weigh gives the candidates by what a pilot and the exponents of the flips tell.
func (c *chooser) weigh(ctx context.Context) ([]candidate, error) {
	c.weighed = true
	w, err := c.explore(ctx)
	if err != nil {
		return nil, err
	}
	var out []candidate
	if w.inReach && (c.lattice == nil || w.runs < c.lattice.Seconds) {
		out = append(out, candidate{Runs, "exact stochastic runs, which see flips enough", w.runs, c.beside()})
	}
	return append(out, c.place(w.rare(c.beside()))...), nil
}

const (
	// worthwhile is how many times dearer than another route the lattice may be to be
	// taken before it: it alone is exact to many digits.
	worthwhile = 2
	// headroom is how many times the estimated memory must be there, as the box grows where
	// it proves too small.
	headroom = 1.6
)

// place puts the lattice among other routes, before them if it is worth its time.
func (c *chooser) place(others []candidate) []candidate {
	if c.lattice == nil {
		return others
	}
	if len(others) == 0 {
		return []candidate{c.byMaster("the cheapest here")}
	}
	tight := headroom*float64(c.lattice.Bytes) > float64(c.lattice.Allowed)
	if tight || c.lattice.Seconds > worthwhile*others[0].seconds {
		return append(others, c.byMaster("the last resort"))
	}
	return append([]candidate{c.byMaster("worth its time, as it alone is exact")}, others...)
}

// beside says what the lattice would take, or why it cannot serve.
func (c *chooser) beside() string {
	if c.lattice == nil {
		return c.why
	}
	return fmt.Sprintf("the lattice of %d states would take about %.2g s", c.lattice.States, c.lattice.Seconds)
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
