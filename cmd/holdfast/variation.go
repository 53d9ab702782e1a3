package main

import (
	"fmt"
	"io"
	"math"

	"holdfast/analysis/hold"
)

// writeVariation shows how constants vary, and what the interval for which they are
// held does next to the sampling error.
func writeVariation(w io.Writer, r *hold.Report) {
	v := r.Variation
	if v == nil {
		return
	}
	fmt.Fprintf(w, "\nConstants that vary: log-normal about the median, the spread is the standard deviation of the logarithm\n")
	for _, c := range v.Constants {
		fmt.Fprintf(w, "  %s: median %s, spread %s, %s\n", c.Name, number(c.Median), number(c.Spread), memoryText(c, r.TimeUnit))
	}
	if math.IsNaN(float64(v.Interval)) {
		return
	}
	fmt.Fprintf(w, "  held for %s %s at a time; as many runs again with half of it\n", value(v.Interval), r.TimeUnit)
	for _, s := range v.States {
		fmt.Fprintf(w, "  %s: %d runs; %s\n", s.State, s.Runs, changeText("interval", s.Change, s.Sampling))
	}
}

func memoryText(c hold.VaryingReport, unit string) string {
	if m := float64(c.Memory); !math.IsNaN(m) {
		return "in time with the memory " + number(m) + " " + unit
	}
	return "from cell to cell, for as long as a run lasts"
}

// changeText says what halving something does to the mean.
func changeText(what string, change, sampling hold.Value) string {
	if math.IsNaN(float64(change)) {
		return "too few flips to tell what halving the " + what + " does"
	}
	return fmt.Sprintf("halving the %s moves the mean by %s %%, sampling error %s %%", what, signed(100*change), digits(100*float64(sampling), 2))
}
