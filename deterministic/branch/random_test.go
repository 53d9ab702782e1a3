package branch

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"holdfast/deterministic"
	"holdfast/model"
)

// randomGenes is a network of genes that switch each other on or off by Hill laws
// with random constants; the first, "turn", is the first gene's drive, the second, "half", the
// half-amount of what drives it.
func randomGenes(t testing.TB, r *rand.Rand) *model.Network {
	t.Helper()
	s := newSketch(50)
	count := 1 + r.IntN(3)
	var genes []*model.Node
	for i := range count {
		genes = append(genes, s.species(fmt.Sprintf("x%d", i), 0))
	}
	for i, x := range genes {
		drive := num(1 + 4*r.Float64())
		if i == 0 {
			drive = s.constant("turn", 2)
		}
		op := model.OpHill
		if count > 1 && r.IntN(2) == 0 {
			op = model.OpHillFall
		}
		by := genes[(i+1)%count]
		half := num(0.5 + r.Float64())
		if i == 0 {
			half = s.constant("half", half.Value)
		}
		law := model.Call(op, by, half, num(float64(2+r.IntN(3))))
		if r.IntN(3) == 0 { // and itself too
			law = plus(law, model.Call(model.OpHill, x, num(0.5+2*r.Float64()), num(4)))
		}
		s.law("make", plus(num(0.2*r.Float64()), model.Call(model.OpMul, drive, law)), nil, turn{x})
		s.massAction(num(0.5+r.Float64()), turn{x}, nil, nil)
	}
	return s.network(t)
}

// statesAt gives the branches' states at a setting, by interpolation between the
// points on either side of it.
func statesAt(d *Diagram, v float64) [][]float64 {
	var out [][]float64
	for _, b := range d.Branches {
		for i := 1; i < len(b.Points); i++ {
			p, q := b.Points[i-1], b.Points[i]
			if (p.Knob < v) == (q.Knob < v) {
				continue
			}
			share := (v - p.Knob) / (q.Knob - p.Knob)
			x := make([]float64, len(p.Amounts))
			for j := range x {
				x[j] = p.Amounts[j] + share*(q.Amounts[j]-p.Amounts[j])
			}
			out = append(out, x)
		}
	}
	return out
}

// At settings that were not sampled, the branches hold just the states that a
// survey finds there, unless one lies within 1 % of a fold, where two are nearly one.
func TestBranchesHoldTheStatesBetweenSamples(t *testing.T) {
	const seed, networks = 5, 8
	r := rand.New(rand.NewPCG(seed, 0))
	compared := 0
	for k := range networks {
		n := randomGenes(t, r)
		d := follow(t, n, "turn", 0.1, 10)
		for _, v := range []float64{0.7, 3.3, 6.1} {
			if nearMark(d, v) {
				continue
			}
			bound, ok := rebind(n, d.Knob, v)
			if !ok {
				t.Fatal("cannot be bound")
			}
			m, _ := deterministic.Survey(context.Background(), bound, deterministic.Options{})
			if m == nil { // no stable state: an oscillator, beyond a Hopf point
				continue
			}
			compared++
			compareStates(t, fmt.Sprintf("network %d at %v", k, v), statesAt(d, v), m)
		}
	}
	if compared < networks {
		t.Errorf("%d settings compared only", compared)
	}
}

func nearMark(d *Diagram, v float64) bool {
	for _, b := range d.Branches {
		for _, m := range b.Marks {
			if !m.Kind.Ends() && math.Abs(m.Knob-v) < 0.01*v {
				return true
			}
		}
	}
	return false
}

func compareStates(t *testing.T, what string, got [][]float64, m *deterministic.Map) {
	t.Helper()
	if len(got) != len(m.States) {
		t.Errorf("%s: the branches hold %d states %.4g, the survey finds %d", what, len(got), got, len(m.States))
		return
	}
	for _, s := range m.States {
		best := math.Inf(1)
		for _, x := range got {
			worst := 0.0
			for i, v := range x {
				worst = max(worst, math.Abs(v-s.Amounts[i])/(s.Amounts[i]+1e-3*m.High[i]))
			}
			best = min(best, worst)
		}
		if best > 0.1 { // a chord of a step
			t.Errorf("%s: no branch passes %.4g, the nearest state is %.2g away", what, s.Amounts, best)
		}
	}
}

// At settings of the second knob that were not sampled, the fold curves hold just the
// folds that following the first knob finds there.
func TestFoldCurvesHoldTheFoldsBetweenSamples(t *testing.T) {
	const seed, networks = 8, 3
	r := rand.New(rand.NewPCG(seed, 0))
	compared := 0
	for k := range networks {
		n := randomGenes(t, r)
		d := foldCurves(t, n, "turn", 0.1, 10, "half", 0.3, 2)
		for _, v := range []float64{0.6, 1.33} {
			second := d.Second
			bound, ok := rebind(n, second, v)
			if !ok {
				t.Fatal("cannot be bound")
			}
			want := follow(t, bound, "turn", 0.1, 10).Folds()
			if nearCusp(d, v) {
				continue
			}
			got := foldsAt(d, v)
			compared += len(want)
			if len(got) != len(want) {
				t.Errorf("network %d: the curves have %d folds %.6g at %g, following finds %d: %v", k, len(got), got, v, len(want), knobsOf(want))
			}
			for _, m := range want {
				best := math.Inf(1)
				for _, x := range got {
					best = min(best, math.Abs(x-m.Knob)/m.Knob)
				}
				if len(got) == len(want) && best > 0.01 { // a chord of a step
					t.Errorf("network %d: no curve passes the fold at %g, %g", k, m.Knob, v)
				}
			}
		}
	}
	if compared < networks {
		t.Errorf("%d folds compared only", compared)
	}
}

// foldsAt gives the first knob where the curves have the second at v.
func foldsAt(d *FoldDiagram, v float64) []float64 {
	var out []float64
	for _, c := range d.Curves {
		for i := 1; i < len(c.Points); i++ {
			p, q := c.Points[i-1], c.Points[i]
			if (p.Second < v) != (q.Second < v) {
				out = append(out, p.First+(v-p.Second)/(q.Second-p.Second)*(q.First-p.First))
			}
		}
	}
	return out
}

// nearCusp tells whether a curve turns back in the second knob within 1 % of v: two
// folds are nearly one there.
func nearCusp(d *FoldDiagram, v float64) bool {
	for _, c := range d.Curves {
		for i := 1; i < len(c.Points)-1; i++ {
			p, q, r := c.Points[i-1].Second, c.Points[i].Second, c.Points[i+1].Second
			if (q-p)*(r-q) <= 0 && math.Abs(q-v) < 0.01*v {
				return true
			}
		}
	}
	return false
}

func knobsOf(list []Mark) []float64 {
	var out []float64
	for _, m := range list {
		out = append(out, m.Knob)
	}
	return out
}
