package sde

import "math"

// general is the scheme for any system, lane by lane.
type general struct {
	*worker
	columns   [][]float64 // what each direction adds to a coordinate
	low, high []float64
	root      float64
	xs, dx, g []float64
}

func newGeneral(w *worker) *general {
	directions, n := w.System.Directions(), len(w.Start)
	s := &general{worker: w, root: math.Sqrt(w.Step)}
	low, high := w.System.Bounds()
	for k := range n {
		s.low = append(s.low, boundAt(low, k, math.Inf(-1)))
		s.high = append(s.high, boundAt(high, k, math.Inf(1)))
		var column []float64
		for _, v := range directions {
			column = append(column, v[k])
		}
		s.columns = append(s.columns, column)
	}
	s.xs, s.dx, s.g = make([]float64, n), make([]float64, n), make([]float64, len(directions))
	return s
}

// step is one of the Euler–Maruyama scheme, reflected at the system's bounds.
func (s *general) step(z table, lanes int) (over bool) {
	for i := range lanes {
		for k := range s.xs {
			s.xs[k] = s.x.cells[k*s.x.room+i]
		}
		s.System.Drift(s.dx, s.xs)
		s.System.Noise(s.g, s.xs)
		for d := range s.g {
			s.g[d] *= z.cells[d*z.room+i] * s.root
		}
		over = s.move(i) || over
	}
	return over
}

// move moves a lane's coordinates, and tells whether one is beyond the limit or no
// number.
func (s *general) move(i int) (over bool) {
	for k, x := range s.xs {
		x += float64(s.dx[k] * s.Step)
		for d, v := range s.columns[k] {
			x += float64(v * s.g[d])
		}
		if x < s.low[k] || x > s.high[k] {
			x = s.reflected(k, x)
		}
		s.x.cells[k*s.x.room+i] = x
		over = over || !(math.Abs(x) <= s.Limit)
	}
	return over
}

// reflected gives the mirror image of x in the bound that it is beyond; one that is
// then beyond the other bound ends there.
func (s *general) reflected(k int, x float64) float64 {
	if x < s.low[k] {
		return min(2*s.low[k]-x, s.high[k])
	}
	return max(2*s.high[k]-x, s.low[k])
}
