package model

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

func (d *description) cores() {
	n := d.net
	if len(n.Declared) == 0 {
		return
	}
	var rows [][]string
	for _, c := range n.Declared {
		for _, r := range c.Ranges {
			rows = append(rows, []string{c.State, n.Species[r.Species].Name, r.text()})
		}
	}
	d.heading("Cores that the design states, in molecules", len(rows))
	d.table(rows)
}

func (r Range) text() string {
	switch {
	case r.Max == math.MaxInt64:
		return fmt.Sprintf("%d or more", r.Min)
	case r.Min == 0:
		return fmt.Sprintf("%d or fewer", r.Max)
	}
	return fmt.Sprintf("%d to %d", r.Min, r.Max)
}

func (d *description) totals() {
	var lines []string
	for _, t := range d.net.Conserved() {
		lines = append(lines, fmt.Sprintf("%s = %d %s", d.net.sum(t.Weights), t.Value, plural(t.Value, "molecule")))
	}
	d.list("Conserved totals", lines)
}

// sum writes a weighted sum of species.
func (n *Network) sum(weights []int64) string {
	var b strings.Builder
	for i, w := range weights {
		if w == 0 {
			continue
		}
		switch {
		case b.Len() > 0 && w < 0:
			b.WriteString(" - ")
		case b.Len() > 0:
			b.WriteString(" + ")
		case w < 0:
			b.WriteString("-")
		}
		if w < 0 {
			w = -w
		}
		if w > 1 {
			fmt.Fprintf(&b, "%d ", w)
		}
		b.WriteString(n.Species[i].Name)
	}
	return b.String()
}

func (d *description) absorbing() {
	var lines []string
	for _, a := range d.net.Absorbing() {
		lines = append(lines, a.text(d.net))
	}
	d.list("Absorbing states", lines)
}

func (a Absorber) text(n *Network) string {
	left := "no " + strings.Join(n.names(a.Empty), " and no ")
	text := "with " + left + " left, nothing can happen any more: this state is never left"
	if !a.Frozen {
		text = "with " + left + " left, none is ever made again; the rest goes on"
	}
	if a.AtStart {
		text += " (the design starts so)"
	}
	return text
}

// number writes a value in the fewest digits that tell it from its neighbours,
// at most six.
func number(v float64) string { return strconv.FormatFloat(v, 'g', 6, 64) }

// plural puts an s behind a noun unless there is exactly one.
func plural(n int64, noun string) string {
	if n == 1 {
		return noun
	}
	return noun + "s"
}
