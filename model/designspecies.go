package model

import (
	"math"
)

const speciesHint = "write one line a species: protein = { start = 0 }"

func (d *designer) readSpecies(e *tomlEntry) {
	t := d.table(e, speciesHint)
	if t == nil {
		d.unsure = true
		return
	}
	d.damaged(t)
	for i := range t.entries {
		d.oneSpecies(&t.entries[i])
	}
	if len(t.entries) == 0 && !t.damaged {
		d.errorf(t.at, speciesHint, "the design has no species")
	}
}

func (d *designer) oneSpecies(e *tomlEntry) {
	d.declare(e, namedThing{kind: speciesName, index: len(d.draft.Species)})
	s := Species{Name: e.key}
	d.speciesAt = append(d.speciesAt, e.at)
	defer func() { d.draft.Species = append(d.draft.Species, s) }()
	t := d.table(e, "write "+e.key+" = { start = "+plainStart(e)+" }")
	if t == nil {
		return
	}
	if f := t.get("fixed_count"); f != nil {
		s.Fixed = d.flag(f)
	}
	for i := range t.entries {
		switch f := &t.entries[i]; f.key {
		case "start":
			s.Start = d.start(f, s.Fixed)
		case "readout":
			d.readout(f)
		case "fixed_count":
		default:
			d.unknownKey(f, []string{"start", "readout", "fixed_count"})
		}
	}
}

// plainStart is the number of a species that was written without its braces.
func plainStart(e *tomlEntry) string {
	if looksNumeric(e.value.text) {
		return e.value.text
	}
	return "0"
}

func (d *designer) start(e *tomlEntry, fixed bool) float64 {
	if fixed {
		v, _ := d.whole(e)
		return float64(v)
	}
	v, _ := d.number(e, notNegative)
	return v
}

// readout marks the species that is being read, the last of the draft.
func (d *designer) readout(e *tomlEntry) {
	if !d.flag(e) {
		return
	}
	if d.readoutAt >= 0 {
		d.errorf(e.at, "mark one species only", "a readout is chosen already, on line %d", d.lineOf(d.readoutAt))
		return
	}
	d.readoutAt = e.at
	d.draft.Readout = len(d.draft.Species)
}

// chooseReadout notes the choice where the file makes none.
func (d *designer) chooseReadout() {
	if d.readoutAt >= 0 || len(d.draft.Species) < 2 {
		return
	}
	name := d.draft.Species[0].Name
	d.notef(d.speciesAt[0], "write readout = true at the species that tells the states apart",
		"no species is the readout; %s, the first, orders and names the states", name)
}

// noteUnused notes the species and constants that no reaction mentions.
func (d *designer) noteUnused() {
	for _, name := range d.names.all() {
		thing := d.names[name]
		if thing.used {
			continue
		}
		d.notef(thing.at, "leave it out, or is a name misspelt in a reaction?", "no reaction mentions the %s %s", thing.kind, name)
	}
}

// checkStarts sees that the molecules at the start can be counted.
func (d *designer) checkStarts() {
	for i, s := range d.draft.Species {
		unit := d.draft.Copies
		if s.Fixed {
			unit = 1
		}
		if n := s.Start * unit; n > largestWhole || math.IsInf(n, 0) {
			d.errorf(d.speciesAt[i], "lower start or copies", "%s starts with %g molecules, more than can be counted", s.Name, n)
		}
	}
}
