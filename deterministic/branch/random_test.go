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
// with random constants; the first constant, "turn", is the first gene's drive.
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
		law := model.Call(op, by, num(0.5+r.Float64()), num(float64(2+r.IntN(3))))
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
	const seed, networks = 5, 12
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
