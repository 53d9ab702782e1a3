package hold

import (
	"holdfast/analysis/action"
	"holdfast/analysis/records"
)

// A pathTable is the table action_path.
type pathTable struct {
	table                    *records.Table
	from, to, saddle         records.LabelColumn
	route, point             records.IntColumn
	position, spent          records.FloatColumn
	down                     records.FlagColumn
	amounts, momenta         []records.FloatColumn
	names, targets, passages []string
}

// recordPaths writes the table action_path.
func (j *job) recordPaths(routes *action.Routes) error {
	if j.sink == nil {
		return nil
	}
	var paths []*action.Path
	for k := range routes.Pairs {
		paths = append(paths, routes.Pairs[k].Paths...)
	}
	if len(paths) == 0 {
		return nil
	}
	t := newPathTable(paths, speciesNames(j.network))
	w, err := j.sink.folder.Table(t.table)
	if err != nil {
		return err
	}
	for k, p := range paths {
		for i := range p.Points {
			t.row(w, k, p, i)
			if err := w.Next(); err != nil {
				return err
			}
		}
	}
	return w.Close()
}

func newPathTable(paths []*action.Path, species []string) *pathTable {
	t := &pathTable{table: records.NewTable("action_path")}
	for _, p := range paths {
		t.names, t.targets, t.passages = with(t.names, p.From), with(t.targets, p.To), with(t.passages, p.Saddle)
	}
	t.from = t.table.AddLabel("from", t.names, "state that is left")
	t.to = t.table.AddLabel("to", t.targets, "state that the path leads to; absorbed: species are gone for good")
	t.saddle = t.table.AddLabel("saddle", t.passages, "saddle that it leads over")
	t.route = t.table.AddInt("path", "", "number of the path")
	t.point = t.table.AddInt("point", "", "place on it, from 0")
	t.position = t.table.AddFloat("position", "1", "share of the path's length gone, each species weighed by its range")
	t.down = t.table.AddFlag("down", "beyond the saddle: the flow of the rate equations, which costs nothing")
	t.spent = t.table.AddFloat("action", "1", "action spent so far, for each unit of copies")
	for _, s := range species {
		t.amounts = append(t.amounts, t.table.AddFloat("amount_"+s, "amount", "amount of "+s))
	}
	for _, s := range species {
		t.momenta = append(t.momenta, t.table.AddFloat("momentum_"+s, "1", "momentum of "+s+": how much likelier one more molecule is than by the rates, as a logarithm"))
	}
	return t
}

func with(names []string, name string) []string {
	if indexOf(names, name) < 0 {
		names = append(names, name)
	}
	return names
}

func (t *pathTable) row(w *records.Writer, k int, p *action.Path, i int) {
	w.Label(t.from, indexOf(t.names, p.From))
	w.Label(t.to, indexOf(t.targets, p.To))
	w.Label(t.saddle, indexOf(t.passages, p.Saddle))
	w.Int(t.route, int64(k))
	w.Int(t.point, int64(i))
	w.Float(t.position, p.Position[i])
	w.Flag(t.down, i > p.Summit)
	w.Float(t.spent, p.Action[i])
	for s := range t.amounts {
		w.Float(t.amounts[s], p.Points[i][s])
		w.Float(t.momenta[s], p.Momenta[i][s])
	}
}
