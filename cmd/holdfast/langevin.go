package main

import (
	"fmt"
	"io"
	"math"

	"holdfast/analysis/hold"
)

// writeLangevin shows the step error of Langevin paths next to their sampling error.
func writeLangevin(w io.Writer, r *hold.Report) {
	l := r.Langevin
	if l == nil {
		return
	}
	fmt.Fprintf(w, "\nLangevin paths, an approximation: step %s %s, at most %s; as many paths again with half of it\n", value(l.Step), r.TimeUnit, value(l.Largest))
	for _, s := range l.States {
		fmt.Fprintf(w, "  %s: %d paths; %s\n", s.State, s.Paths, halvingText(s))
	}
}

func halvingText(s hold.StepReport) string {
	if math.IsNaN(float64(s.Change)) {
		return "too few flips to tell what halving the step does"
	}
	return fmt.Sprintf("halving the step moves the mean by %s %%, sampling error %s %%", signed(100*s.Change), digits(100*float64(s.Sampling), 2))
}

// signed writes a value with two digits and its sign.
func signed(v hold.Value) string { return withSign(float64(v), 2) }

// workText says what the answer cost, in what it is counted in.
func workText(w hold.Work) string {
	events, steps := number(float64(w.Events))+" events", number(float64(w.Steps))+" steps"
	switch {
	case w.Steps == 0:
		return events
	case w.Events == 0:
		return steps
	}
	return events + " and " + steps
}
