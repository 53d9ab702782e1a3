package model

import (
	"math"
	"slices"

	"github.com/pelletier/go-toml/v2/unstable"
)

func reactionKeys() []string {
	return []string{"name", "uses", "needs", "makes", "rate", "mass_action"}
}

// readReactions reads the [[reaction]] tables. A [reaction] in single brackets is
// reported and read as one of them.
func (d *designer) readReactions(e *tomlEntry) {
	items := e.value.items
	if e.value.table != nil {
		d.errorf(e.at, "write [[reaction]]", "reactions are a list: their header has two brackets")
		items = append([]tomlValue{{kind: unstable.Table, at: e.value.at, table: e.value.table}}, items...)
	} else if items == nil && e.value.kind != unstable.Array {
		d.errorf(e.value.at, "begin each reaction with [[reaction]]", "reaction must be a list of tables, not %s", e.value.valueKind())
		return
	}
	if len(items) == 0 {
		d.errorf(e.at, "begin each reaction with [[reaction]]", "the design has no reactions")
	}
	for i := range items {
		if items[i].table == nil {
			d.errorf(items[i].at, "begin each reaction with [[reaction]]", "a reaction must be a table, not %s", items[i].valueKind())
			continue
		}
		d.oneReaction(&items[i])
	}
}

func (d *designer) oneReaction(v *tomlValue) {
	t := v.table
	var r DraftReaction
	for i := range t.entries {
		switch e := &t.entries[i]; e.key {
		case "name":
			r.Name = d.reactionName(e)
		case "uses":
			r.Uses = d.terms(e, false)
		case "needs":
			r.Needs = d.terms(e, false)
		case "makes":
			r.Makes = d.terms(e, true)
		case "rate":
			r.Rate = d.law(e, false)
		case "mass_action":
			r.MassAction = d.law(e, true)
		default:
			d.unknownKey(e, reactionKeys())
			t.damaged = true // it may have been meant for one that is missing
		}
	}
	d.checkReaction(v, &r)
	d.draft.Reactions = append(d.draft.Reactions, r)
}

func (d *designer) reactionName(e *tomlEntry) string {
	name, ok := d.text(e)
	if !ok {
		return ""
	}
	if name == "" {
		d.errorf(e.value.at, `write a short name: name = "decay"`, "the reaction's name is empty")
		return ""
	}
	if at, taken := d.reactions[name]; taken {
		d.errorf(e.value.at, "give each reaction a name of its own", "a reaction is called %q already, on line %d", name, d.lineOf(at))
		return name
	}
	d.reactions[name] = e.at
	return name
}

// checkReaction sees that a reaction is whole: a name, one law, and some effect.
func (d *designer) checkReaction(v *tomlValue, r *DraftReaction) {
	t := v.table
	if t.damaged {
		return
	}
	if t.get("name") == nil {
		d.errorf(v.at, `write name = "…" under the header`, "the reaction has no name")
	}
	rate, mass := t.get("rate"), t.get("mass_action")
	switch {
	case rate == nil && mass == nil:
		d.errorf(v.at, `write rate = "formula", the law in amounts, or mass_action = constant`, "the reaction has no law")
	case rate != nil && mass != nil:
		d.errorf(max(rate.at, mass.at), "keep one of the two", "the reaction has both rate and mass_action")
	}
	d.checkEffect(v, r)
}

// checkEffect refuses a reaction that changes nothing.
func (d *designer) checkEffect(v *tomlValue, r *DraftReaction) {
	t := v.table
	if t.get("uses") == nil && t.get("makes") == nil {
		d.errorf(v.at, "write uses = { … }, makes = { … } or both", "the reaction uses nothing and makes nothing")
		return
	}
	burst := slices.ContainsFunc(r.Makes, func(t Term) bool { return t.Mean != nil })
	if burst || len(merge(-1, r.Uses, 1, r.Makes)) > 0 || d.termsDamaged(t) {
		return
	}
	d.errorf(v.at, "what it uses and what it makes are the same; put what it only reads under needs", "the reaction changes nothing")
}

// termsDamaged tells whether a list of terms held an error, so that its effect is
// not known: it has fewer terms than entries, or none at all.
func (d *designer) termsDamaged(t *tomlTable) bool {
	for _, key := range []string{"uses", "makes"} {
		e := t.get(key)
		if e == nil {
			continue
		}
		if e.value.table == nil {
			return true
		}
		for i := range e.value.table.entries {
			f := &e.value.table.entries[i]
			thing := d.names[f.key]
			if thing == nil || thing.kind != speciesName || !isCount(&f.value) {
				return true
			}
		}
	}
	return false
}

func isCount(v *tomlValue) bool {
	if v.kind != unstable.Integer && v.kind != unstable.Float {
		return false
	}
	x, err := parseNumber(v)
	return err == nil && x >= 1 && x == math.Trunc(x)
}
