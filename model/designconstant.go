package model

import "slices"

func constantKeys() []string { return []string{"value", "spread", "memory", "uncertainty"} }

func (d *designer) readConstants(e *tomlEntry) {
	t := d.table(e, "write one line a constant: k = 1.0")
	if t == nil {
		d.unsure = true
		return
	}
	d.damaged(t)
	for i := range t.entries {
		d.oneConstant(&t.entries[i])
	}
}

// oneConstant reads a constant: a number, or a table with what is known of it.
func (d *designer) oneConstant(e *tomlEntry) {
	d.declare(e, namedThing{kind: constantName, index: len(d.draft.Constants)})
	c, ok := Constant{Name: e.key}, false
	if e.value.table != nil {
		c, ok = d.varying(e)
	} else {
		c.Value, ok = d.number(e, notNegative)
	}
	d.wrong[len(d.draft.Constants)] = !ok
	d.draft.Constants = append(d.draft.Constants, c)
}

// varying reads the table of a constant; ok tells whether its value is known.
func (d *designer) varying(e *tomlEntry) (c Constant, ok bool) {
	t := e.value.table
	c.Name = e.key
	for i := range t.entries {
		switch f := &t.entries[i]; f.key {
		case "value":
			c.Value, ok = d.number(f, notNegative)
		case "spread":
			c.Spread, _ = d.number(f, logDeviation)
		case "memory":
			c.Memory, _ = d.number(f, positive)
		case "uncertainty":
			c.Uncertainty, _ = d.number(f, logDeviation)
		default:
			d.unknownKey(f, constantKeys())
			t.damaged = true // it may have been meant for one that is missing
		}
	}
	return c, d.checkVarying(e, &c, ok)
}

// checkVarying sees that a constant's table is whole and makes sense; ok tells that
// its value was read, and then that it may have that value.
func (d *designer) checkVarying(e *tomlEntry, c *Constant, ok bool) bool {
	t := e.value.table
	value, spread, memory := t.get("value"), t.get("spread"), t.get("memory")
	if value == nil && !t.damaged {
		d.errorf(e.value.at, "write "+e.key+" = { value = 1.0, spread = 0.2 }, or just "+e.key+" = 1.0", "%s has no value", e.key)
	}
	if ok && c.Value == 0 && (c.Spread > 0 || c.Uncertainty > 0) {
		d.errorf(value.value.at, "give it a value above 0, the median of a log-normal law, or leave spread and uncertainty out", "%s is 0, which cannot vary by a factor", e.key)
		ok = false
	}
	if memory != nil && spread == nil && !t.damaged {
		d.errorf(memory.at, "write spread = 0.2 beside it, the standard deviation of its logarithm", "%s has a memory but no spread", e.key)
	}
	if memory != nil && spread != nil && c.Spread == 0 && isZero(&spread.value) {
		d.errorf(memory.at, "leave memory out, or give a spread above 0", "%s has a memory but no spread", e.key)
	}
	return ok
}

// isZero tells whether a value is a number that is 0.
func isZero(v *tomlValue) bool {
	x, err := parseNumber(v)
	return err == nil && x == 0
}

// Varying lists the indices of the constants that vary from cell to cell or in
// time: those with a spread.
func (n *Network) Varying() []int {
	var out []int
	for i, c := range n.Constants {
		if c.Spread > 0 {
			out = append(out, i)
		}
	}
	return slices.Clip(out)
}
