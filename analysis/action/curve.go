package action

import (
	"math"
	"slices"
	"sort"
)

// A curve is a path in coordinates: elements one after the other, whose nodes are
// spread over its length by graded, so that the ends, where the path comes out of
// a resting state as a power of the distance, are resolved.
type curve struct {
	sys      *system
	element  *element
	elements int
	node     [][]float64
	// momenta at the points of quadrature, kept from one look to the next.
	p     [][]float64
	local *local
}

// graded gives the share of the length at parameter σ: a cubic in each half, so that a
// curve laid by it on a straight line is one exactly, with two derivatives that are 0
// at the end.
func graded(sigma float64) float64 {
	if sigma > 0.5 {
		return 1 - graded(1-sigma)
	}
	return 4 * sigma * sigma * sigma
}

// newCurve lays a curve of so many elements along a line of points.
func newCurve(s *system, elements int, line [][]float64) *curve {
	c := &curve{sys: s, element: newElement(), elements: elements, local: newLocal(s)}
	c.lay(line)
	return c
}

// lay puts the nodes on the line, as graded asks.
func (c *curve) lay(line [][]float64) {
	length := lengths(line)
	total := length[len(length)-1]
	count := c.elements * degree
	c.node = make([][]float64, count+1)
	for k := range c.node {
		c.node[k] = pointAt(line, length, total*graded(float64(k)/float64(count)))
	}
	c.node[0], c.node[count] = slices.Clone(line[0]), slices.Clone(line[len(line)-1])
	c.forget()
}

// forget drops the kept momenta.
func (c *curve) forget() {
	c.p = make([][]float64, c.elements*gauss)
	for i := range c.p {
		c.p[i] = make([]float64, c.sys.m)
	}
}

// lengths gives the length of the line up to each of its points.
func lengths(line [][]float64) []float64 {
	out := make([]float64, len(line))
	for k := 1; k < len(line); k++ {
		sum := 0.0
		for i, v := range line[k] {
			sum += (v - line[k-1][i]) * (v - line[k-1][i])
		}
		out[k] = out[k-1] + math.Sqrt(sum)
	}
	return out
}

// pointAt gives the point of the line at a length from its start.
func pointAt(line [][]float64, length []float64, at float64) []float64 {
	k := sort.SearchFloat64s(length, at)
	k = min(max(k, 1), len(line)-1)
	t := 0.0
	if span := length[k] - length[k-1]; span > 0 {
		t = min(max((at-length[k-1])/span, 0), 1)
	}
	out := make([]float64, len(line[k]))
	for i := range out {
		out[i] = line[k-1][i] + t*(line[k][i]-line[k-1][i])
	}
	return out
}

// point gives position and tangent in element e for the given polynomials.
func (c *curve) point(e int, value, slope *[nodes]float64, z, v []float64) {
	clear(z)
	clear(v)
	for k := range nodes {
		node := c.node[e*degree+k]
		addScaled(z, value[k], node)
		addScaled(v, slope[k], node)
	}
}

// action is the cost of the curve; false where it leads where no path can go.
func (c *curve) action() (float64, bool) {
	z, v := make([]float64, c.sys.m), make([]float64, c.sys.m)
	sum := 0.0
	for e := range c.elements {
		for q := range gauss {
			c.point(e, &c.element.value[q], &c.element.slope[q], z, v)
			value, _, ok := c.local.cost(z, v, c.p[e*gauss+q])
			if !ok {
				return math.Inf(1), false
			}
			sum += c.element.weight[q] * value
		}
	}
	return sum, true
}

// doubled gives the same curve in twice as many elements.
func (c *curve) doubled() *curve {
	d := &curve{sys: c.sys, element: c.element, elements: 2 * c.elements, local: c.local}
	var even [nodes]float64
	for k := range even {
		even[k] = float64(k) / degree
	}
	for e := range c.elements {
		for k := range 2 * degree {
			value := lagrange(even, float64(k)/(2*degree))
			z := make([]float64, c.sys.m)
			for i := range nodes {
				addScaled(z, value[i], c.node[e*degree+i])
			}
			d.node = append(d.node, z)
		}
	}
	d.node = append(d.node, c.node[len(c.node)-1])
	d.forget()
	for i := range d.p {
		copy(d.p[i], c.p[i/(2*gauss)*gauss+i%(2*gauss)/2])
	}
	return d
}

// fine is the number of pieces that a stretch between nodes is cut in to measure it.
const fine = 8

// polygon gives points along the curve, close together.
func (c *curve) polygon() [][]float64 {
	var even [nodes]float64
	for k := range even {
		even[k] = float64(k) / degree
	}
	var out [][]float64
	for e := range c.elements {
		for k := range degree * fine {
			value := lagrange(even, float64(k)/(degree*fine))
			z := make([]float64, c.sys.m)
			for i := range nodes {
				addScaled(z, value[i], c.node[e*degree+i])
			}
			out = append(out, z)
		}
	}
	return append(out, c.node[len(c.node)-1])
}

// uneven tells how far the spacing of the nodes is from what graded asks: the
// largest factor between a stretch and its due.
func (c *curve) uneven() float64 {
	length := lengths(c.polygon())
	total := length[len(length)-1]
	count := c.elements * degree
	worst := 1.0
	for k := range count {
		due := graded(float64(k+1)/float64(count)) - graded(float64(k)/float64(count))
		ratio := (length[(k+1)*fine] - length[k*fine]) / total / due
		worst = max(worst, ratio, 1/ratio)
	}
	return worst
}
