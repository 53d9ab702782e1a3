package main

import (
	"github.com/spf13/pflag"

	"holdfast/analysis/records"
)

// canonical writes the command line that made some records: every option that was
// given, in the order in which help lists them, but for those that change neither
// numbers nor bytes. The same work so has the same records, whatever the number
// of threads, the folder, or the order in which the options were typed.
func canonical(command, path string, f *pflag.FlagSet) string {
	silent := map[string]bool{"threads": true, "out": true, "json": true, "quiet": true, "with": true, "knob": true, "vary": true, "spec": true, "points": true, "shard": true, "join": true}
	parts := []string{"holdfast", command, path}
	f.VisitAll(func(flag *pflag.Flag) {
		if flag.Changed && !silent[flag.Name] {
			parts = append(parts, "--"+flag.Name, flag.Value.String())
		}
		if s, ok := flag.Value.(interface{ words() []string }); ok {
			parts = append(parts, s.words()...)
		}
	})
	return records.Command(parts...)
}
