package batch

import (
	"math"

	"holdfast/analysis/hold"
	"holdfast/analysis/records"
	"holdfast/analysis/sizing"
)

// sizesName is the name of the table of sizes.
const sizesName = "sizes"

// sizeTable is the table sizes being written: a row for each point with an answer of the
// search.
type sizeTable struct {
	w                              *records.Writer
	number, evaluations            records.IntColumn
	outcome                        records.LabelColumn
	sampled                        records.FlagColumn
	numbers                        []records.FloatColumn
	knob, spec, state, route, unit records.TextColumn
	lowBy, highBy                  records.TextColumn
}

// outcomes lists how a search can end.
func outcomes() []string {
	return []string{string(sizing.Met), string(sizing.MetAlready), string(sizing.NotMet), string(sizing.Undecided)}
}

// sizeNumbers are the columns of numbers, with notes, in the order of Sized.numbers.
func sizeNumbers() [][2]string {
	return [][2]string{
		{"setting", "the setting found, or the best that was evaluated where the specification is not met"},
		{"short", "its neighbour that fails; null where the range has none"},
		{"may", "first setting that the 95 % limits allow to meet the specification"},
		{"surely", "first setting whose lower limit meets it; null where none in the range does"},
		{"steady", "number of copies from which on all that was evaluated meets it"},
		{"window_low", "of a constant: lower end of the window of settings that meet it"},
		{"window_high", "its upper end"},
		{"found", "mean dwell or chance at the setting, in the unit of the column unit; infinite where the state is never left"},
		{"found_low", "its lower limit"},
		{"found_high", "its upper limit"},
	}
}

func (s *Sized) numbers() []float64 {
	return []float64{s.Setting, s.Short, s.May, s.Surely, s.Steady, s.WindowLow, s.WindowHigh, s.Found, s.Low, s.High}
}

func newSizeTable(folder *records.Folder) (*sizeTable, error) {
	t, p := records.NewTable(sizesName), &sizeTable{}
	p.number = t.AddInt("point", "", "number of the point, from 1")
	p.knob = t.AddText("knob", "what was turned")
	p.outcome = t.AddLabel("outcome", outcomes(), "how the search ended; met already: at the low end of copies, or at the constant's own value")
	for _, c := range sizeNumbers() {
		p.numbers = append(p.numbers, t.AddFloat(c[0], "", c[1]))
		t.Optional()
	}
	p.lowBy = t.AddText("window_low_by", "what ends the window: spec, range or vanish")
	p.highBy = t.AddText("window_high_by", "the same of its upper end")
	p.spec = t.AddText("spec", "specification that decides at the setting")
	p.state = t.AddText("state", "state that it was held against")
	p.route = t.AddText("route", "how the number was found")
	p.unit = t.AddText("unit", "of found and its limits")
	p.sampled = t.AddFlag("sampled", "the limits are a 95 % interval")
	p.evaluations = t.AddInt("evaluations", "", "settings evaluated")
	w, err := folder.Table(t)
	p.w = w
	return p, err
}

func (p *sizeTable) append(a *answer) error {
	s := a.Sized
	if p == nil || s == nil {
		return nil
	}
	w := p.w
	w.Int(p.number, a.Point.Number)
	w.Text(p.knob, s.Knob)
	for i, o := range outcomes() {
		if o == s.Outcome {
			w.Label(p.outcome, i)
		}
	}
	for i, v := range s.numbers() {
		if math.IsInf(v, 0) && i < len(p.numbers)-3 { // only what was found may be: the state is never left
			v = math.NaN()
		}
		w.Float(p.numbers[i], v)
	}
	for column, text := range map[records.TextColumn]string{p.lowBy: s.LowBy, p.highBy: s.HighBy, p.spec: s.Spec, p.state: s.State, p.route: s.Route, p.unit: s.Unit} {
		w.Text(column, text)
	}
	w.Flag(p.sampled, s.Sampled)
	w.Int(p.evaluations, int64(s.Evaluations))
	return w.Next()
}

// sizes reads a batch of the table sizes.
func (r *reading) sizes(b *records.Batch) error {
	c := columns{batch: b}
	point, evaluations, outcome, sampled := c.ints("point"), c.ints("evaluations"), c.labels("outcome"), c.flags("sampled")
	text := map[string][]string{}
	for _, name := range []string{"knob", "spec", "state", "route", "unit", "window_low_by", "window_high_by"} {
		text[name] = c.texts(name)
	}
	var numbers [][]float64
	for _, column := range sizeNumbers() {
		numbers = append(numbers, c.floats(column[0]))
	}
	if c.err != nil {
		return c.err
	}
	for i := range b.Rows() {
		k, ok := r.first[point[i]]
		if !ok || r.many {
			continue
		}
		v := func(column int) hold.Value { return hold.Value(numbers[column][i]) }
		r.few[k].Size = &SizeRow{
			Knob: text["knob"][i], Outcome: sizing.Outcome(outcome[i]), Setting: v(0), Short: v(1), May: v(2), Surely: v(3), Steady: v(4),
			WindowLow: v(5), WindowHigh: v(6), LowBy: text["window_low_by"][i], HighBy: text["window_high_by"][i],
			Spec: text["spec"][i], State: text["state"][i], Route: text["route"][i], Unit: text["unit"][i],
			Found: v(7), Low: v(8), High: v(9), Sampled: sampled[i], Evaluations: evaluations[i],
		}
	}
	return nil
}

// A SizeRow is the answer of the search for a size at a point, as the table sizes has it.
type SizeRow struct {
	Knob        string         `json:"knob"`
	Outcome     sizing.Outcome `json:"outcome"`
	Setting     hold.Value     `json:"setting"` // the best evaluated where there is no answer
	Short       hold.Value     `json:"short"`
	May         hold.Value     `json:"may"`
	Surely      hold.Value     `json:"surely"`
	Steady      hold.Value     `json:"steady"`
	WindowLow   hold.Value     `json:"window_low"`
	WindowHigh  hold.Value     `json:"window_high"`
	LowBy       string         `json:"window_low_by,omitempty"`
	HighBy      string         `json:"window_high_by,omitempty"`
	Spec        string         `json:"spec"`
	State       string         `json:"state"`
	Route       string         `json:"route"`
	Unit        string         `json:"unit"`
	Found       hold.Value     `json:"found"`
	Low         hold.Value     `json:"found_low"`
	High        hold.Value     `json:"found_high"`
	Sampled     bool           `json:"sampled"`
	Evaluations int64          `json:"evaluations"`
}

// Check gives what was found at the setting as the search itself told it.
func (r *SizeRow) Check() sizing.Check {
	nan := hold.Value(math.NaN())
	c := sizing.Check{
		State: r.State, Route: r.Route, Found: r.Found, Low: r.Low, High: r.High, Sampled: r.Sampled,
		Losses: [3]hold.Value{nan, nan, nan}, Error: (r.High - r.Low) / 2,
	}
	if r.Unit == sizing.ChanceUnit {
		c.Losses = [3]hold.Value{1 - r.Found, 1 - r.Low, 1 - r.High}
	}
	return c
}
