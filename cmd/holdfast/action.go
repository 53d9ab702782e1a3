package main

import (
	"fmt"
	"io"
	"strings"

	"holdfast/analysis/hold"
)

// writeAction shows how hold times were carried on by least action.
func writeAction(w io.Writer, r *hold.Report) {
	if r.Action == nil || len(r.Action.Paths) == 0 {
		return
	}
	fmt.Fprintf(w, "\nLeast action: mean dwell = C·exp(S·copies), copies = %s\n", number(r.Copies))
	for _, p := range r.Action.Paths {
		fmt.Fprintf(w, "  %s to %s over the %s%s: S = %s ± %s, C = %s %s by %s at %s copies\n", p.From, p.To, p.Saddle, othersText(p.Others),
			digits(float64(p.Exponent), 9), digits(float64(p.Error), 1), interval(p.Prefactor, p.PrefactorLow, p.PrefactorHigh), r.TimeUnit, sourceText(p.Source), copiesText(p.Copies))
	}
}

func othersText(others int) string {
	if others == 0 {
		return ""
	}
	return fmt.Sprintf(" (the cheapest of %d)", others+1)
}

func sourceText(route string) string {
	if route == hold.Staged {
		return "staged runs"
	}
	return "the " + route
}

func copiesText(copies []hold.Value) string {
	var parts []string
	for _, c := range copies {
		parts = append(parts, value(c))
	}
	last := len(parts) - 1
	return strings.Join(parts[:last], ", ") + " and " + parts[last]
}

// powers writes what is beyond the numbers of double precision by powers of ten.
func powers(l *hold.Logs) string {
	return fmt.Sprintf("10^%s [10^%s, 10^%s]", digits(float64(l.Mean), 6), digits(float64(l.Low), 6), digits(float64(l.High), 6))
}
