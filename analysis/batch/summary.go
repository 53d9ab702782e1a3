package batch

import (
	"errors"
	"io"
	"math"

	"holdfast/analysis/hold"
	"holdfast/analysis/records"
)

// MostRows is the most rows that a Summary holds; of a larger batch it has none.
const MostRows = 60

// A Summary is what a finished batch says in short.
type Summary struct {
	Design     string         `json:"design"`
	Command    string         `json:"command"`
	TimeUnit   string         `json:"time_unit"`
	Generation float64        `json:"generation,omitempty"`
	Seed       uint64         `json:"seed"`
	Folder     string         `json:"folder"`
	Points     int            `json:"points"`
	Statuses   map[string]int `json:"statuses"` // points by what came of them
	// Failed are the first points that failed, Message is what the first of them says.
	Failed  []int64 `json:"failed"`
	Message string  `json:"message,omitempty"`
	// Varied names the values of each row.
	Varied   []string  `json:"varied"`
	Sized    bool      `json:"sized,omitempty"` // sizes were looked for
	Extremes []Extreme `json:"extremes"`
	Rows     []Row     `json:"rows,omitempty"`
}

// A Row is one hold time of a small batch, or a point without any.
type Row struct {
	Point   int64     `json:"point"`
	Copies  float64   `json:"copies"`
	Values  []float64 `json:"values"`
	Status  string    `json:"status"`
	Message string    `json:"message,omitempty"`
	// Dwell is nil where the point has no hold time.
	Dwell *Dwell `json:"dwell,omitempty"`
	// Size is the answer of a search for a size, in a batch that makes them.
	Size *SizeRow `json:"size,omitempty"`
}

// A Dwell is the hold time of a pair of states, in the design's unit.
type Dwell struct {
	From    string     `json:"from"`
	To      string     `json:"to"`
	Route   string     `json:"route"`
	Never   bool       `json:"never"`
	Sampled bool       `json:"sampled"` // it has a statistical error
	Mean    hold.Value `json:"mean"`
	Low     hold.Value `json:"low"`
	High    hold.Value `json:"high"`
	Flips   hold.Value `json:"flips"` // NaN: the route counts none
}

// An Extreme is the range of the mean dwells of a pair of states over all points.
type Extreme struct {
	From       string     `json:"from"`
	To         string     `json:"to"`
	Shortest   hold.Value `json:"shortest"`
	ShortestAt int64      `json:"shortest_at"` // the point
	Longest    hold.Value `json:"longest"`
	LongestAt  int64      `json:"longest_at"`
	Points     int        `json:"points"` // with a mean
}

// Summarise reads the tables of a finished batch, whose bytes it holds against the
// manifest, a record batch at a time.
func Summarise(folder string) (*Summary, error) {
	id, err := readIdentity(folder)
	if err != nil {
		return nil, err
	}
	if id == nil {
		return nil, &NoBatchError{folder, "holds no batch: " + identityName + " is not there"}
	}
	record, err := records.Open(folder)
	if err != nil {
		return nil, err
	}
	s := &Summary{
		Design: id.Title, Command: id.Command, TimeUnit: id.TimeUnit, Generation: id.Generation, Seed: id.Seed, Folder: folder,
		Statuses: map[string]int{}, Failed: []int64{}, Varied: []string{}, Sized: id.Sized,
	}
	for _, name := range id.Names {
		if name != Copies {
			s.Varied = append(s.Varied, name)
		}
	}
	r := &reading{Summary: s, first: map[int64]int{}}
	if err := eachBatch(record, "points", r.points); err != nil {
		return nil, err
	}
	if err := eachBatch(record, "rates", r.rates); err != nil {
		return nil, err
	}
	if id.Sized {
		if err := eachBatch(record, sizesName, r.sizes); err != nil {
			return nil, err
		}
	}
	r.order()
	return s, nil
}

// eachBatch gives the record batches of a table in turn.
func eachBatch(record *records.Record, table string, take func(*records.Batch) error) error {
	t, err := record.Table(table)
	if err != nil {
		return err
	}
	for err == nil {
		var b *records.Batch
		if b, err = t.Next(); err == nil {
			err = take(b)
		}
	}
	if errors.Is(err, io.EOF) {
		err = nil
	}
	return errors.Join(err, t.Close())
}

