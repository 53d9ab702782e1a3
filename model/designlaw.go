package model

import (
	"slices"

	"github.com/pelletier/go-toml/v2/unstable"
)

// law reads rate or mass_action: a number or a formula.
func (d *designer) law(e *tomlEntry, constantsOnly bool) *Node {
	if constantsOnly {
		return d.constantFormula(e, notNegative)
	}
	return d.numberOrFormula(e, notNegative, false)
}

// constantFormula reads a number, or a formula of constants whose value at the
// constants of the file must be within s.
func (d *designer) constantFormula(e *tomlEntry, s span) *Node {
	tree := d.numberOrFormula(e, s, true)
	if tree == nil || e.value.kind != unstable.String || !d.isCertain(tree) {
		return tree
	}
	values := make([]float64, len(d.draft.Constants))
	for i, c := range d.draft.Constants {
		values[i] = c.Value
	}
	if v := tree.Eval(nil, values); !s.holds(v) {
		d.errorf(e.value.at, "it must be "+s.String(), "%s is %v with the constants of this file", e.key, v)
		return nil
	}
	return tree
}

// isCertain tells whether every constant of a tree has its true value.
func (d *designer) isCertain(tree *Node) bool {
	wrong := func(i int) bool { return d.wrong[i] }
	return !d.unsure && len(d.lost) == 0 && !slices.ContainsFunc(tree.Constants(), wrong)
}

func (d *designer) numberOrFormula(e *tomlEntry, s span, constantsOnly bool) *Node {
	switch e.value.kind {
	case unstable.Integer, unstable.Float:
		v, ok := d.number(e, s)
		if !ok {
			return nil
		}
		tree := Number(v)
		tree.At = e.value.at
		return tree
	case unstable.String:
		return d.formula(&e.value, constantsOnly)
	}
	d.errorf(e.value.at, "write a number, or a formula in quotes", "%s must be a number or a formula, not %s", e.key, e.value.valueKind())
	return nil
}

// formula parses a law; its errors get their places inside the quotes.
func (d *designer) formula(v *tomlValue, constantsOnly bool) *Node {
	offsets := v.runeOffsets()
	at := func(rune int) int { return offsets[min(max(rune, 0), len(offsets)-1)] }
	p := lawParser{text: v.text, names: d.names, constantsOnly: constantsOnly, lost: d.isLost, hinter: &d.hinter, at: at}
	tree := p.parse()
	for _, e := range p.errors {
		d.errorf(at(e.rune), e.hint, "%s", e.message)
	}
	return tree
}
