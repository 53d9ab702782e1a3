package model

import (
	"slices"
)

// designer turns a TOML tree into a draft; what is wrong goes to the reporter.
type designer struct {
	*reporter
	draft *Draft
	names nameTable
	// unsure tells that species or constants may have been lost to a syntax
	// error, so that an unknown name says nothing.
	unsure    bool
	lost      map[string]bool // names that were lost, where they are known
	speciesAt []int           // where each species stands in the file
	wrong     map[int]bool    // constants whose value was refused
	reactions map[string]int
	readoutAt int // where readout was set, −1 before
}

func newDesigner(doc *tomlDoc) *designer {
	return &designer{
		reporter: doc.reporter, draft: &Draft{Copies: 1}, names: nameTable{},
		unsure: doc.lostHeader, lost: map[string]bool{}, wrong: map[int]bool{}, reactions: map[string]int{}, readoutAt: -1,
	}
}

// topKeys are the keys of a design file.
func topKeys() []string {
	return []string{"title", "time", "generation", "copies", "species", "constants", "reaction", "core"}
}

// read takes species and constants first, so that their order in the file does
// not matter.
func (d *designer) read(root *tomlTable) {
	for i := range root.entries {
		d.top(&root.entries[i])
	}
	d.required(root)
	if e := root.get("species"); e != nil {
		d.readSpecies(e)
	}
	if e := root.get("constants"); e != nil {
		d.readConstants(e)
	}
	if e := root.get("reaction"); e != nil {
		d.readReactions(e)
	}
	if e := root.get("core"); e != nil {
		d.readCores(e)
	}
	d.chooseReadout()
	d.noteUnused()
	d.checkStarts()
}

// top reads the plain keys and refuses those that are not known.
func (d *designer) top(e *tomlEntry) {
	switch e.key {
	case "title":
		d.draft.Title, _ = d.text(e)
	case "time":
		if unit, ok := d.text(e); ok && unit == "" {
			d.errorf(e.value.at, timeHint, "the time unit is empty")
		} else {
			d.draft.TimeUnit = unit
		}
	case "generation":
		d.draft.Generation, _ = d.number(e, positive)
	case "copies":
		v, ok := d.number(e, positive)
		if ok && v > mostCopies {
			d.errorf(e.value.at, "write fewer molecules in one unit of amount", "copies = %g is more than can be counted (%g)", v, float64(mostCopies))
		}
		if ok {
			d.draft.Copies = v
		}
	case "species", "constants", "reaction", "core":
	default:
		d.unknownKey(e, topKeys())
	}
}

// isLost tells whether a name may have been lost to a syntax error.
func (d *designer) isLost(name string) bool { return d.unsure || d.lost[name] }

// damaged notes what may be missing from a table of names.
func (d *designer) damaged(t *tomlTable) {
	d.unsure = d.unsure || t.lostKeys
	for _, name := range t.lost {
		d.lost[name] = true
	}
}

const timeHint = `write the unit of every rate: time = "min"`

// required reports what no design can do without. A damaged table may have had it.
func (d *designer) required(root *tomlTable) {
	if root.damaged {
		return
	}
	if root.get("time") == nil {
		d.errorf(0, timeHint, "the time unit is missing")
	}
	if d.unsure {
		return
	}
	if root.get("species") == nil {
		d.errorf(0, "write [species], then one line a species: protein = { start = 0 }", "the design has no species")
	}
	if root.get("reaction") == nil {
		d.errorf(0, "begin each reaction with [[reaction]]", "the design has no reactions")
	}
}

func (d *designer) unknownKey(e *tomlEntry, known []string) {
	d.errorf(e.at, NameHint(e.key, known), "unknown key %q", e.key)
}

// declare enters a name, or reports why it cannot be one.
func (d *designer) declare(e *tomlEntry, thing namedThing) {
	thing.at, thing.refused = e.at, true
	switch old := d.names[e.key]; {
	case !isIdentifier(e.key):
		d.errorf(e.at, "a name has letters, digits and _, and does not begin with a digit", "%q cannot be the name of a %s", e.key, thing.kind)
	case functions()[e.key] != 0:
		d.errorf(e.at, "choose another name", "%q is the name of a function, so it cannot name a %s", e.key, thing.kind)
	case slices.Contains(reservedWords(), e.key):
		d.errorf(e.at, "choose another name, such as "+e.key+"_", "%q is a reserved word of formulas, so it cannot name a %s", e.key, thing.kind)
	case old != nil:
		d.errorf(e.at, "choose another name", "%q is the name of a %s already, on line %d", e.key, old.kind, d.lineOf(old.at))
		return
	default:
		thing.refused = false
	}
	d.names[e.key] = &thing
}
