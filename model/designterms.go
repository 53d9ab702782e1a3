package model

import (
	"math"
	"slices"
)

// terms reads a table of species with their coefficients.
func (d *designer) terms(e *tomlEntry, bursts bool) []Term {
	t := d.table(e, "write "+e.key+" = { protein = 1 }")
	if t == nil {
		return nil
	}
	var out []Term
	for i := range t.entries {
		f := &t.entries[i]
		thing := d.species(f)
		term, ok := d.coefficientOf(f, bursts)
		if thing != nil && ok {
			term.Species = thing.index
			out = append(out, term)
		}
	}
	slices.SortFunc(out, func(a, b Term) int { return a.Species - b.Species })
	return out
}

// species resolves the key of an entry to a species.
func (d *designer) species(e *tomlEntry) *namedThing {
	thing := d.names[e.key]
	switch {
	case thing != nil && thing.kind == speciesName:
		thing.used = true
		return thing
	case thing != nil:
		d.errorf(e.at, d.hinter.list(d.names.species), "%q is a constant, not a species", e.key)
	case !d.isLost(e.key):
		d.errorf(e.at, d.hinter.near(e.key, d.names.species), "no species is called %q", e.key)
	}
	return nil
}

// coefficientOf reads a whole number, or { burst = mean } where bursts are allowed.
func (d *designer) coefficientOf(e *tomlEntry, bursts bool) (Term, bool) {
	if e.value.table != nil {
		return d.burst(e, bursts)
	}
	v, ok := d.number(e, coefficient)
	if !ok {
		return Term{}, false
	}
	if v != math.Trunc(v) {
		d.errorf(e.value.at, "it must be "+coefficient.String()+"; a random number of molecules is { burst = mean }, under makes", "%s = %s is not whole", e.key, e.value.text)
		return Term{}, false
	}
	return Term{Count: int(v)}, true
}

func (d *designer) burst(e *tomlEntry, allowed bool) (Term, bool) {
	if !allowed {
		d.errorf(e.value.at, "write "+e.key+" = 1; a burst can only be made", "%s must be a whole number here, not a table", e.key)
		return Term{}, false
	}
	t := e.value.table
	for i := range t.entries {
		if f := &t.entries[i]; f.key != "burst" {
			d.unknownKey(f, []string{"burst"})
		}
	}
	f := t.get("burst")
	if f == nil {
		d.errorf(e.value.at, "write "+e.key+" = { burst = 4 }, the mean of a geometric number", "%s has no count", e.key)
		return Term{}, false
	}
	mean := d.constantFormula(f, positive)
	return Term{Mean: mean}, mean != nil
}
