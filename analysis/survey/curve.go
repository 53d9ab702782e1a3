package survey

import (
	"context"
	"slices"

	"holdfast/analysis/hold"
	"holdfast/deterministic/branch"
)

// A FoldDiagram is the fold curves in two knobs: across one the number of resting
// states changes by two.
type FoldDiagram struct {
	First  KnobRange   `json:"first"`
	Second KnobRange   `json:"second"`
	Curves []FoldCurve `json:"curves"`
}

// A KnobRange is a knob with its range and today's value.
type KnobRange struct {
	Name  string     `json:"knob"`
	Low   hold.Value `json:"low"`
	High  hold.Value `json:"high"`
	Today hold.Value `json:"today"`
}

// A FoldCurve is one curve of folds, in the order in which it runs.
type FoldCurve struct {
	Points []FoldPoint `json:"points"`
	Ends   [2]string   `json:"ends"` // why it ends at its first and last point
	// Shown are the points that are enough to draw it by: some fifteen, the ends and
	// the cusps among them.
	Shown []int `json:"-"`
}

// A FoldPoint is a pair of settings at which two resting states meet, and the
// amounts there, by species. At a cusp two folds meet.
type FoldPoint struct {
	First   hold.Value   `json:"first"`
	Second  hold.Value   `json:"second"`
	Amounts []hold.Value `json:"amounts"`
	Cusp    bool         `json:"cusp"`
}

// shownPoints is about how many points of a curve are shown.
const shownPoints = 15

// foldCurves traces the fold curves of the two knobs.
func (j *job) foldCurves(ctx context.Context) error {
	d, err := branch.FoldCurves(ctx, j.network, j.knobs[0], j.knobs[1], branch.Options{})
	if err != nil {
		return knobError(err)
	}
	out := &FoldDiagram{First: knobRange(d.First, d.Today[0]), Second: knobRange(d.Second, d.Today[1]), Curves: []FoldCurve{}}
	for i := range d.Curves {
		out.Curves = append(out.Curves, newFoldCurve(&d.Curves[i]))
	}
	j.report.FoldDiagram = out
	j.report.Warnings = append(j.report.Warnings, d.Warnings...)
	return nil
}

func knobRange(k branch.Knob, today float64) KnobRange {
	return KnobRange{k.Name, hold.Value(k.Low), hold.Value(k.High), hold.Value(today)}
}

func newFoldCurve(c *branch.FoldCurve) FoldCurve {
	out := FoldCurve{Ends: [2]string{c.Ends[0].String(), c.Ends[1].String()}}
	for i, p := range c.Points {
		out.Points = append(out.Points, FoldPoint{hold.Value(p.First), hold.Value(p.Second), values(p.Amounts), p.Cusp})
		if p.Cusp {
			out.Shown = append(out.Shown, i)
		}
	}
	last := len(c.Points) - 1
	for k := range shownPoints {
		out.Shown = append(out.Shown, (k*last+(shownPoints-1)/2)/(shownPoints-1))
	}
	slices.Sort(out.Shown)
	out.Shown = slices.Compact(out.Shown)
	return out
}
