package records

// pointColumn is the first column of the tables of a batch: the number of the point.
const pointColumn = IntColumn(0)

func (t *Table) addPoint(pointed bool) {
	if pointed {
		t.AddInt("point", "", "number of the point, from 1")
	}
}

func (w *Writer) setPoint(pointed bool, point int64) {
	if pointed {
		w.Int(pointColumn, point)
	}
}

// PointStates writes the table states of a batch: that of WriteStates, with the number
// of the point in a first column, a point at a time.
type PointStates struct {
	w     *Writer
	table *stateTable
}

// NewPointStates starts the table. Every name and every type of the states to come
// must stand in like, which may be larger than that.
func NewPointStates(f *Folder, species []string, like []State) (*PointStates, error) {
	t := newStateTable(f, species, like, true)
	w, err := f.Table(t.Table)
	return &PointStates{w, t}, err
}

// Append adds the rows of one state of a point.
func (p *PointStates) Append(point int64, s *State) error { return p.table.append(p.w, point, s) }

// Close ends the table; see Writer.Close.
func (p *PointStates) Close() error { return p.w.Close() }

// PointRates writes the table rates of a batch: that of WriteRates, with the number of
// the point in a first column, a row at a time.
type PointRates struct {
	w     *Writer
	table *rateTable
}

// NewPointRates starts the table for states by name. Every route, interval and source
// of the rows to come must stand in like, and the same generations in each.
func NewPointRates(f *Folder, states []string, like []Rate) (*PointRates, error) {
	if err := reserved(states, "any", "censored", "elsewhere"); err != nil {
		return nil, err
	}
	t := newRateTable(f, states, like, true)
	w, err := f.Table(t.table)
	return &PointRates{w, t}, err
}

// Append adds a row. Its states are counted as in the names of NewPointRates.
func (p *PointRates) Append(point int64, r *Rate) error { return p.table.append(p.w, point, r) }

// Close ends the table; see Writer.Close.
func (p *PointRates) Close() error { return p.w.Close() }
