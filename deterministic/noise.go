package deterministic

import (
	"math"

	"holdfast/model"
)

// diffusion gives the matrix D of the linear noise at amounts x, molecules² per
// unit of time, species by species in row-major order: the sum over reactions of
// the propensity times the mean of ΔΔᵀ for the change Δ of counts by one firing.
// A burst of mean b, geometric on 0, 1, 2, …, has mean square b + 2b².
func (s *system) diffusion(x []float64) []float64 {
	d := make([]float64, s.n*s.n)
	for r := range s.net.Reactions {
		re := &s.net.Reactions[r]
		a := re.Scale * s.net.Flux(r, x)
		if a == 0 {
			continue
		}
		mean := meanChange(re, s.n)
		for i, p := range mean {
			for j, q := range mean {
				d[i*s.n+j] += a * p * q
			}
		}
		for _, t := range re.Bursts { // independent of all else: add its variance
			d[t.Species*s.n+t.Species] += a * t.Burst * (1 + t.Burst)
		}
	}
	return d
}

// meanChange is the mean change of every count by one firing.
func meanChange(re *model.Reaction, n int) []float64 {
	v := make([]float64, n)
	for _, t := range re.Net {
		v[t.Species] += float64(t.Count)
	}
	for _, t := range re.Bursts {
		v[t.Species] += t.Burst
	}
	return v
}

// covariance solves J C + C Jᵀ + D = 0 on the class at the resting state x, in
// molecules: the m×m covariance of the independent species and the full one. It
// is false where the equation has no single solution.
func (w *workspace) covariance(c *class, x []float64) (reduced, full []float64, ok bool) {
	s, m := w.sys, c.dim()
	w.sys.jacobian(x, w.jac, w.grad)
	molecules := make([]float64, s.n)
	for i, v := range x {
		molecules[i] = max(v*s.unit[i], 1)
	}
	// Species are measured in units of their Poisson deviation in between.
	a := c.restrict(w.jac)
	d := s.diffusion(x)
	e := make([]float64, m*m)
	for p, i := range c.independent {
		for q, j := range c.independent {
			ratio := math.Sqrt(molecules[j] / molecules[i])
			a[p*m+q] *= s.unit[i] / s.unit[j] * ratio
			e[p*m+q] = d[i*s.n+j] / (math.Sqrt(molecules[i]) * math.Sqrt(molecules[j]))
		}
	}
	reduced, ok = lyapunov(a, e, m)
	if !ok {
		return nil, nil, false
	}
	for p, i := range c.independent {
		for q, j := range c.independent {
			reduced[p*m+q] *= (math.Sqrt(molecules[i]) * math.Sqrt(molecules[j]))
		}
	}
	return reduced, inMolecules(s, c, reduced), true
}

// inMolecules is link·C·linkᵀ with the link in molecules.
func inMolecules(s *system, c *class, reduced []float64) []float64 {
	m := c.dim()
	scaled := make([]float64, m*m)
	for p, i := range c.independent {
		for q, j := range c.independent {
			scaled[p*m+q] = reduced[p*m+q] / s.unit[i] / s.unit[j]
		}
	}
	full := c.extend(scaled)
	for i := range s.n {
		for j := range s.n {
			full[i*s.n+j] *= s.unit[i] * s.unit[j]
		}
	}
	return full
}

// mostDirect is the largest dimension whose Lyapunov equation is solved directly.
const mostDirect = 16

// lyapunov solves A C + C Aᵀ + D = 0 for the symmetric C, all m×m row-major, as
// m(m+1)/2 linear equations in the entries on and above the diagonal.
func lyapunov(a, d []float64, m int) ([]float64, bool) {
	switch {
	case m == 0:
		return nil, true
	case m > mostDirect:
		return lyapunovBySign(a, d, m)
	}
	index := func(i, j int) int {
		if i > j {
			i, j = j, i
		}
		return i*m - i*(i-1)/2 + j - i
	}
	count := m * (m + 1) / 2
	f := newLU(count)
	b := make([]float64, count)
	for i := range m {
		for j := i; j < m; j++ {
			row := f.a[index(i, j)*count:]
			b[index(i, j)] = -(d[i*m+j] + d[j*m+i]) / 2
			for k := range m {
				row[index(k, j)] += a[i*m+k]
				row[index(k, i)] += a[j*m+k]
			}
		}
	}
	if !f.factor() {
		return nil, false
	}
	f.solve(b)
	c := make([]float64, m*m)
	for i := range m {
		for j := range m {
			c[i*m+j] = b[index(i, j)]
		}
	}
	return c, true
}
