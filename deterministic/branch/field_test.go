package branch

import (
	"math"
	"testing"

	"holdfast/deterministic"
	"holdfast/internal/zoo"
	"holdfast/model"
)

// mixed has everything that a design can have: fixed-count species with a total,
// scaling species with another, a burst whose mean is a constant, mass action and
// laws.
func mixed(t testing.TB) *model.Network {
	t.Helper()
	one := func(i, n int) model.Term { return model.Term{Species: i, Count: n} }
	c := model.ConstantRef
	d := model.Draft{
		Title: "mixed", TimeUnit: "min", Copies: 20,
		Species: []model.Species{
			{Name: "free", Start: 2, Fixed: true},
			{Name: "bound", Fixed: true},
			{Name: "p", Start: 1},
			{Name: "plain", Start: 1.5},
			{Name: "marked", Start: 0.5},
		},
		Constants: []model.Constant{
			{Name: "on", Value: 0.3}, {Name: "off", Value: 0.7}, {Name: "burst", Value: 4}, {Name: "loss", Value: 0.2}, {Name: "n", Value: 2.5},
		},
		Reactions: []model.DraftReaction{
			{Name: "bind", MassAction: c(0), Uses: []model.Term{one(0, 1), one(2, 2)}, Makes: []model.Term{one(1, 1)}},
			{Name: "unbind", MassAction: c(1), Uses: []model.Term{one(1, 1)}, Makes: []model.Term{one(0, 1), one(2, 2)}},
			{Name: "make", MassAction: num(0.1), Needs: []model.Term{one(1, 1)}, Makes: []model.Term{{Species: 2, Mean: c(2)}}},
			{Name: "leak", Rate: num(0.05), Makes: []model.Term{one(2, 1)}},
			{Name: "lose", MassAction: c(3), Uses: []model.Term{one(2, 1)}},
			{Name: "mark", Rate: over(model.SpeciesRef(3), plus(num(1), raise(model.SpeciesRef(2), c(4)))), Uses: []model.Term{one(3, 1)}, Makes: []model.Term{one(4, 1)}},
			{Name: "unmark", Rate: model.Call(model.OpMul, model.SpeciesRef(4), model.Call(model.OpHill, model.SpeciesRef(2), num(1.5), c(4))), Uses: []model.Term{one(4, 1)}, Makes: []model.Term{one(3, 1)}},
		},
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// allKnobs lists a knob of every kind on mixed.
func allKnobs(t testing.TB, n *model.Network) []Knob {
	t.Helper()
	var out []Knob
	for _, name := range []string{"on", "off*loss", "burst", "n", "copies", "total1", "total2"} {
		k, err := NewKnob(n, name, 0.01, 100)
		if err != nil {
			t.Fatal(err)
		}
		out = append(out, k)
	}
	return out
}

// The derivatives, in the amounts and in every kind of knob, against central
// differences: their error is about 1e-10 of the values here.
func TestFieldDerivatives(t *testing.T) {
	n := mixed(t)
	for _, k := range allKnobs(t, n) {
		f := newField(n, k)
		u := []float64{1.3, 0.7, 0.9, 1.2, 0.8, k.Today(n)}
		cols := f.columns()
		out, jac := make([]float64, f.n), make([]float64, f.n*cols)
		f.evaluate(u, out, jac)
		for j := range u {
			h := 1e-5 * u[j]
			up, down := make([]float64, f.n), make([]float64, f.n)
			v := append([]float64(nil), u...)
			v[j] = u[j] + h
			f.evaluate(v, up, nil)
			v[j] = u[j] - h
			f.evaluate(v, down, nil)
			for i := range f.n {
				want := (up[i] - down[i]) / (2 * h)
				if math.Abs(jac[i*cols+j]-want) > 1e-7*(1+math.Abs(want)) {
					t.Errorf("%s: ∂f%d/∂u%d = %v, differences give %v", k.Name, i, j, jac[i*cols+j], want)
				}
			}
		}
	}
}

// With the knobs as they are today the equations are the rate equations of the
// network, and turned they are those of the network bound there.
func TestFieldAgreesWithTheNetwork(t *testing.T) {
	n := mixed(t)
	x := []float64{1.3, 0.7, 0.9, 1.2, 0.8}
	for _, k := range allKnobs(t, n) {
		for _, factor := range []float64{1, 1.5} {
			v := factor * k.Today(n)
			bound, ok := rebind(n, k, v)
			if !ok {
				t.Fatalf("%s cannot be bound at %v", k.Name, v)
			}
			f := newField(n, k)
			out, want := make([]float64, f.n), make([]float64, f.n)
			f.evaluate(append(append([]float64(nil), x...), v), out, nil)
			deterministic.Drift(bound, x, want)
			for _, i := range f.independent {
				if math.Abs(out[i]-want[i]) > 1e-13*(1+math.Abs(want[i])) {
					t.Errorf("%s × %g: rate of species %d is %v, want %v", k.Name, factor, i, out[i], want[i])
				}
			}
			for i, c := range bound.Conserved() {
				if got := f.held[i]; math.Abs(got-float64(c.Value)) > 0.5 && k.kind == totalKnob {
					t.Errorf("%s × %g: total %d is %v, want %v", k.Name, factor, i, got, c.Value)
				}
			}
		}
	}
}

// Eigenvalues and covariance along a branch are those of a survey there.
func TestSpectrumAgreesWithSurvey(t *testing.T) {
	for _, n := range []*model.Network{mixed(t), zoo.Latch(100), zoo.InducibleRepression(1e-5, 10)} {
		m, err := deterministic.Survey(t.Context(), n, deterministic.Options{})
		if m == nil {
			t.Fatal(err)
		}
		k, _ := NewKnob(n, "copies", 1, 1000)
		f := newField(n, k)
		for _, s := range m.States {
			u := append(append([]float64(nil), s.Amounts...), n.Copies)
			weight := make([]float64, f.n)
			for i, x := range s.Amounts {
				weight[i] = max(x, 1e-3)
			}
			for i, v := range f.eigenvalues(u, weight) {
				if d := v - s.Eigenvalues[i]; math.Hypot(real(d), imag(d)) > 1e-9*(1+math.Abs(real(v))) {
					t.Errorf("%s: eigenvalue %d is %v, the survey has %v", n.Title, i, v, s.Eigenvalues[i])
				}
			}
			if s.Covariance == nil {
				continue
			}
			c := f.covariance(u, weight)
			for i := range s.Covariance {
				if math.Abs(c[i]-s.Covariance[i]) > 1e-8*(math.Abs(s.Covariance[i])+1e-6) {
					t.Errorf("%s, %s: covariance %d is %v, the survey has %v", n.Title, s.Name, i, c[i], s.Covariance[i])
				}
			}
		}
	}
}

// Taylor coefficients of every operator along a line, against derivatives: the
// first from Gradient, the others from central differences of Gradient.
func TestSeries(t *testing.T) {
	x, y := model.SpeciesRef(0), model.SpeciesRef(1)
	c := model.ConstantRef(0)
	laws := map[string]*model.Node{
		"sum":          plus(x, over(y, x)),
		"difference":   model.Call(model.OpSub, x, model.Call(model.OpNeg, y)),
		"power":        raise(x, num(2.5)),
		"whole power":  raise(plus(x, y), num(3)),
		"free power":   raise(x, y),
		"exp":          model.Call(model.OpExp, model.Call(model.OpMul, x, y)),
		"log":          model.Call(model.OpLog, plus(x, y)),
		"sqrt":         model.Call(model.OpSqrt, x),
		"min":          model.Call(model.OpMin, x, y),
		"max":          model.Call(model.OpMax, x, raise(y, num(2))),
		"abs":          model.Call(model.OpAbs, model.Call(model.OpSub, x, num(5))),
		"hill low":     model.Call(model.OpHill, x, num(3), c),
		"hill high":    model.Call(model.OpHill, y, num(0.3), c),
		"falling low":  model.Call(model.OpHillFall, x, num(3), c),
		"falling high": model.Call(model.OpHillFall, y, num(0.3), c),
		"moving half":  model.Call(model.OpHill, x, y, c),
	}
	at, d, constants := []float64{0.8, 1.7}, []float64{0.6, -0.4}, []float64{2.3}
	for name, law := range laws {
		slope := func(t float64) float64 {
			g := make([]float64, 2)
			law.Gradient([]float64{at[0] + t*d[0], at[1] + t*d[1]}, constants, g, nil)
			return g[0]*d[0] + g[1]*d[1]
		}
		const h = 1e-3 // differences are off by about h² times the next-but-one derivative
		s := lawSeries(law, at, d, constants)
		want := series{
			law.Eval(at, constants), slope(0), (slope(h) - slope(-h)) / (2 * h) / 2,
			(slope(h) - 2*slope(0) + slope(-h)) / (h * h) / 6,
		}
		for k, tolerance := range []float64{1e-13, 1e-12, 1e-4, 1e-4} {
			if math.Abs(s[k]-want[k]) > tolerance*(1+math.Abs(want[k])) {
				t.Errorf("%s: coefficient of t^%d is %v, want %v", name, k, s[k], want[k])
			}
		}
	}
}

// At x = 0 the powers keep the derivatives that exist.
func TestSeriesAtZero(t *testing.T) {
	law := model.Call(model.OpHill, model.SpeciesRef(0), num(2), num(2))
	s := lawSeries(law, []float64{0}, []float64{1}, nil)
	if want := (series{0, 0, 0.25, 0}); s != want {
		t.Errorf("x²/(4+x²) at 0 is %v, want %v", s, want)
	}
	s = lawSeries(raise(model.SpeciesRef(0), num(2.5)), []float64{0}, []float64{1}, nil)
	if s[0] != 0 || s[1] != 0 || s[2] != 0 || !math.IsNaN(s[3]) {
		t.Errorf("x^2.5 at 0 is %v, want 0, 0, 0 and no third derivative", s)
	}
}
