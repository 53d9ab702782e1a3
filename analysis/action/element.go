package action

import "gonum.org/v1/gonum/integrate/quad"

const (
	// degree is that of the polynomials that make a path, gauss the number of points of
	// the quadrature in each.
	degree = 4
	gauss  = degree + 1
	nodes  = degree + 1
)

// An element is what is common to all pieces of a path: Lagrange polynomials on
// evenly spaced nodes of [0, 1], at the points of Gauss's quadrature.
type element struct {
	at, weight [gauss]float64
	value      [gauss][nodes]float64
	slope      [gauss][nodes]float64
	// endSlope are the slopes at the nodes, node by node.
	endSlope [nodes][nodes]float64
	// upTo[k][q] is the weight of point q in the integral from 0 to node k.
	upTo [nodes][gauss]float64
	// ends extrapolates from the points of quadrature to each node.
	ends [nodes][gauss]float64
}

func newElement() *element {
	e := &element{}
	quad.Legendre{}.FixedLocations(e.at[:], e.weight[:], 0, 1)
	var even [nodes]float64
	for k := range even {
		even[k] = float64(k) / degree
	}
	for q, x := range e.at {
		e.value[q] = lagrange(even, x)
		e.slope[q] = lagrangeSlope(even, x)
	}
	for k, x := range even {
		e.endSlope[k] = lagrangeSlope(even, x)
		e.ends[k] = lagrange(e.at, x)
		for q := range gauss { // ∫₀ˣ of a polynomial of degree gauss−1 is exact by gauss points
			for i, l := range lagrange(e.at, x*e.at[q]) {
				e.upTo[k][i] += x * e.weight[q] * l
			}
		}
	}
	return e
}

// lagrange gives the Lagrange polynomials on the points at x.
func lagrange(points [nodes]float64, x float64) [nodes]float64 {
	var out [nodes]float64
	for i := range points {
		out[i] = 1
		for k := range points {
			if k != i {
				out[i] *= (x - points[k]) / (points[i] - points[k])
			}
		}
	}
	return out
}

// lagrangeSlope gives their derivatives at x.
func lagrangeSlope(points [nodes]float64, x float64) [nodes]float64 {
	var out [nodes]float64
	for i := range points {
		for j := range points {
			if j == i {
				continue
			}
			product := 1 / (points[i] - points[j])
			for k := range points {
				if k != i && k != j {
					product *= (x - points[k]) / (points[i] - points[k])
				}
			}
			out[i] += product
		}
	}
	return out
}
