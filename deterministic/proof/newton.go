package proof

import (
	"holdfast/deterministic/proof/interval"
)

// A worker holds the scratch space for one goroutine's work on a system.
type worker struct {
	s       *system
	sheet   sheet // over a box
	at      sheet // at a point
	adjoint []iv
	wings   wings
	slopes  [][]iv // the derivatives of each atom by its species
	f       []iv   // the rows' values at the point
	point   []iv
	// inverse is C, near the inverse of the Jacobian at the middle; a is C times
	// the Jacobian over the box; cf is C times f. All row by row.
	mid, inverse []float64
	a, cf        []iv
	weighted     []iv // C times an atom's column
	image        []iv
	free         []float64
}

func newWorker(s *system) *worker {
	m, nodes := len(s.species), len(s.nodes)
	w := &worker{
		s: s, sheet: make(sheet, nodes), at: make(sheet, nodes), adjoint: make([]iv, nodes),
		f: make([]iv, m), point: make([]iv, m), mid: make([]float64, m*m), inverse: make([]float64, m*m),
		a: make([]iv, m*m), cf: make([]iv, m), weighted: make([]iv, m), image: make([]iv, m), free: make([]float64, m),
	}
	for i := range s.atoms {
		w.slopes = append(w.slopes, make([]iv, len(s.atoms[i].species)))
	}
	return w
}

// differentiate works out the slopes of all atoms over the box that sh is for.
func (w *worker) differentiate(sh sheet) {
	for i := range w.s.atoms {
		sh.gradient(&w.s.graph, &w.s.atoms[i], w.slopes[i], w.adjoint)
	}
}

// evaluate works out the rows at the point x.
func (w *worker) evaluate(x []float64) {
	for j, v := range x {
		w.point[j] = interval.Point(v)
	}
	w.at.forward(&w.s.graph, w.point)
	for i, r := range w.s.rows {
		w.f[i] = r.c
		for k, a := range r.atoms {
			w.f[i] = w.f[i].Add(r.coef[k].Mul(w.at[w.s.atoms[a].node]))
		}
	}
}

// middle fills mid with the middle of the Jacobian that the slopes give; ok is
// false where it is not finite.
func (w *worker) middle() (ok bool) {
	m := len(w.s.species)
	clear(w.mid)
	for k, col := range w.s.columns {
		for j, place := range w.s.atoms[k].species {
			d := w.slopes[k][j]
			if !d.Bounded() {
				return false
			}
			for i, r := range col.rows {
				w.mid[r*m+place] += col.coef[i].Mid() * d.Mid()
			}
		}
	}
	return true
}

// precondition fills a with C times the enclosure of the Jacobian and cf with C
// times f. The product with the whole-number weights comes first, so that a flux
// that stands in several rows is counted once (Neumaier, Interval Methods for
// Systems of Equations, Cambridge 1990, section 4.1, for preconditioning).
func (w *worker) precondition() {
	m := len(w.s.species)
	clear(w.a)
	for k, col := range w.s.columns {
		w.weigh(col)
		for j, place := range w.s.atoms[k].species {
			d := w.slopes[k][j]
			for i, c := range w.weighted {
				at := &w.a[i*m+place]
				*at = at.Add(c.Mul(d))
			}
		}
	}
	for i := range m {
		sum := interval.Point(0)
		for j, f := range w.f {
			sum = sum.Add(interval.Point(w.inverse[i*m+j]).Mul(f))
		}
		w.cf[i] = sum
	}
}

// weigh fills weighted with C times the column of an atom.
func (w *worker) weigh(col column) {
	m := len(w.s.species)
	for i := range w.weighted {
		sum := interval.Point(0)
		for k, r := range col.rows {
			sum = sum.Add(interval.Point(w.inverse[i*m+r]).Mul(col.coef[k]))
		}
		w.weighted[i] = sum
	}
}

// krawczyk fills image with K = x − C f(x) + (1 − C J)(X − x), of which every rest
// point in X is a member (Krawczyk, Computing 4 (1969) 187).
func (w *worker) krawczyk(box []iv, x []float64) {
	m := len(box)
	for i := range m {
		sum := interval.Point(x[i]).Sub(w.cf[i])
		for j := range m {
			off := w.a[i*m+j].Neg()
			if i == j {
				off = interval.Point(1).Add(off)
			}
			sum = sum.Add(off.Mul(box[j].Sub(interval.Point(x[j]))))
		}
		w.image[i] = sum
	}
}

// sweep narrows the box by the interval Gauss–Seidel method on the preconditioned
// system; it tells whether it ran empty (Hansen and Sengupta, BIT 21 (1981) 203).
func (w *worker) sweep(box []iv, x []float64) (empty bool) {
	m := len(box)
	for i := range m {
		sum := w.cf[i]
		for j := range m {
			if j != i {
				sum = sum.Add(w.a[i*m+j].Mul(box[j].Sub(interval.Point(x[j]))))
			}
		}
		step := box[i].Sub(interval.Point(x[i]))
		step = interval.Solve(sum.Neg(), w.a[i*m+i], step)
		if step.IsEmpty() {
			return true
		}
		box[i] = box[i].Meet(interval.Point(x[i]).Add(step))
		if box[i].IsEmpty() {
			return true
		}
	}
	return false
}
