package action

import "gonum.org/v1/gonum/mat"

// A stiffness is the part of one element in the equations, in coordinates: blocks of
// m×m for each pair of its nodes.
type stiffness struct {
	gradient        [nodes][]float64
	hessian, metric [nodes][nodes][]float64
}

func newStiffness(m int) *stiffness {
	k := &stiffness{}
	for i := range nodes {
		k.gradient[i] = make([]float64, m)
		for j := i; j < nodes; j++ {
			k.hessian[i][j], k.metric[i][j] = make([]float64, m*m), make([]float64, m*m)
		}
	}
	return k
}

func (k *stiffness) clear() {
	for i := range nodes {
		clear(k.gradient[i])
		for j := i; j < nodes; j++ {
			clear(k.hessian[i][j])
			clear(k.metric[i][j])
		}
	}
}

// assemble finds the action, its gradient and its hessian in the moves of the
// nodes along the frame.
func (c *curve) assemble(frame [][]float64) (*sheet, bool) {
	m := c.sys.m
	n, band := len(frame)*(m-1), min(len(frame), degree+1)*(m-1)-1
	s := &sheet{
		across: frame, gradient: make([]float64, n),
		hessian: mat.NewSymBandDense(n, band, nil), metric: mat.NewSymBandDense(n, band, nil),
	}
	z, v, d, k := make([]float64, m), make([]float64, m), newDensity(m), newStiffness(m)
	for e := range c.elements {
		k.clear()
		for q := range gauss {
			c.point(e, &c.element.value[q], &c.element.slope[q], z, v)
			if !c.local.expand(z, v, c.p[e*gauss+q], d) {
				return nil, false
			}
			s.value += c.element.weight[q] * d.value
			k.add(d, c.element.weight[q], &c.element.value[q], &c.element.slope[q])
		}
		s.add(k, e, m)
	}
	return s, true
}

// add adds a point of quadrature.
func (k *stiffness) add(d *density, w float64, value, slope *[nodes]float64) {
	m := len(d.x)
	for i := range nodes {
		addScaled(k.gradient[i], w*value[i], d.x)
		addScaled(k.gradient[i], w*slope[i], d.v)
		for j := i; j < nodes; j++ {
			h := k.hessian[i][j]
			addScaled(h, w*value[i]*value[j], d.xx)
			addScaled(h, w*slope[i]*value[j], d.vx)
			addScaled(h, w*slope[i]*slope[j], d.vv)
			addScaled(k.metric[i][j], w*slope[i]*slope[j], d.vv)
			crossed := w * value[i] * slope[j]
			for a := range m {
				for b := range m {
					h[a*m+b] += crossed * d.vx[b*m+a]
				}
			}
		}
	}
}

// add adds element e.
func (s *sheet) add(k *stiffness, e, m int) {
	half := make([]float64, m*(m-1))
	for i := range nodes {
		node := e*degree + i - 1
		if node < 0 || node >= len(s.across) {
			continue
		}
		s.addGradient(node, k.gradient[i])
		for j := i; j < nodes; j++ {
			if other := e*degree + j - 1; other < len(s.across) {
				s.addBlock(s.hessian, node, other, k.hessian[i][j], half)
				s.addBlock(s.metric, node, other, k.metric[i][j], half)
			}
		}
	}
}

func (s *sheet) addGradient(node int, whole []float64) {
	d := len(whole) - 1
	q := s.across[node]
	for i, g := range whole {
		addScaled(s.gradient[node*d:(node+1)*d], g, q[i*d:(i+1)*d])
	}
}

// addBlock adds a block between two nodes, in coordinates, to a matrix in moves; half
// is scratch, m×(m−1).
func (s *sheet) addBlock(to *mat.SymBandDense, node, other int, block, half []float64) {
	left, right := s.across[node], s.across[other]
	m := len(block) - len(half) // m² − m(m−1)
	d := m - 1
	clear(half)
	for a := range m {
		for b := range m {
			addScaled(half[a*d:(a+1)*d], block[a*m+b], right[b*d:(b+1)*d])
		}
	}
	sum := make([]float64, d)
	for i := range d {
		clear(sum)
		for a := range m {
			addScaled(sum, left[a*d+i], half[a*d:(a+1)*d])
		}
		for j := range d {
			row, column := node*d+i, other*d+j
			if row <= column {
				to.SetSymBand(row, column, to.At(row, column)+sum[j])
			}
		}
	}
}
