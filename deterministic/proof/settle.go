package proof

import (
	"math"
	"slices"

	"holdfast/deterministic/proof/interval"
)

// A found is a proved resting state: box encloses it tightly, and it is the only
// one in unique. Both are in the unknowns of the full system.
type found struct {
	box, unique box
	kink        bool
}

// linearise prepares the interval Newton step over the box about the point x; ok
// is false where the derivatives are unbounded or their middle is singular.
func (w *worker) linearise(b box, x []float64) (ok bool) {
	m := len(b)
	w.sheet.forward(&w.s.graph, b)
	w.differentiate(w.sheet)
	if !w.middle() || !invert(w.mid, w.inverse, m) {
		return false
	}
	w.evaluate(x)
	w.precondition()
	return true
}

// alone tells whether no two points of b have the same rates.
func (w *worker) alone(b box) bool {
	return w.linearise(b, b.mid()) && w.contracts(b)
}

// pin looks for the resting state near x, and inside bounds: it tries boxes about
// it, of some times the given sizes and less and less, until one is proved to hold
// exactly one.
func (w *worker) pin(x []float64, size, bounds box) (f found, ok bool) {
	x, ok = w.polish(x, bounds)
	if !ok {
		return f, false
	}
	for share := 2.0; share > 1e-14; share /= 16 {
		y := make(box, len(x))
		for i, v := range x {
			r := share*size[i].Width() + 1e-14*math.Abs(v) + 1e-300
			y[i] = interval.Point(v).Add(iv{Lo: -r, Hi: r}).Meet(bounds[i])
		}
		if f, ok = w.prove(y, bounds); ok {
			return f, true
		}
	}
	return f, false
}

// prove tells whether the box, or one near it, holds exactly one resting state, by
// Krawczyk's test: K ⊆ X for existence (Brouwer), contraction for uniqueness. Where
// K is not inside, the test is repeated about K, somewhat inflated (Rump's
// ε-inflation, Neumaier 1990, section 5.1, from memory). The state is then enclosed
// as tightly as the steps go.
func (w *worker) prove(b, bounds box) (f found, ok bool) {
	for range 4 {
		if !w.linearise(b, b.mid()) || !w.contracts(b) {
			return f, false
		}
		w.krawczyk(b, b.mid())
		k := slices.Clone(box(w.image))
		if k.in(b) {
			defined, _ := w.sheet.defined(&w.s.graph)
			f = found{box: k, unique: b}
			if defined {
				w.tighten(&f)
			}
			return f, defined
		}
		b = make(box, len(k))
		for i, a := range k {
			b[i] = a.Add(iv{Lo: -a.Width() / 2, Hi: a.Width() / 2}).Meet(bounds[i])
			if b[i].IsEmpty() {
				return f, false
			}
		}
	}
	return f, false
}

// tighten repeats Newton steps until the enclosure stays as it is.
func (w *worker) tighten(f *found) {
	for range 12 {
		next := slices.Clone(f.box)
		if !w.linearise(next, next.mid()) || w.sweep(next, next.mid()) {
			break
		}
		gain := next.gain(f.box)
		f.box = next
		if gain < 0.1 {
			break
		}
	}
	w.sheet.forward(&w.s.graph, f.box)
	_, smooth := w.sheet.defined(&w.s.graph)
	f.kink = !smooth
}

// polish runs Newton's method in floating point from x inside the bounds; ok is
// false where it does not settle.
func (w *worker) polish(x []float64, bounds box) ([]float64, bool) {
	m := len(x)
	x = slices.Clone(x)
	for range 40 {
		w.evaluate(x)
		w.differentiate(w.at)
		if !w.middle() || !invert(w.mid, w.inverse, m) {
			return x, false
		}
		step := 0.0
		for i := range m {
			d := 0.0
			for j := range m {
				d += w.inverse[i*m+j] * w.f[j].Mid()
			}
			old := x[i]
			x[i] = min(max(x[i]-d, bounds[i].Lo), bounds[i].Hi)
			if math.IsNaN(x[i]) {
				return x, false
			}
			step = max(step, math.Abs(x[i]-old)/max(math.Abs(x[i]), 1e-300))
		}
		if step < 1e-14 {
			return x, true
		}
	}
	return x, true
}
