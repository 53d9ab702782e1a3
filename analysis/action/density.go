package action

import "math"

// A density is the action of a path for one unit of its parameter at a point x
// with tangent v, L = θ·v, and its derivatives: first ones by x and v, and
// second ones xx, vx (row v, column x) and vv, m×m in row-major order.
type density struct {
	value      float64
	x, v       []float64
	xx, vx, vv []float64
}

func newDensity(m int) *density {
	return &density{
		x: make([]float64, m), v: make([]float64, m),
		xx: make([]float64, m*m), vx: make([]float64, m*m), vv: make([]float64, m*m),
	}
}

// flatten sets the derivatives to 0: where the rates balance to within rounding, at an
// end of the path, they are not known, and weigh nothing.
func (d *density) flatten() {
	for _, a := range [][]float64{d.x, d.v, d.xx, d.vx, d.vv} {
		clear(a)
	}
}

// cost gives L at z along v; p holds the momenta, as momenta has them.
func (l *local) cost(z, v, p []float64) (value, lambda float64, ok bool) {
	if !l.at(z) {
		return 0, 0, false
	}
	lambda, ok = l.momenta(v, p)
	if value = dot(p, v); !(math.Abs(value) <= math.MaxFloat64) {
		return 0, 0, false
	}
	return value, lambda, ok
}

// expand finds L and its derivatives. With H_θ = λ v and H = 0, L_v = θ and
// L_x = −H_x/λ; their derivatives follow from those two equations.
func (l *local) expand(z, v, p []float64, d *density) bool {
	value, lambda, ok := l.cost(z, v, p)
	if !ok {
		return false
	}
	d.value = value
	if lambda*lambda*dot(l.w, v) <= 1e4*l.blur() {
		d.flatten()
		return true
	}
	copy(d.v, p)
	l.slopes()
	l.firstInAmounts(d.x)
	m := l.sys.m
	hx := d.x // H_x until the end
	wv := dot(l.w, v)
	for j := range m {
		column := l.step
		for i := range m {
			column[i] = l.crossed[i*m+j]
		}
		change := (dot(l.w, column) - hx[j]/lambda) / wv // ∂λ/∂x_j
		solveFactor(l.hpp, m, column)
		for i := range m {
			d.vx[i*m+j] = l.w[i]*change - column[i]
		}
		l.trial[j] = change
	}
	l.secondInAmounts(d.xx)
	for i := range m {
		for j := range m {
			sum := d.xx[i*m+j]
			for k := range m {
				sum += l.crossed[k*m+i] * d.vx[k*m+j]
			}
			d.xx[i*m+j] = (hx[i]*l.trial[j]/lambda - sum) / lambda
		}
	}
	l.tangential(d.vv, lambda, wv)
	for i := range hx {
		hx[i] = -hx[i] / lambda
	}
	return true
}

// firstInAmounts finds H_x in coordinates, and H_θx into crossed.
func (l *local) firstInAmounts(hx []float64) {
	m := l.sys.m
	clear(hx)
	clear(l.crossed)
	for c := range l.sys.channels {
		addScaled(hx, math.Expm1(l.exponent[c]), l.slope[c])
		weight := math.Exp(l.exponent[c])
		for i, g := range l.along[c] {
			addScaled(l.crossed[i*m:(i+1)*m], weight*g, l.slope[c])
		}
	}
}

// tangential finds L_vv = λ(M − M v vᵀM/(vᵀM v)) with M = H_θθ⁻¹ and l.w = M v.
func (l *local) tangential(vv []float64, lambda, wv float64) {
	m := l.sys.m
	for j := range m {
		clear(l.step)
		l.step[j] = 1
		solveFactor(l.hpp, m, l.step)
		for i := range m {
			vv[i*m+j] = lambda * (l.step[i] - l.w[i]*l.w[j]/wv)
		}
	}
}

// differenceStep is the step, relative to the amount, of the one difference that is
// taken: of the exact gradients of laws, for H_xx. It only steers the search.
const differenceStep = 1e-6

// secondInAmounts finds H_xx in coordinates.
func (l *local) secondInAmounts(out []float64) {
	n, m := l.sys.n, l.sys.m
	clear(l.second)
	for c := range l.sys.channels {
		weight := math.Expm1(l.exponent[c])
		r := l.sys.channels[c].reaction
		reads := l.sys.net.Reads(r)
		if weight == 0 || len(reads) == 0 {
			continue
		}
		l.sys.net.FluxGradient(r, l.x, l.gradient)
		for _, i := range reads {
			old := l.x[i]
			h := differenceStep * (old + norm(l.sys.frame[i*m:(i+1)*m]))
			l.x[i] += h
			l.sys.net.FluxGradient(r, l.x, l.column)
			l.x[i] = old
			for _, k := range reads {
				if second := (l.column[k] - l.gradient[k]) / h; !math.IsNaN(second) && !math.IsInf(second, 0) {
					l.second[i*n+k] += weight * second
				}
			}
		}
	}
	l.congruent(out)
}

// congruent turns l.second by species into coordinates, made symmetric.
func (l *local) congruent(out []float64) {
	n, m := l.sys.n, l.sys.m
	clear(out)
	for i := range n {
		for k := range n {
			s := (l.second[i*n+k] + l.second[k*n+i]) / 2
			if s == 0 {
				continue
			}
			for a := range m {
				addScaled(out[a*m:(a+1)*m], s*l.sys.frame[i*m+a], l.sys.frame[k*m:(k+1)*m])
			}
		}
	}
}