// A reading fills a summary from the tables.
type reading struct {
	*Summary
	few   []Row         // points, while they are few
	first map[int64]int // index of a point in few
	rows  []Row
	many  bool
}

// points reads a batch of the table points.
func (r *reading) points(b *records.Batch) error {
	c := columns{batch: b}
	number, copies, status, message := c.ints("point"), c.floats("copies"), c.labels("status"), c.texts("message")
	var values [][]float64
	for _, name := range r.Varied {
		values = append(values, c.floats(columnOf(name)))
	}
	if c.err != nil {
		return c.err
	}
	for i := range b.Rows() {
		r.Points++
		r.Statuses[status[i]]++
		if status[i] == Failed && len(r.Failed) < mostNamed {
			r.Failed = append(r.Failed, number[i])
			if r.Message == "" {
				r.Message = message[i]
			}
		}
		if r.many = r.many || r.Points > MostRows; r.many {
			continue
		}
		row := Row{Point: number[i], Copies: copies[i], Status: status[i], Message: message[i], Values: []float64{}}
		for k := range values {
			row.Values = append(row.Values, values[k][i])
		}
		r.first[row.Point] = len(r.few)
		r.few = append(r.few, row)
	}
	return nil
}

// rates reads a batch of the table rates.
func (r *reading) rates(b *records.Batch) error {
	c := columns{batch: b}
	number, never, flips := c.ints("point"), c.flags("never"), c.ints("flips")
	from, to, route := c.labels("from"), c.labels("to"), c.labels("route")
	mean, low, high, deviation := c.floats("mean"), c.floats("low"), c.floats("high"), c.floats("standard_error")
	if c.err != nil {
		return c.err
	}
	for i := range b.Rows() {
		d := Dwell{From: from[i], To: to[i], Route: route[i], Never: never[i], Mean: hold.Value(mean[i]), Low: hold.Value(low[i]), High: hold.Value(high[i]), Flips: hold.Value(flips[i])}
		if b.Null("flips", i) {
			d.Flips = hold.Value(math.NaN())
		}
		d.Sampled = !math.IsNaN(deviation[i]) || !b.Null("flips", i)
		r.extreme(number[i], &d)
		k, ok := r.first[number[i]]
		if !ok || r.many {
			continue
		}
		row := r.few[k]
		row.Dwell = &d
		r.rows = append(r.rows, row)
		r.many = len(r.rows) > MostRows
	}
	return nil
}

func (r *reading) extreme(point int64, d *Dwell) {
	if d.Never || math.IsNaN(float64(d.Mean)) {
		return
	}
	for i := range r.Extremes {
		e := &r.Extremes[i]
		if e.From != d.From || e.To != d.To {
			continue
		}
		e.Points++
		if d.Mean < e.Shortest {
			e.Shortest, e.ShortestAt = d.Mean, point
		}
		if d.Mean > e.Longest {
			e.Longest, e.LongestAt = d.Mean, point
		}
		return
	}
	r.Extremes = append(r.Extremes, Extreme{d.From, d.To, d.Mean, point, d.Mean, point, 1})
}

// order puts the rows in the order of the points, those without a hold time among them.
func (r *reading) order() {
	if r.many {
		return
	}
	k := 0
	for _, point := range r.few {
		before := k
		for k < len(r.rows) && r.rows[k].Point == point.Point {
			r.Rows = append(r.Rows, r.rows[k])
			k++
		}
		if k == before {
			r.Rows = append(r.Rows, point)
		}
	}
	if len(r.Rows) > MostRows {
		r.Rows = nil
	}
}

// columns reads columns of a record batch and keeps the first error.
type columns struct {
	batch *records.Batch
	err   error
}

func column[T any](c *columns, read func(string) ([]T, error), name string) []T {
	out, err := read(name)
	c.err = errors.Join(c.err, err)
	return out
}

func (c *columns) ints(name string) []int64     { return column(c, c.batch.Ints, name) }
func (c *columns) floats(name string) []float64 { return column(c, c.batch.Floats, name) }
func (c *columns) flags(name string) []bool     { return column(c, c.batch.Flags, name) }
func (c *columns) labels(name string) []string  { return column(c, c.batch.Labels, name) }
func (c *columns) texts(name string) []string   { return column(c, c.batch.Texts, name) }
