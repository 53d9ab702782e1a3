package proof

import (
	"math"

	"holdfast/deterministic/proof/interval"
)

// contracts tells whether C J(X) is so near to the identity that no two points of
// X have the same rates: |1 − CJ| u < u for some u > 0, which makes every matrix in
// C J regular (Neumaier 1990, section 3.7, H-matrices), and by the mean value theorem
// f(x) − f(y) = A (x − y) for one of them. At the kinks of min, max and abs the
// theorem holds with Clarke's gradients, which J holds too. Where a law is undefined
// in a part of X the derivatives are unbounded, and this is not reached, but for
// powers above 1 of what falls below 0; these go on with the value 0 and slope 0,
// which J holds as well. u starts from the box's shape.
func (w *worker) contracts(box []iv) bool {
	m := len(box)
	u, v := make([]float64, m), make([]float64, m)
	for i := range u {
		u[i] = box[i].Width() + 1e-300
	}
	for range 4 {
		ok := true
		for i := range m {
			v[i] = w.pressure(i, u)
			ok = ok && v[i] < u[i]
		}
		if ok {
			return true
		}
		for i := range u {
			u[i] = (u[i] + v[i]) / 2
		}
	}
	return false
}

// pressure is the i-th component of |1 − CJ| u, rounded up.
func (w *worker) pressure(i int, u []float64) float64 {
	m := len(u)
	sum := interval.Point(0)
	for j := range m {
		off := w.a[i*m+j]
		if i == j {
			off = interval.Point(1).Sub(off)
		}
		sum = sum.Add(interval.Point(off.Mag()).Mul(interval.Point(u[j])))
	}
	if math.IsNaN(sum.Hi) {
		return math.Inf(1)
	}
	return sum.Hi
}
