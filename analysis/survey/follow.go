package survey

import (
	"cmp"
	"context"
	"errors"
	"math"
	"slices"

	"holdfast/analysis/hold"
	"holdfast/deterministic/branch"
)

// A turning is the diagram of one knob in the making.
type turning struct {
	*job
	d       *branch.Diagram
	refiner *branch.Refiner
	// extra are further points for the records, by branch and piece.
	extra map[piece][]branch.Point
	out   *Diagram
}

// A piece is what lies between two neighbouring points of a branch.
type piece struct{ branch, from int }

// follow turns the one knob.
func (j *job) follow(ctx context.Context) error {
	k := j.knobs[0]
	d, err := branch.Follow(ctx, j.network, k, branch.Options{})
	if err != nil {
		return knobError(err)
	}
	t := &turning{
		job: j, d: d, refiner: branch.NewRefiner(j.network, d), extra: map[piece][]branch.Point{},
		out: &Diagram{
			Knob: k.Name, Low: hold.Value(k.Low), High: hold.Value(k.High), Today: hold.Value(d.Today), Box: values(d.High),
			Windows: []Window{}, Specials: []Special{}, Noise: []Noise{},
		},
	}
	t.addSpecials()
	t.addStretches()
	for i := range d.Windows {
		t.addWindow(&d.Windows[i])
	}
	for b := range d.Branches {
		t.out.Branches = append(t.out.Branches, t.branch(b))
	}
	j.report.Diagram = t.out
	j.report.Warnings = append(j.report.Warnings, d.Warnings...)
	return nil
}

// knobError marks the errors that the choice of knobs is to blame for.
func knobError(err error) error {
	var outside *branch.OutsideError
	var shared *branch.SharedKnobError
	if errors.As(err, &outside) || errors.As(err, &shared) {
		return &KnobError{err}
	}
	return err
}

// addSpecials lists the special points, those of branches that meet once.
func (t *turning) addSpecials() {
	for kind := branch.Fold; !kind.Ends(); kind++ {
		for _, m := range t.d.Marks(kind) {
			s := Special{
				Kind: kind.String(), Knob: hold.Value(m.Knob), Amounts: values(m.Amounts), Text: m.Text,
				RateCoefficient: hold.Value(math.NaN()), Frequency: hold.Value(math.NaN()),
			}
			switch {
			case kind == branch.Fold:
				s.RateCoefficient, s.States = hold.Value(m.RateCoefficient), "below"
				if m.Opens > 0 {
					s.States = "above"
				}
			case kind == branch.Hopf:
				s.Frequency = hold.Value(m.Frequency)
			}
			t.out.Specials = append(t.out.Specials, s)
		}
	}
	slices.SortStableFunc(t.out.Specials, func(a, b Special) int { return cmp.Compare(a.Knob, b.Knob) })
}

// addWindow reports a window and the noise towards its ends.
func (t *turning) addWindow(w *branch.Window) {
	if w.Branch < 0 {
		return // the diagram warns of it
	}
	t.out.Windows = append(t.out.Windows, Window{w.State, newEnd(&w.Low), newEnd(&w.High)})
	for _, e := range []*branch.End{&w.Low, &w.High} {
		if !e.Mark.Kind.Ends() && e.Mark.Kind != branch.Kink && e.Knob != t.d.Today {
			t.addNoise(w, e)
		}
	}
}

func newEnd(e *branch.End) End {
	kind := e.Mark.Kind.String()
	switch e.Mark.Kind {
	case branch.BoxEdge:
		kind = e.Mark.Species + " at the " + kind
	case branch.Emptied:
		kind = e.Mark.Species + " reaches 0"
	}
	return End{kind, hold.Value(e.Knob), hold.Value(e.Distance)}
}

// branch reports a branch with the further points in their places.
func (t *turning) branch(index int) Branch {
	b := &t.d.Branches[index]
	marks := map[int]string{}
	for _, m := range b.Marks {
		marks[m.Index] = m.Kind.String()
	}
	var out Branch
	for i := range b.Points {
		p := newPoint(&b.Points[i])
		p.Mark = marks[i]
		out.Points = append(out.Points, p)
		further := t.extra[piece{index, i}]
		slices.SortFunc(further, func(p, q branch.Point) int { return cmp.Compare(p.Knob, q.Knob) })
		if i+1 < len(b.Points) && b.Points[i+1].Knob < b.Points[i].Knob {
			slices.Reverse(further)
		}
		for k := range further {
			out.Points = append(out.Points, newPoint(&further[k]))
		}
	}
	return out
}

func newPoint(p *branch.Point) Point {
	out := Point{
		Knob: hold.Value(p.Knob), Amounts: values(p.Amounts), Stable: p.Stable, Unstable: p.Unstable, Eigenvalues: parts(p.Eigenvalues),
		SlowRate: hold.Value(p.SlowRate), CorrelationTime: hold.Value(p.CorrelationTime()),
	}
	for i := range p.Amounts {
		out.Deviation = append(out.Deviation, hold.Value(p.SD(i)))
	}
	return out
}
