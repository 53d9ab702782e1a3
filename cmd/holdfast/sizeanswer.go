package main

import (
	"fmt"
	"io"
	"math"
	"strings"

	"holdfast/analysis/hold"
	"holdfast/analysis/sizing"
)

// writeAnswer says in plain sentences what was found.
func writeAnswer(w io.Writer, r *sizing.Report) {
	a := r.Answer
	if a == nil {
		writeNoAnswer(w, r)
		return
	}
	switch {
	case r.Outcome == sizing.Met:
		fmt.Fprintf(w, "%s %s meets it: %s; %s gives %s\n", r.Knob, setting(a.Setting), foundAt(r, a.Setting), setting(a.Short), foundAt(r, a.Short))
	case r.Window != nil:
		fmt.Fprintf(w, "%s %s, as in the design, meets it already: %s\n", r.Knob, setting(a.Setting), foundAt(r, a.Setting))
	default:
		fmt.Fprintf(w, "%s %s, the low end of the range, meets it already: %s\n", r.Knob, setting(a.Setting), foundAt(r, a.Setting))
	}
	writeInterval(w, r)
	if a.Steady > a.Setting {
		fmt.Fprintf(w, "from %s on, all that was evaluated meets it; between, it fails again\n", setting(a.Steady))
	}
	if r.Window != nil {
		fmt.Fprintf(w, "settings of %s that meet it: %s to %s\n", r.Knob, setting(r.Window.Low.Setting), setting(r.Window.High.Setting))
		writeEnd(w, r, "low ", &r.Window.Low)
		writeEnd(w, r, "high", &r.Window.High)
	}
}

// writeInterval tells the interval of the answer, where it is more than one setting.
func writeInterval(w io.Writer, r *sizing.Report) {
	a := r.Answer
	switch {
	case math.IsNaN(float64(a.Surely)):
		fmt.Fprintf(w, "by the 95 %% limits of each evaluation, %s may meet it, and nothing in the range surely does: more runs narrow it (--precision, --events)\n", setting(a.May))
	case a.May != a.Surely:
		fmt.Fprintf(w, "by the 95 %% limits of each evaluation, %s may meet it, and %s surely does\n", setting(a.May), setting(a.Surely))
	}
}

// writeEnd tells what ends a window on one side.
func writeEnd(w io.Writer, r *sizing.Report, name string, e *sizing.End) {
	text := e.Text
	if e.By == sizing.ByRange {
		text = "the range ends"
	}
	fmt.Fprintf(w, "  %s end %s", name, setting(e.Setting))
	switch {
	case math.IsNaN(float64(e.Surely)):
		fmt.Fprintf(w, " (perhaps to %s)", setting(e.May))
	case e.Surely != e.May:
		fmt.Fprintf(w, " (surely to %s, perhaps to %s)", setting(e.Surely), setting(e.May))
	}
	fmt.Fprintf(w, ": %s\n", text)
}

// writeNoAnswer tells the best that was found.
func writeNoAnswer(w io.Writer, r *sizing.Report) {
	best := hold.Value(r.Best.Setting)
	if r.Outcome == sizing.Undecided {
		fmt.Fprintf(w, "undecided: nothing that was evaluated surely meets it, and the limits leave some open; the best, %s %s, gives %s\n", r.Knob, setting(best), foundAt(r, best))
		return
	}
	if r.Best.Vanished != "" {
		fmt.Fprintf(w, "nothing in the range meets it: %s at every setting evaluated\n", r.Best.Vanished)
		return
	}
	fmt.Fprintf(w, "nothing that was evaluated in the range meets it; the best, %s %s, gives %s\n", r.Knob, setting(best), foundAt(r, best))
}

// foundAt writes what decides at a setting.
func foundAt(r *sizing.Report, at hold.Value) string {
	e := r.At(at)
	switch {
	case e == nil:
		return "a switch no more" // found by the map alone
	case e.Vanished != "":
		return e.Vanished
	case e.Failure != "":
		return "no number"
	}
	c := e.Binding()
	return fmt.Sprintf("%s %s %s", c.State, found(c), sizeUnit(r, c))
}

// found writes what was found, with its limits or the bound of its error.
func found(c *sizing.Check) string {
	switch {
	case c.Route == "":
		return "–"
	case math.IsInf(float64(c.Found), 1):
		return "∞"
	case math.IsNaN(float64(c.Found)):
		return "above " + number(float64(c.Low))
	case !math.IsNaN(float64(c.Losses[0])):
		return foundChance(c)
	case c.Sampled:
		return interval(c.Found, c.Low, c.High)
	}
	return fmt.Sprintf("%s ± %s", digits(float64(c.Found), 7), digits(float64(c.Error), 1))
}

// foundChance writes a chance: to seven digits where its bounds agree in all of them, else
// with its limits.
func foundChance(c *sizing.Check) string {
	text := digits(float64(c.Found), 7)
	near := c.Losses[0] < 0.0005 // so near 1 that its loss is what tells
	if c.Sampled || near || digits(float64(c.Low), 7) != text || digits(float64(c.High), 7) != text {
		return chanceInterval(hold.HoldChance{Chance: c.Found, Low: c.Low, High: c.High, Loss: c.Losses})
	}
	return text
}

// sizeUnit names what was found.
func sizeUnit(r *sizing.Report, c *sizing.Check) string {
	s := r.Asked[c.Spec]
	if s.Chance > 0 {
		return strings.TrimSpace(fmt.Sprintf("chance of %s %s", number(s.Amount), s.Unit))
	}
	return s.Unit
}

// evaluationTable has a row for each evaluation and state.
func evaluationTable(r *sizing.Report) *table {
	t := &table{}
	t.add(r.Knob, "state", "found", "", "route", "verdict")
	for i := range r.Evaluations {
		e := &r.Evaluations[i]
		if e.Vanished != "" || e.Failure != "" {
			t.add(digits(e.Setting, 7), "", "", "", "", "fails: "+e.Vanished+e.Failure)
			continue
		}
		for k := range e.Checks {
			c := &e.Checks[k]
			t.add(digits(e.Setting, 7), c.State, found(c), sizeUnit(r, c), c.Route, string(c.Verdict))
		}
	}
	return t
}
