package records

import "slices"

// Paths writes the table paths: a row for each run and sampling time, with one column
// of counts for each species.
type Paths struct {
	w           *Writer
	run         IntColumn
	time        FloatColumn
	generations generations
	state       LabelColumn
	species     []IntColumn
}

// NewPaths starts the table paths. A species' column has the species' name, with
// _count behind it where a column before it has that name.
func NewPaths(f *Folder, species, states []string) (*Paths, error) {
	p := &Paths{}
	t := NewTable("paths")
	p.run = t.AddInt("run", "", "number of the run")
	p.time = t.AddFloat("time", f.provenance.TimeUnit, "time since the start")
	p.generations = f.addGenerations(t)
	if len(states) == 0 {
		states = []string{"none"}
	}
	p.state = t.AddLabel("state", states, "state whose core the path was in last; null before the first")
	t.Optional()
	for _, s := range species {
		p.species = append(p.species, t.AddInt(t.free(s, species), "molecules", "count of "+s))
	}
	w, err := f.Table(t)
	p.w = w
	return p, err
}

// free gives the name, or with _count behind it as often as it takes to differ from
// the columns so far and, once changed, from the other names.
func (t *Table) free(name string, others []string) string {
	taken := func(n string) bool {
		return slices.ContainsFunc(t.Columns, func(c Column) bool { return c.Name == n })
	}
	out := name
	for taken(out) || out != name && slices.Contains(others, out) {
		out += "_count"
	}
	return out
}

// Append adds a row: state is the index of the state whose core the path was in last,
// negative before the first; counts has one value a species.
func (p *Paths) Append(run int64, time float64, state int, counts []int64) error {
	if len(counts) != len(p.species) {
		p.w.fail("%d counts for %d species", len(counts), len(p.species))
	}
	p.w.Int(p.run, run)
	p.w.Float(p.time, time)
	p.generations.set(p.w, time)
	p.w.Label(p.state, state)
	for i, c := range p.species {
		if i < len(counts) {
			p.w.Int(c, counts[i])
		}
	}
	return p.w.Next()
}

// Close ends the table; see Writer.Close.
func (p *Paths) Close() error { return p.w.Close() }
