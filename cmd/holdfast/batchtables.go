package main

import (
	"fmt"
	"io"
	"strings"

	"holdfast/analysis/batch"
	"holdfast/analysis/hold"
	"holdfast/analysis/sizing"
)

// writeBatch prints a row for each hold time of a small batch, or what a large one comes to.
func writeBatch(w io.Writer, s *batch.Summary) error {
	generation := ""
	if s.Generation > 0 {
		generation = fmt.Sprintf(", generation %s %s", number(s.Generation), s.TimeUnit)
	}
	fmt.Fprintf(w, "%s: time in %s%s, seed %d\n%s\n\n", s.Design, s.TimeUnit, generation, s.Seed, statusText(s))
	t := rowTable(s)
	switch {
	case s.Sized:
		t = sizeTable(s)
	case s.Rows == nil:
		t = extremeTable(s)
	}
	if len(t.rows) > 1 {
		if err := t.write(w); err != nil {
			return err
		}
	}
	_, err := fmt.Fprintln(w, "\nThese are a model's estimates; a strain must be tested ('holdfast help').")
	return err
}

// statusText counts the points by what came of them.
func statusText(s *batch.Summary) string {
	var parts []string
	for _, status := range batch.Statuses() {
		if n := s.Statuses[status]; n > 0 {
			parts = append(parts, fmt.Sprintf("%d %s", n, status))
		}
	}
	points := "points"
	if s.Points == 1 {
		points = "point"
	}
	return fmt.Sprintf("%d %s: %s", s.Points, points, strings.Join(parts, ", "))
}

func rowTable(s *batch.Summary) *table {
	t := &table{}
	head := append([]string{"point", "copies"}, s.Varied...)
	head = append(head, "from", "to", "mean dwell, "+s.TimeUnit)
	if s.Generation > 0 {
		head = append(head, "generations")
	}
	t.add(append(head, "route")...)
	for _, r := range s.Rows {
		row := []string{fmt.Sprint(r.Point), number(r.Copies)}
		for _, v := range r.Values {
			row = append(row, digits(v, 6))
		}
		t.add(append(row, dwellCells(s, &r)...)...)
	}
	return t
}

// dwellCells are the cells of a hold time, or what the point is instead.
func dwellCells(s *batch.Summary, r *batch.Row) []string {
	if r.Dwell == nil {
		return []string{r.Status}
	}
	d := r.Dwell
	h := hold.DwellReport{Never: d.Never, Sampled: d.Sampled, Flips: d.Flips, Note: "never", Bound: d.High/d.Mean - 1}
	out := []string{d.From, d.To, estimate(h, nil, d.Mean, d.Low, d.High)}
	if s.Generation > 0 {
		g := hold.Value(s.Generation)
		out = append(out, estimate(h, nil, d.Mean/g, d.Low/g, d.High/g))
	}
	return append(out, d.Route)
}

// sizeTable has a row for each point of a batch that looked for sizes.
func sizeTable(s *batch.Summary) *table {
	t := &table{}
	sized := "setting"
	for _, r := range s.Rows {
		if r.Size != nil {
			sized = r.Size.Knob
		}
	}
	varied := append([]string{"point"}, s.Varied...)
	if sized != "copies" {
		varied = append([]string{"point", "copies"}, s.Varied...)
	}
	t.add(append(varied, sized, "may", "surely", "state", "found", "", "outcome")...)
	for _, r := range s.Rows {
		row := []string{fmt.Sprint(r.Point)}
		if sized != "copies" {
			row = append(row, number(r.Copies))
		}
		for _, v := range r.Values {
			row = append(row, digits(v, 6))
		}
		t.add(append(row, sizeCells(&r)...)...)
	}
	return t
}

// sizeCells are the cells of one search, or what the point is instead.
func sizeCells(r *batch.Row) []string {
	z := r.Size
	if z == nil || z.Route == "" {
		return []string{"–", "", "", "", "", "", r.Status}
	}
	check := z.Check()
	found := found(&check)
	if z.Outcome == sizing.NotMet || z.Outcome == sizing.Undecided {
		return []string{"best " + setting(z.Setting), "", "", z.State, found, z.Unit, string(z.Outcome)}
	}
	return []string{setting(z.Setting), setting(z.May), setting(z.Surely), z.State, found, z.Unit, string(z.Outcome)}
}

func extremeTable(s *batch.Summary) *table {
	t := &table{}
	t.add("from", "to", "points", "shortest mean dwell, "+s.TimeUnit, "at point", "longest", "at point")
	for _, e := range s.Extremes {
		t.add(e.From, e.To, fmt.Sprint(e.Points), value(e.Shortest), fmt.Sprint(e.ShortestAt), value(e.Longest), fmt.Sprint(e.LongestAt))
	}
	return t
}
