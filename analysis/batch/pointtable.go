package batch

import (
	"math"
	"slices"
	"strings"

	"holdfast/analysis/records"
)

// pointTable is the table points being written.
type pointTable struct {
	w                      *records.Writer
	number, stable, events records.IntColumn
	draw                   records.IntColumn
	copies, slow           records.FloatColumn
	values                 []records.FloatColumn
	varied                 []int // indices of the values that have a column of their own
	draws                  bool
	status, route          records.LabelColumn
	routes                 []string
	complete               records.FlagColumn
	message, warnings      records.TextColumn
}

// ownColumns are the names of columns that a constant cannot have.
func ownColumns() []string {
	return []string{"point", "copies", "draw", "status", "message", "stable_states", "complete", "slow_rate", "route", "events", "warnings"}
}

// columnOf gives the column of a constant: its name, with _constant behind it where the
// table has a column of that name.
func columnOf(name string) string {
	if slices.Contains(ownColumns(), name) {
		return name + "_constant"
	}
	return name
}

func newPointTable(folder *records.Folder, id *identity, l *labels) (*pointTable, error) {
	t := records.NewTable("points")
	p := &pointTable{draws: id.Draws, routes: orNone(l.routes)}
	p.number = t.AddInt("point", "", "number of the point, from 1")
	p.copies = t.AddFloat("copies", "molecules", "molecules in one unit of amount")
	for i, name := range id.Names {
		if name != Copies {
			p.varied = append(p.varied, i)
			p.values = append(p.values, t.AddFloat(columnOf(name), "", "value of the constant "+name))
		}
	}
	if p.draws {
		p.draw = t.AddInt("draw", "", "number of the draw, from 1; the same draw has the same deviates at every point")
	}
	p.status = t.AddLabel("status", Statuses(), "what came of the point")
	p.message = t.AddText("message", "why it is no switch, or failed")
	t.Optional()
	p.stable = t.AddInt("stable_states", "", "number of stable states")
	p.complete = t.AddFlag("complete", "the list of states is proved complete")
	p.slow = t.AddFloat("slow_rate", "1/"+id.TimeUnit, "slowest rate of return to a stable state; 0 at a fold")
	t.Optional()
	p.route = t.AddLabel("route", p.routes, "how the hold times were found")
	t.Optional()
	p.events = t.AddInt("events", "", "reaction events fired")
	p.warnings = t.AddText("warnings", "what to mind, a line each")
	t.Optional()
	w, err := folder.Table(t)
	p.w = w
	return p, err
}

// orNone gives the names, or one where there are none: a column of names needs one.
func orNone(names []string) []string {
	if len(names) == 0 {
		return []string{"none"}
	}
	return names
}

func (p *pointTable) append(a *answer) error {
	w := p.w
	w.Int(p.number, a.Point.Number)
	w.Float(p.copies, a.Point.Copies)
	for k, i := range p.varied {
		w.Float(p.values[k], a.Point.Values[i])
	}
	if p.draws {
		w.Int(p.draw, int64(a.Point.Draw))
	}
	w.Label(p.status, slices.Index(Statuses(), a.Status))
	if a.Message != "" {
		w.Text(p.message, a.Message)
	}
	w.Int(p.stable, int64(a.Stable))
	w.Flag(p.complete, a.Complete)
	slow := a.slowRate()
	if slow == 0 {
		slow = math.NaN()
	}
	w.Float(p.slow, slow)
	w.Label(p.route, slices.Index(p.routes, a.Route))
	w.Int(p.events, a.Events)
	if len(a.Warnings) > 0 {
		w.Text(p.warnings, strings.Join(a.Warnings, "\n"))
	}
	return w.Next()
}
