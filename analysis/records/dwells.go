package records

import "math"

// Targets of dwells and rates beside a state's index.
const (
	Censored  = -1 // cut off before a flip
	Elsewhere = -2 // ended in an absorbing state that is none of the states
	Any       = -3 // rates: leaving the state by whichever way
)

// A Dwell is one row of the table dwells.
type Dwell struct {
	From      int    // index of the state
	To        int    // index of the state entered, Censored or Elsewhere
	Route     int    // index of the route
	Ending    int    // index of the ending
	Replicate uint64 // of the run, below 2⁶³
	Time      float64
	Events    int64 // or steps of a Langevin path
}

// Dwells writes the table dwells, a row a dwell.
type Dwells struct {
	w                       *Writer
	states                  int
	from, to, route, ending LabelColumn
	replicate, events       IntColumn
	time                    FloatColumn
	flipped                 FlagColumn
	generations             generations
	censored, elsewhereRow  int
}

// NewDwells starts the table dwells for states, routes and endings by name. States cannot be
// called censored or elsewhere.
func NewDwells(f *Folder, states, routes, endings []string) (*Dwells, error) {
	if err := reserved(states, "censored", "elsewhere"); err != nil {
		return nil, err
	}
	n := len(states)
	d := &Dwells{states: n, censored: n, elsewhereRow: n + 1}
	t := NewTable("dwells")
	d.from = t.AddLabel("from", states, "state the dwell was spent in")
	d.to = t.AddLabel("to", append(states[:n:n], "censored", "elsewhere"), "state entered; censored: cut off before; elsewhere: an absorbing state that is none of the states")
	d.route = t.AddLabel("route", routes, "how the dwell was made")
	d.ending = t.AddLabel("ending", endings, "how the run ended")
	d.replicate = t.AddInt("replicate", "", "number of the run's random stream")
	d.time = t.AddFloat("time", f.provenance.TimeUnit, "length of the dwell")
	d.generations = f.addGenerations(t)
	d.events = t.AddInt("events", "", "reaction events fired, or steps taken by a Langevin path")
	d.flipped = t.AddFlag("flipped", "the dwell ended by a flip")
	w, err := f.Table(t)
	d.w = w
	return d, err
}

// Append adds a row.
func (d *Dwells) Append(r Dwell) error {
	to := r.To
	switch {
	case r.To == Censored:
		to = d.censored
	case r.To == Elsewhere:
		to = d.elsewhereRow
	case r.To >= d.states:
		d.w.fail("there is no state %d to flip to", r.To)
	}
	if r.Replicate > math.MaxInt64 {
		d.w.fail("replicate %d is above 2⁶³−1", r.Replicate)
	}
	d.w.Label(d.from, r.From)
	d.w.Label(d.to, to)
	d.w.Label(d.route, r.Route)
	d.w.Label(d.ending, r.Ending)
	d.w.Int(d.replicate, int64(r.Replicate))
	d.w.Float(d.time, r.Time)
	d.generations.set(d.w, r.Time)
	d.w.Int(d.events, r.Events)
	d.w.Flag(d.flipped, r.To != Censored)
	return d.w.Next()
}

// Close ends the table; see Writer.Close.
func (d *Dwells) Close() error { return d.w.Close() }
