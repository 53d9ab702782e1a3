package hold

import (
	"errors"
	"fmt"
	"strings"

	"holdfast/deterministic"
	"holdfast/model"
	"holdfast/ssa"
)

// Explain adds to an engine's error, on a network, what to do about it.
func Explain(n *model.Network, err error) error {
	var rate *ssa.RateError
	var away *ssa.RunawayError
	switch {
	case errors.As(err, &rate):
		return &explained{err, fmt.Sprintf("reaction %q has the rate %v at %s; a rate must be finite and not below 0: mend its law, with max(0, …) say",
			rate.Name, rate.Value, countsText(n, rate.Counts))}
	case errors.As(err, &away):
		return &explained{err, fmt.Sprintf("counts run away: %s reached %d molecules at time %.4g %s, far beyond its resting states; is a loss missing, or a production without bound?",
			n.Species[away.Species].Name, away.Counts[away.Species], away.Time, n.TimeUnit)}
	}
	return err
}

// explained is an engine's error in words that name the design's parts.
type explained struct {
	err  error
	text string
}

// Error gives the words.
func (e *explained) Error() string { return e.text }

// Unwrap gives the engine's error.
func (e *explained) Unwrap() error { return e.err }

// Advise adds to an error of a job on the design in file what to try next.
func Advise(err error, file string) error {
	var one *deterministic.OneStateError
	var same *deterministic.IndistinctError
	switch {
	case errors.As(err, &one):
		return fmt.Errorf("%w\n  'holdfast map %s --knob NAME=LOW:HIGH' shows where along a constant a second state is born", err, file)
	case errors.As(err, &same):
		return fmt.Errorf("%w (--copies)", err)
	}
	return err
}

func countsText(n *model.Network, counts []int64) string {
	parts := make([]string, len(counts))
	for i, k := range counts {
		parts[i] = fmt.Sprintf("%s = %d", n.Species[i].Name, k)
	}
	return strings.Join(parts, ", ")
}
