package model

import (
	"fmt"
	"math"

	"github.com/pelletier/go-toml/v2/unstable"
)

// table gives the table of an entry that must be one.
func (d *designer) table(e *tomlEntry, hint string) *tomlTable {
	if e.value.table == nil {
		d.errorf(e.value.at, hint, "%s must be a table, not %s", e.key, e.value.valueKind())
		return nil
	}
	return e.value.table
}

// text gives the string of an entry that must be one.
func (d *designer) text(e *tomlEntry) (string, bool) {
	if e.value.kind != unstable.String {
		d.errorf(e.value.at, "write it in quotes: "+e.key+` = "…"`, "%s must be a text, not %s", e.key, e.value.valueKind())
		return "", false
	}
	return e.value.text, true
}

// flag gives the value of an entry that must be true or false.
func (d *designer) flag(e *tomlEntry) bool {
	if e.value.kind != unstable.Bool {
		d.errorf(e.value.at, "write "+e.key+" = true, without quotes, or leave it out", "%s must be true or false, not %s", e.key, e.value.valueKind())
		return false
	}
	return e.value.text == "true"
}

// number gives the value of an entry that must be a finite number within s.
func (d *designer) number(e *tomlEntry, s span) (float64, bool) {
	v, ok := d.anyNumber(e.key, &e.value, s.String())
	if !ok {
		return 0, false
	}
	if !s.holds(v) {
		d.errorf(e.value.at, "it must be "+s.String(), "%s = %s is not allowed", e.key, e.value.text)
		return 0, false
	}
	return v, true
}

// anyNumber reads a number, finite or not.
func (d *designer) anyNumber(key string, v *tomlValue, want string) (float64, bool) {
	if v.kind != unstable.Integer && v.kind != unstable.Float {
		hint := "it must be " + want
		if v.kind == unstable.String && looksNumeric(v.text) {
			hint = "leave out the quotes: " + key + " = " + v.text
		}
		d.errorf(v.at, hint, "%s must be a number, not %s", key, v.valueKind())
		return 0, false
	}
	x, err := parseNumber(v)
	if err != nil {
		d.errorf(v.at, "it must be "+want, "%s = %s is too large", key, v.text)
		return 0, false
	}
	return x, true
}

// whole gives the value of an entry that must be a whole number, not below 0.
func (d *designer) whole(e *tomlEntry) (int64, bool) {
	v, ok := d.number(e, wholeCount)
	if !ok {
		return 0, false
	}
	if v != math.Trunc(v) || math.Abs(v) > largestWhole {
		d.errorf(e.value.at, fmt.Sprintf("it must be a whole number of molecules, at most %d", int64(largestWhole)), "%s = %s is not a whole number that can be counted", e.key, e.value.text)
		return 0, false
	}
	return int64(v), true
}
