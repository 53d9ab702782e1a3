package kramers_test

import (
	"context"
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"holdfast/analysis/dwell"
	"holdfast/analysis/hold"
	"holdfast/analysis/kramers"
	"holdfast/deterministic"
	"holdfast/deterministic/branch"
	"holdfast/internal/race"
	"holdfast/model"
	"holdfast/sde"
)

// updateFold makes the whole tables of docs/fold.md anew, which takes minutes.
var updateFold = flag.Bool("update-fold", false, "write the tables in docs/fold.md anew")

// A foldTable is one table of the page: hold times of a state over distances to the
// fold that ends it.
type foldTable struct {
	design, knob string
	low, high    float64 // range of the knob
	place        int     // of the fold, by the knob ascending
	from, to     string
	rows         []foldRow
}

// A foldRow is a distance to the fold, in per cent of the knob there, and the number
// of Langevin paths, each to its flip.
type foldRow struct {
	percent float64
	paths   int
}

func foldTables() []foldTable {
	return []foldTable{
		{"latch", "a", 0.3, 0.6, 0, "high", "low", []foldRow{{15, 100}, {12, 400}, {10, 1600}, {8, 1600}, {6, 1600}, {4, 1600}, {2, 1600}, {1, 1600}, {0.5, 1600}}},
		{"pair", "make_flow", 0.15, 0.5, 1, "low", "high", []foldRow{{18, 1600}, {15, 1600}, {12, 1600}, {8, 1600}, {6, 1600}, {4, 1600}, {2, 1600}, {1, 1600}}},
	}
}

// fold finds the table's fold and the slow motion near it.
func (f *foldTable) fold(t *testing.T) (branch.Mark, kramers.Fold) {
	t.Helper()
	d := design(t, f.design)
	mark := folds(t, bind(t, d, 0, nil), f.knob, f.low, f.high)[f.place]
	slow, err := kramers.AtFold(bind(t, d, 0, map[string]float64{f.knob: mark.Knob}), mark)
	if err != nil {
		t.Fatal(err)
	}
	return mark, slow
}

// at gives the knob and its distance to the fold in row k.
func (f *foldTable) at(mark branch.Mark, k int) (knob, distance float64) {
	distance = mark.Knob * f.rows[k].percent / 100
	return mark.Knob + float64(mark.Opens)*distance, distance
}

// exact gives the mean dwell from the lattice.
func (f *foldTable) exact(t *testing.T, n *model.Network) float64 {
	t.Helper()
	r, err := hold.Run(context.Background(), n, hold.Options{Route: hold.Lattice})
	if err != nil {
		t.Fatal(err)
	}
	for _, d := range r.Dwells {
		if d.From == f.from && d.To == f.to {
			return float64(d.Mean)
		}
	}
	t.Fatalf("%s: no dwell from %s to %s", f.design, f.from, f.to)
	return 0
}

// langevin gives the mean dwell and its interval from the paths that 'hold --route
// langevin --runs N' makes of the state; that makes the other state's too.
func (f *foldTable) langevin(t *testing.T, n *model.Network, paths int) dwell.Estimate {
	t.Helper()
	m, err := deterministic.Survey(context.Background(), n, deterministic.Options{})
	if err != nil {
		t.Fatal(err)
	}
	from := slices.IndexFunc(m.Stable(), func(s deterministic.State) bool { return s.Name == f.from })
	system := sde.Chemical(n)
	var points [][]float64
	for _, s := range m.Stable() {
		points = append(points, s.Molecules)
	}
	p := sde.Plan{System: system, Cores: m.Cores, From: from, Runs: paths, Seed: 1, Group: uint64(from), Step: sde.StepFor(system, points...)}
	for _, k := range m.Cores[from].Start {
		p.Start = append(p.Start, float64(k))
	}
	r, err := sde.Run(context.Background(), p)
	if err != nil || r.Lost > 0 {
		t.Fatal(err, r.Lost)
	}
	var seen []dwell.Observation
	for i := range r.Outcomes {
		seen = append(seen, dwell.Observation{To: r.Outcomes[i].Core, Time: r.Outcomes[i].Time})
	}
	s, err := dwell.Summarise(seen, len(m.Stable()), dwell.Options{From: from})
	if err != nil {
		t.Fatal(err)
	}
	return s.Any
}

