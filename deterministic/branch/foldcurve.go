package branch

import (
	"context"
	"fmt"

	"holdfast/model"
)

// A FoldPoint is a point of a fold curve: values of the two knobs at which a
// resting state is a fold, and that state.
type FoldPoint struct {
	First, Second float64
	Amounts       []float64
	// Cusp tells that two fold curves meet here in a point: beyond it there is no
	// fold.
	Cusp bool
}

// A FoldCurve is a curve of folds in two knobs, in the order in which it runs. A
// cusp is a point inside, where both knobs turn back.
type FoldCurve struct {
	Points []FoldPoint
	// Ends says why the curve ends, at its first and its last point: the range of a
	// knob, the box, an amount that reaches 0; Closed for a loop.
	Ends [2]CurveEnd
}

// A CurveEnd says why a fold curve ends.
type CurveEnd struct {
	Kind Kind
	// Knob is the knob whose range ends, Species the one that meets the box or 0;
	// empty for other kinds. Text says why a curve was lost.
	Knob, Species, Text string
}

// String names it in words.
func (e CurveEnd) String() string {
	switch e.Kind {
	case RangeEnd:
		return fmt.Sprintf("%v of %s", e.Kind, e.Knob)
	case BoxEdge:
		return fmt.Sprintf("%s at the %v", e.Species, e.Kind)
	case Emptied:
		return e.Species + " reaches 0"
	case Lost:
		return fmt.Sprintf("%v: %s", e.Kind, e.Text)
	}
	return e.Kind.String()
}

// Cusps lists the cusps of the curve.
func (c *FoldCurve) Cusps() []FoldPoint {
	var out []FoldPoint
	for _, p := range c.Points {
		if p.Cusp {
			out = append(out, p)
		}
	}
	return out
}

// A FoldDiagram is the fold curves in two knobs.
type FoldDiagram struct {
	First, Second Knob
	Today         [2]float64
	Curves        []FoldCurve
	Warnings      []string
}

// FoldCurves gives the curves of folds in two knobs, within both ranges: those that
// reach an end of either range, and those that hold a fold of the first knob at one of
// the samples of the second; a small loop between them may be missed. A curve is
// followed by the equations of a fold with both knobs free (Moore and Spence, SIAM
// J. Numer. Anal. 17 (1980) 567).
//
// Errors are *SharedKnobError, *OutsideError, *BoxError, *NoStateError and ctx's. No fold at
// all is no error: Curves is then empty.
func FoldCurves(ctx context.Context, n *model.Network, first, second Knob, o Options) (*FoldDiagram, error) {
	o = o.withDefaults()
	if first.shares(second) {
		return nil, &SharedKnobError{first.Name, second.Name}
	}
	d := &FoldDiagram{First: first, Second: second, Today: [2]float64{first.Today(n), second.Today(n)}}
	for i, k := range []Knob{first, second} {
		if d.Today[i] < k.Low || d.Today[i] > k.High {
			return nil, &OutsideError{k.Name, d.Today[i], k.Low, k.High}
		}
	}
	if err := o.checkBox(n); err != nil {
		return nil, err
	}
	found, err := d.search(ctx, n, o)
	if err != nil {
		return nil, err
	}
	high, floor := boxOf(found.samples, len(n.Species))
	if o.High != nil {
		high = o.High
	}
	if err := newFoldTracer(ctx, n, d, high, floor, o).traceAll(found.folds); err != nil {
		return nil, err
	}
	d.warn()
	return d, nil
}

// warn says what a reader should know of the curves.
func (d *FoldDiagram) warn() {
	if len(d.Curves) == 0 {
		d.Warnings = append(d.Warnings, fmt.Sprintf("no fold in %s at any of the settings of %s that were looked at", d.First.Name, d.Second.Name))
	}
	for _, c := range d.Curves {
		for i, e := range c.Ends {
			if e.Kind == Lost || e.Kind == BoxEdge {
				p := c.Points[i*(len(c.Points)-1)]
				d.Warnings = append(d.Warnings, fmt.Sprintf("a fold curve ends at %s = %.6g, %s = %.6g: %v", d.First.Name, p.First, d.Second.Name, p.Second, e))
			}
		}
	}
}
