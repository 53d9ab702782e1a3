package main

import (
	"fmt"
	"io"
	"strings"

	"holdfast/analysis/hold"
)

// writeStaged shows how staged runs went.
func writeStaged(w io.Writer, r *hold.Report) {
	if len(r.Staged) == 0 {
		return
	}
	fmt.Fprintf(w, "\nStaged runs: flux out of the core, and the share of each stage's runs that came to the next\n")
	for _, s := range r.Staged {
		fmt.Fprintf(w, "  %s → %s along %s\n", s.From, s.To, s.Along)
		fmt.Fprintf(w, "    flux %s per %s; success %s\n", value(s.Flux), r.TimeUnit, successes(s.Stages))
		fmt.Fprintf(w, "    %d repeats, as good as %s independent flips\n", s.Repeats, value(s.Effective))
	}
}

func successes(stages []hold.StageReport) string {
	var parts []string
	for _, s := range stages {
		parts = append(parts, digits(float64(s.Success), 2))
	}
	return strings.Join(parts, " ")
}
