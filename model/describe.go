package model

import (
	"cmp"
	"fmt"
	"io"
	"slices"
	"strconv"
	"strings"
	"text/tabwriter"
)

// Describe writes the design in plain text, as its designer would check it: units,
// species, constants, each reaction with its law and its propensity at the start,
// conserved totals, absorbing states, declared cores and warnings.
func (n *Network) Describe(w io.Writer) error {
	d := &description{net: n}
	d.head()
	d.species()
	d.constants()
	d.reactions()
	d.cores()
	d.totals()
	d.absorbing()
	d.list("Warnings", n.Warnings())
	_, err := io.WriteString(w, d.text.String())
	return err
}

type description struct {
	net  *Network
	text strings.Builder
}

func (d *description) printf(format string, args ...any) { fmt.Fprintf(&d.text, format, args...) }

func (d *description) head() {
	n := d.net
	d.printf("%s\n\n", cmp.Or(n.Title, n.File, "a network without a title"))
	var rows [][]string
	if n.File != "" {
		rows = append(rows, []string{"file", n.File}, []string{"sha256", n.Digest})
	}
	rows = append(rows, []string{"time", n.TimeUnit + ", the unit of every rate"})
	if n.Generation > 0 {
		rows = append(rows, []string{"generation", number(n.Generation) + " " + n.TimeUnit})
	}
	copies := number(n.Copies) + " molecules in one unit of amount"
	if n.Copies == 1 {
		copies = "1, so that amounts are molecules"
	}
	d.table(append(rows, []string{"copies", copies}))
}

// table sets rows in columns, two blanks apart, without blanks at line ends.
func (d *description) table(rows [][]string) {
	var b strings.Builder
	t := tabwriter.NewWriter(&b, 0, 0, 2, ' ', 0)
	for _, row := range rows {
		fmt.Fprintf(t, "  %s\n", strings.Join(row, "\t"))
	}
	_ = t.Flush() // a strings.Builder does not fail
	for line := range strings.Lines(b.String()) {
		d.text.WriteString(strings.TrimRight(line, " \n") + "\n")
	}
}

// heading begins a part; with no rows to come it says so.
func (d *description) heading(title string, rows int) {
	if rows == 0 {
		d.printf("\n%s: none\n", title)
		return
	}
	d.printf("\n%s\n", title)
}

// list writes a part of one line each.
func (d *description) list(title string, lines []string) {
	d.heading(title, len(lines))
	for _, line := range lines {
		d.printf("  %s\n", line)
	}
}

func (d *description) species() {
	n := d.net
	rows := [][]string{{"name", "start", "molecules at the start", "scales with copies", ""}}
	counts := n.StartCounts()
	for i, s := range n.Species {
		scales, mark := "yes", ""
		if s.Fixed {
			scales = "no, a fixed count"
		}
		if i == n.Readout {
			mark = "readout"
		}
		rows = append(rows, []string{s.Name, number(s.Start), strconv.FormatInt(counts[i], 10), scales, mark})
	}
	d.heading("Species", len(n.Species))
	d.table(rows)
}

func (d *description) constants() {
	var rows [][]string
	varies := false
	for i := range d.net.Constants {
		c := &d.net.Constants[i]
		variation, uncertainty := d.variation(c)
		varies = varies || variation+uncertainty != ""
		rows = append(rows, []string{c.Name, "= " + number(c.Value), variation, uncertainty})
	}
	d.heading("Constants", len(rows))
	d.table(rows)
	if varies {
		d.printf("  Spread and uncertainty are standard deviations of the natural logarithm; the value is the median.\n")
	}
}

// variation says how a constant varies and how well it is known.
func (d *description) variation(c *Constant) (variation, uncertainty string) {
	switch {
	case c.Memory > 0:
		variation = fmt.Sprintf("varies in time: spread %s, memory %s %s", number(c.Spread), number(c.Memory), d.net.TimeUnit)
	case c.Spread > 0:
		variation = fmt.Sprintf("varies from cell to cell: spread %s", number(c.Spread))
	}
	if c.Uncertainty > 0 {
		uncertainty = "uncertainty " + number(c.Uncertainty)
	}
	return variation, uncertainty
}

func (d *description) reactions() {
	n := d.net
	start := n.StartCounts()
	species, constants := n.nameLists()
	rows := [][]string{{"", "name", "change", "law", "propensity at the start"}}
	for r := range n.Reactions {
		a := number(n.Propensity(r, start)) + " per " + n.TimeUnit
		rows = append(rows, []string{strconv.Itoa(r + 1), n.title(r), n.Equation(r), n.Reactions[r].Free.Format(species, constants), a})
	}
	d.heading("Reactions", len(n.Reactions))
	d.table(rows)
	d.printf("%s", n.lawLegend())
}

// lawLegend says how the laws in the table become propensities, in as few lines as
// the network needs.
func (n *Network) lawLegend() string {
	mass, scaled, plain := false, false, false
	for _, r := range n.Reactions {
		mass = mass || r.MassAction && slices.ContainsFunc(r.Reactants, func(t Term) bool { return t.Count > 1 })
		scaled = scaled || r.Scale == n.Copies && n.Copies != 1
		plain = plain || r.Scale != n.Copies
	}
	var b strings.Builder
	if scaled {
		fmt.Fprintf(&b, "  A law is in amounts; the propensity is copies times it.\n")
	}
	if plain {
		b.WriteString("  A reaction that changes a fixed count has its law as the propensity.\n")
	}
	if mass {
		b.WriteString("  Mass action counts molecules exactly: n(n-1) where the law has a square.\n")
	}
	return b.String()
}
