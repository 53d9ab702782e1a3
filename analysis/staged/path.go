package staged

import "math"

// Path measures progress along a line of points in molecules, in the directions given
// at each of them: those of the momenta of a path of least action, say. The momentum is
// the gradient of the cost still to go, which is what stages are best cut by (Dean,
// Dupuis, Stoch. Process. Appl. 119 (2009) 562). Points where the direction vanishes, as
// at its ends, take that of their neighbour; there must be one where it does not.
func Path(name string, points, directions [][]float64) Coordinate {
	c := Coordinate{Name: name, Points: points, Normals: make([][]float64, len(points))}
	last := -1
	for k, d := range directions {
		if c.Normals[k] = unit(d); c.Normals[k] == nil {
			continue
		}
		for i := last + 1; i < k; i++ {
			c.Normals[i] = c.Normals[k]
			if last >= 0 {
				c.Normals[i] = c.Normals[last]
			}
		}
		last = k
	}
	for i := last + 1; i < len(points) && last >= 0; i++ {
		c.Normals[i] = c.Normals[last]
	}
	return c
}

// vanishing is a length of a direction below which it tells nothing: rounding.
const vanishing = 1e-12

// unit gives d at length 1, or nil where it vanishes.
func unit(d []float64) []float64 {
	square := 0.0
	for _, x := range d {
		square += x * x
	}
	length := math.Sqrt(square)
	if !(length > vanishing) || math.IsInf(length, 1) {
		return nil
	}
	out := make([]float64, len(d))
	for i, x := range d {
		out[i] = x / length
	}
	return out
}
