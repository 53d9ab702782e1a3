package action

import "gonum.org/v1/gonum/mat"

// assemble finds the action, its gradient and its hessian in the moves of the
// nodes along the frame.
func (c *curve) assemble(frame [][]float64) (*sheet, bool) {
	m := c.sys.m
	n, band := len(frame)*(m-1), min(len(frame), degree+1)*(m-1)-1
	s := &sheet{
		across: frame, gradient: make([]float64, n),
		hessian: mat.NewSymBandDense(n, band, nil), metric: mat.NewSymBandDense(n, band, nil),
	}
	z, v, d := make([]float64, m), make([]float64, m), newDensity(m)
	for e := range c.elements {
		for q := range gauss {
			c.point(e, &c.element.value[q], &c.element.slope[q], z, v)
			if !c.local.expand(z, v, c.p[e*gauss+q], d) {
				return nil, false
			}
			s.value += c.element.weight[q] * d.value
			s.add(c, e, q, d)
		}
	}
	return s, true
}

// add adds point q of element e.
func (s *sheet) add(c *curve, e, q int, d *density) {
	w := c.element.weight[q]
	value, slope := &c.element.value[q], &c.element.slope[q]
	m := c.sys.m
	block := make([]float64, m*m)
	for i := range nodes {
		node := e*degree + i - 1
		if node < 0 || node >= len(s.across) {
			continue
		}
		whole := make([]float64, m)
		addScaled(whole, w*value[i], d.x)
		addScaled(whole, w*slope[i], d.v)
		s.addGradient(node, whole)
		for k := i; k < nodes; k++ {
			other := e*degree + k - 1
			if other >= len(s.across) {
				continue
			}
			for a := range m {
				for b := range m {
					block[a*m+b] = w * (value[i]*value[k]*d.xx[a*m+b] + value[i]*slope[k]*d.vx[b*m+a] + slope[i]*value[k]*d.vx[a*m+b] + slope[i]*slope[k]*d.vv[a*m+b])
				}
			}
			s.addBlock(s.hessian, node, other, block, m)
			clear(block)
			addScaled(block, w*slope[i]*slope[k], d.vv)
			s.addBlock(s.metric, node, other, block, m)
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

// addBlock adds a block between two nodes, in coordinates, to a matrix in moves.
func (s *sheet) addBlock(to *mat.SymBandDense, node, other int, block []float64, m int) {
	d := m - 1
	left, right := s.across[node], s.across[other]
	half := make([]float64, d)
	for i := range d {
		clear(half)
		for a := range m {
			for b := range m {
				addScaled(half, left[a*d+i]*block[a*m+b], right[b*d:(b+1)*d])
			}
		}
		for j := range d {
			row, column := node*d+i, other*d+j
			if row <= column {
				to.SetSymBand(row, column, to.At(row, column)+half[j])
			}
		}
	}
}
