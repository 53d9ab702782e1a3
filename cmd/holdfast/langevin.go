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
		fmt.Fprintf(w, "  %s: %d paths; %s\n", s.State, s.Paths, changeText(halved(r), s.Change, s.Sampling))
	}
}

// halved names what is halved: the step, and, with it, the interval for which constants
// that vary in time are held.
func halved(r *hold.Report) string {
	if v := r.Variation; v != nil && !math.IsNaN(float64(v.Interval)) {
		return "step and the interval"
	}
	return "step"
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