// off writes how far a mean is off the exact one.
func off(mean, exact float64) string {
	v := 100 * (mean/exact - 1)
	sign := "+"
	if v < 0 {
		sign, v = "−", -v
	}
	if v >= 10 {
		return fmt.Sprintf("%s%.0f %%", sign, v)
	}
	return fmt.Sprintf("%s%.2g %%", sign, v)
}

// row writes row k of the table.
func (f *foldTable) row(t *testing.T, k int) string {
	mark, slow := f.fold(t)
	knob, distance := f.at(mark, k)
	n := bind(t, design(t, f.design), 0, map[string]float64{f.knob: knob})
	exact, rough := f.exact(t, n), f.langevin(t, n, f.rows[k].paths)
	cells := append(f.head(t, k), fmt.Sprintf("%.4g", exact),
		fmt.Sprintf("%.4g [%.4g, %.4g]", rough.Mean, rough.Low, rough.High), off(rough.Mean, exact),
		fmt.Sprintf("%.4g", 1/slow.Rate(distance)), off(1/slow.Rate(distance), exact),
		fmt.Sprintf("%.4g", slow.Passage(distance)), off(slow.Passage(distance), exact))
	return "| " + strings.Join(cells, " | ") + " |"
}

// head gives the first three cells: knob, distance and barrier.
func (f *foldTable) head(t *testing.T, k int) []string {
	mark, slow := f.fold(t)
	knob, distance := f.at(mark, k)
	return []string{fmt.Sprintf("%.5g", knob), fmt.Sprintf("%.3g %%", f.rows[k].percent), fmt.Sprintf("%.3g", slow.Barrier(distance))}
}

// The tables of docs/fold.md are what the program says. Their cheap columns are made
// anew in every row, and all columns in the last row, the cheapest; -update-fold makes
// and writes all.
func TestFoldPage(t *testing.T) {
	path := filepath.Join("..", "..", "docs", "fold.md")
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	page := string(text)
	for _, f := range foldTables() {
		start, end := "<!-- "+f.design+" -->\n", "<!-- end -->"
		before, rest, found := strings.Cut(page, start)
		shown, after, ended := strings.Cut(rest, end)
		if !found || !ended {
			t.Fatalf("%s has no table between %q and %q", path, start, end)
		}
		lines := strings.Split(strings.TrimSpace(shown), "\n")
		if *updateFold {
			lines = f.made(t, lines[:2])
		}
		f.check(t, lines)
		page = before + start + strings.Join(lines, "\n") + "\n" + end + after
	}
	if *updateFold {
		if err := os.WriteFile(path, []byte(page), 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

func (f *foldTable) made(t *testing.T, lines []string) []string {
	for k := range f.rows {
		lines = append(lines, f.row(t, k))
		t.Log(lines[len(lines)-1])
	}
	return lines
}

func (f *foldTable) check(t *testing.T, lines []string) {
	t.Helper()
	if len(lines) != 2+len(f.rows) {
		t.Fatalf("%s: %d lines, want %d", f.design, len(lines), 2+len(f.rows))
	}
	for k, line := range lines[2:] {
		if head := "| " + strings.Join(f.head(t, k), " | ") + " |"; !strings.HasPrefix(line, head) {
			t.Errorf("%s\ndoes not begin with\n%s", line, head)
		}
		if !strings.Contains(line, f.estimates(t, k)) {
			t.Errorf("%s\ndoes not hold %s", line, f.estimates(t, k))
		}
	}
	if race.Enabled {
		return
	}
	last := len(f.rows) - 1
	if got := f.row(t, last); got != lines[2+last] {
		t.Errorf("made anew:\n%s\nshown:\n%s", got, lines[2+last])
	}
}

// estimates gives Kramers' cell.
func (f *foldTable) estimates(t *testing.T, k int) string {
	mark, slow := f.fold(t)
	_, distance := f.at(mark, k)
	return fmt.Sprintf(" | %.4g | ", 1/slow.Rate(distance))
}
