package batch

import (
	"context"
	"math"
	"slices"
	"strings"

	"holdfast/analysis/hold"
	"holdfast/analysis/sizing"
	"holdfast/model"
)

// A Size makes a batch look, at each point, for the smallest copies or the nearest setting
// of a constant that meets specifications, instead of for hold times.
type Size struct {
	Knob  sizing.Knob
	Specs []sizing.Spec
}

// check sees that the points leave the knob alone, and that the search is one that can be
// made.
func (z *Size) check(p *Points) error {
	if z == nil {
		return nil
	}
	name := z.Knob.Name
	if name == "" {
		name = sizing.Copies
	}
	if slices.Contains(p.Names, name) {
		return &sizing.KnobError{Name: name, Problem: "it is sized at each point, and the points vary it as well; leave it out of one"}
	}
	n, err := p.draft.Bind(0, nil)
	if err != nil {
		return err
	}
	return sizing.Options{Knob: z.Knob, Specs: z.Specs}.Check(n)
}

// settings describe the size for the identity of the batch.
func (z *Size) settings() []Setting {
	if z == nil {
		return nil
	}
	texts := make([]string, len(z.Specs))
	for i, s := range z.Specs {
		texts[i] = s.String()
	}
	out := []Setting{{"spec", strings.Join(texts, "; ")}}
	if z.Knob.Name != "" {
		out = append(out, Setting{"size " + z.Knob.Name, number(z.Knob.Low) + ":" + number(z.Knob.High)})
	}
	return out
}

// A Sized is the answer of the search at one point. NaN stands for what there is none of.
type Sized struct {
	Knob    string
	Outcome string // a sizing.Outcome
	// Setting is the answer, or the best that was found where there is none; the others
	// are those of sizing.Answer and sizing.Window.
	Setting, Short, May, Surely, Steady float64
	WindowLow, WindowHigh               float64
	LowBy, HighBy                       string // what ends the window
	// Spec is what decides at Setting, with the state and what was found there.
	Spec, State, Route, Unit string
	Found, Low, High         float64
	Sampled                  bool
	Evaluations              int
}

// takeSize looks for the size at a point. A design that is no switch as it stands may be
// one at another setting: what its own map said then falls away.
func (a *answer) takeSize(ctx context.Context, n *model.Network, z *Size, o hold.Options) {
	o.Folder, o.Progress, o.States = "", nil, nil
	r, err := sizing.Run(ctx, n, sizing.Options{Knob: z.Knob, Specs: z.Specs, Hold: o})
	if err != nil {
		if ctx.Err() == nil {
			a.explain(err)
		}
		return
	}
	a.Sized, a.Warnings = newSized(r), append(a.Warnings, r.Warnings...)
	if a.Status == "" || r.Answer != nil {
		a.Status, a.Message = Switch, ""
	}
}

func newSized(r *sizing.Report) *Sized {
	nan := math.NaN()
	s := &Sized{
		Knob: r.Knob, Outcome: string(r.Outcome), Setting: r.Best.Setting, Short: nan, May: nan, Surely: nan, Steady: nan,
		WindowLow: nan, WindowHigh: nan, Found: nan, Low: nan, High: nan, Evaluations: len(r.Evaluations),
	}
	if a := r.Answer; a != nil {
		s.Setting, s.Short, s.May, s.Surely, s.Steady = float64(a.Setting), float64(a.Short), float64(a.May), float64(a.Surely), float64(a.Steady)
	}
	if w := r.Window; w != nil {
		s.WindowLow, s.WindowHigh, s.LowBy, s.HighBy = float64(w.Low.Setting), float64(w.High.Setting), w.Low.By, w.High.By
	}
	e := r.At(hold.Value(s.Setting))
	if e == nil || len(e.Checks) == 0 {
		return s
	}
	c := e.Binding()
	s.Spec, s.State, s.Route, s.Unit = r.Specs[c.Spec], c.State, c.Route, r.Asked[c.Spec].FoundUnit()
	s.Found, s.Low, s.High, s.Sampled = float64(c.Found), float64(c.Low), float64(c.High), c.Sampled
	return s
}
