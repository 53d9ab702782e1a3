package model

import (
	"fmt"
	"math"
	"slices"
	"strings"
)

const coreHint = "write [core.high], then one line a species: protein = { min = 400 }"

// readCores reads [core.NAME] tables.
func (d *designer) readCores(e *tomlEntry) {
	t := d.table(e, coreHint)
	if t == nil {
		return
	}
	for i := range t.entries {
		if core := d.table(&t.entries[i], coreHint); core != nil {
			d.oneCore(&t.entries[i], core)
		}
	}
}

func (d *designer) oneCore(e *tomlEntry, t *tomlTable) {
	if problem := badStateName(e.key); problem != "" {
		d.errorf(e.at, NameHint(e.key, []string{"only", "low", "middle", "high", "level1"}), "no state can be called %q: %s", e.key, problem)
	}
	core := DeclaredCore{State: e.key}
	for i := range t.entries {
		if r, ok := d.oneRange(&t.entries[i]); ok {
			core.Ranges = append(core.Ranges, r)
		}
	}
	if len(t.entries) == 0 && !t.damaged {
		d.errorf(e.at, coreHint, "core %s has no ranges", e.key)
	}
	d.draft.Declared = append(d.draft.Declared, core)
}

// badStateName says why a state cannot be called so; "" if it can. The program's own
// names are "only" for one stable state, "low" and "high" for two, with "middle" for
// three, "level1", "level2" and so on for more; a core of any other name makes a
// state of its own.
func badStateName(name string) string {
	switch {
	case !isIdentifier(name):
		return "a name is letters, digits and _, and begins with a letter"
	case slices.Contains([]string{"any", "every", "censored", "elsewhere", "absorbed", "stationary"}, name):
		return "the word means something else in results"
	case name == "saddle" || isNumbered(name, "saddle") || isNumbered(name, "unstable") || isNumbered(name, "degenerate"):
		return "states that are not stable are called so"
	}
	return ""
}

// isNumbered tells whether name is the word with a number from 1 behind it.
func isNumbered(name, word string) bool {
	digits, ok := strings.CutPrefix(name, word)
	return ok && digits != "" && digits[0] != '0' && strings.Trim(digits, "0123456789") == ""
}

// oneRange reads SPECIES = { min = , max = } in molecules.
func (d *designer) oneRange(e *tomlEntry) (Range, bool) {
	thing := d.species(e)
	t := d.table(e, "write "+e.key+" = { min = 400 }, in molecules")
	if t == nil {
		return Range{}, false
	}
	r := Range{Max: math.MaxInt64}
	for i := range t.entries {
		switch f := &t.entries[i]; f.key {
		case "min":
			r.Min, _ = d.whole(f)
		case "max":
			if v, ok := d.whole(f); ok {
				r.Max = v
			}
		default:
			d.unknownKey(f, []string{"min", "max"})
		}
	}
	if len(t.entries) == 0 {
		d.errorf(e.value.at, "write min, max or both, in molecules", "%s has no range", e.key)
	}
	if r.Min > r.Max {
		d.errorf(e.value.at, fmt.Sprintf("write { min = %d, max = %d }", r.Max, r.Min), "%s: min %d is above max %d", e.key, r.Min, r.Max)
	}
	if thing == nil {
		return Range{}, false
	}
	r.Species = thing.index
	return r, true
}
