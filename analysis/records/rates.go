package records

import (
	"math"
	"strconv"
	"strings"
)

// A Range is a value with the limits of its interval.
type Range struct {
	Value, Low, High float64
}

// A HoldChance is the chance of no flip within a number of generations.
type HoldChance struct {
	Generations float64
	Range
	Source string // where it comes from: a constant rate, the observed survival, …
}

// A Rate is one row of the table rates: flips from a state to another, or to Any, by
// one route. NaN stands for what a route does not give.
type Rate struct {
	From, To int    // index of the state; To: also Any or Elsewhere
	Route    string // runs, lattice, …
	Interval string // how the interval was made
	// Never tells that the state is not left this way at all.
	Never bool
	// Mean dwell with its interval, in the design's unit. +Inf or NaN is absent; High
	// may be +Inf: there is no upper limit.
	Mean, Low, High, StandardError float64
	Flips, Dwells                  int64 // negative where the route has none
	Exposure                       float64
	PerGeneration                  Range
	Hold                           []HoldChance // the same generations in every row
}

// WriteRates writes the table rates for states by name. States cannot be called any,
// censored or elsewhere.
func WriteRates(f *Folder, states []string, rates []Rate) error {
	if err := reserved(states, "any", "censored", "elsewhere"); err != nil {
		return err
	}
	r := newRateTable(f, states, rates, false)
	w, err := f.Table(r.table)
	if err != nil {
		return err
	}
	for i := range rates {
		if err := r.append(w, 0, &rates[i]); err != nil {
			break // Close gives it again
		}
	}
	return w.Close()
}

type rateTable struct {
	table                                *Table
	pointed                              bool // the first column is the number of a point
	states                               int
	from, to, route, method              LabelColumn
	never                                FlagColumn
	mean, low, high, deviation, exposure FloatColumn
	flips, dwells                        IntColumn
	generational                         bool
	perGeneration                        [3]FloatColumn
	hold                                 [][3]FloatColumn
	source                               []LabelColumn
	holds                                []HoldChance // the first row's
}

func newRateTable(f *Folder, states []string, rates []Rate, pointed bool) *rateTable {
	unit, n := f.provenance.TimeUnit, len(states)
	t := NewTable("rates")
	r := &rateTable{table: t, states: n, generational: f.provenance.Generation > 0, pointed: pointed}
	t.addPoint(pointed)
	r.from = t.AddLabel("from", states, "state that is left")
	r.to = t.AddLabel("to", append(states[:n:n], "any", "elsewhere"), "state entered; any: by whichever way")
	r.route = t.AddLabel("route", distinct(rates, func(r Rate) string { return r.Route }), "how the numbers were found")
	r.never = t.AddFlag("never", "the state is not left this way at all")
	r.mean = t.AddFloat("mean", unit, "mean dwell time; null if no flip was seen or there is none")
	t.Optional()
	r.low = t.AddFloat("low", unit, "lower limit of the mean")
	t.Optional()
	r.high = t.AddFloat("high", unit, "upper limit of the mean; infinite if there is none")
	t.Optional()
	r.deviation = t.AddFloat("standard_error", unit, "standard error of the mean")
	t.Optional()
	r.method = t.AddLabel("interval", distinct(rates, func(r Rate) string { return r.Interval }), "how the interval was made")
	r.flips = t.AddInt("flips", "", "flips seen")
	t.Optional()
	r.dwells = t.AddInt("dwells", "", "dwells watched")
	t.Optional()
	r.exposure = t.AddFloat("exposure", unit, "time watched in all dwells together")
	t.Optional()
	if r.generational {
		r.addGenerational(rates)
	}
	return r
}

func (r *rateTable) addGenerational(rates []Rate) {
	t := r.table
	r.perGeneration = t.addRange("per_generation", "1/generation", "flips in one generation")
	if len(rates) == 0 {
		return
	}
	r.holds = rates[0].Hold
	for i, h := range r.holds {
		length := strconv.FormatFloat(h.Generations, 'f', -1, 64)
		name := "hold_" + strings.ReplaceAll(length, ".", "_")
		r.hold = append(r.hold, t.addRange(name, "1", "chance of no flip in "+length+" generations"))
		sources := distinct(rates, func(r Rate) string {
			if i < len(r.Hold) {
				return r.Hold[i].Source
			}
			return ""
		})
		r.source = append(r.source, t.AddLabel(name+"_source", sources, "where the chance comes from"))
	}
}

func (t *Table) addRange(name, unit, note string) (c [3]FloatColumn) {
	for i, part := range []struct{ suffix, note string }{{"", note}, {"_low", "its lower limit"}, {"_high", "its upper limit"}} {
		c[i] = t.AddFloat(name+part.suffix, unit, part.note)
		t.Optional()
	}
	return c
}

func (w *Writer) setRange(c [3]FloatColumn, r Range) {
	for i, v := range []float64{r.Value, r.Low, r.High} {
		w.Float(c[i], v)
	}
}

func (r *rateTable) append(w *Writer, point int64, row *Rate) error {
	w.setPoint(r.pointed, point)
	to := row.To
	switch {
	case row.To == Any:
		to = r.states
	case row.To == Elsewhere:
		to = r.states + 1
	case row.To < 0 || row.To >= r.states:
		w.fail("there is no state %d to flip to", row.To)
	}
	w.Label(r.from, row.From)
	w.Label(r.to, to)
	w.Label(r.route, r.table.index(r.route, row.Route))
	w.Label(r.method, r.table.index(r.method, row.Interval))
	w.Flag(r.never, row.Never)
	w.Float(r.mean, orNull(row.Mean))
	w.Float(r.low, row.Low)
	w.Float(r.high, row.High)
	w.Float(r.deviation, row.StandardError)
	w.Float(r.exposure, row.Exposure)
	w.count(r.flips, row.Flips)
	w.count(r.dwells, row.Dwells)
	if r.generational {
		w.setRange(r.perGeneration, row.PerGeneration)
		r.appendHold(w, row)
	}
	return w.Next()
}

func (w *Writer) count(c IntColumn, v int64) {
	if v >= 0 {
		w.Int(c, v)
	}
}

func (r *rateTable) appendHold(w *Writer, row *Rate) {
	if len(row.Hold) != len(r.holds) {
		w.fail("%d chances of holding, but %d in the first row", len(row.Hold), len(r.holds))
		return
	}
	for i, h := range row.Hold {
		if h.Generations != r.holds[i].Generations {
			w.fail("chance %d of holding is for %v generations, in the first row for %v", i, h.Generations, r.holds[i].Generations)
		}
		w.setRange(r.hold[i], h.Range)
		w.Label(r.source[i], r.table.index(r.source[i], h.Source))
	}
}

// Absent is the range of what is not known.
func Absent() Range { return Range{math.NaN(), math.NaN(), math.NaN()} }
