package model

import (
	"fmt"
	"math"
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
	if !isStateName(e.key) {
		d.errorf(e.at, nearHint(e.key, []string{"only", "low", "middle", "high", "level1"}), "no state can be called %q", e.key)
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

// isStateName tells whether a state of a network can have this name: one state is
// "only", two are "low" and "high", three have "middle" between them, more are
// "level1", "level2" and so on.
func isStateName(name string) bool {
	switch name {
	case "only", "low", "middle", "high":
		return true
	}
	digits, ok := strings.CutPrefix(name, "level")
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
