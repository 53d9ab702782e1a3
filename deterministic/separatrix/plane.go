package separatrix

import (
	"math"
	"slices"

	"holdfast/deterministic"
)

// plane is the compatibility class by coordinates: the amounts of the free species
// give those of the others through the conserved totals.
type plane struct {
	species   int
	free      []int
	dependent []int
	constant  []float64   // by dependent species
	slope     [][]float64 // by dependent species, one a free species
}

// newPlane eliminates the totals, the largest weight first.
func newPlane(m *deterministic.Map) *plane {
	n := len(m.Network.Species)
	p := &plane{species: n}
	rows := make([][]float64, len(m.Totals))
	for k, t := range m.Totals {
		rows[k] = make([]float64, n+1)
		for i, w := range t.Weights {
			rows[k][i] = float64(w) * m.Network.Unit(i)
		}
		rows[k][n] = float64(t.Value)
	}
	taken := make([]bool, n)
	for k := range rows {
		d := largestOf(rows[k][:n])
		taken[d] = true
		p.dependent = append(p.dependent, d)
		pivotOn(rows, k, d)
	}
	for i, t := range taken {
		if !t {
			p.free = append(p.free, i)
		}
	}
	for _, row := range rows {
		p.constant = append(p.constant, row[n])
		var slope []float64
		for _, i := range p.free {
			slope = append(slope, -row[i])
		}
		p.slope = append(p.slope, slope)
	}
	return p
}

func largestOf(row []float64) int {
	best := 0
	for i, v := range row {
		if math.Abs(v) > math.Abs(row[best]) {
			best = i
		}
	}
	return best
}

// pivotOn makes row k's entry in column d 1 and the other rows' 0.
func pivotOn(rows [][]float64, k, d int) {
	pivot := rows[k][d]
	for i := range rows[k] {
		rows[k][i] /= pivot
	}
	for j := range rows {
		w := rows[j][d]
		if j == k || w == 0 {
			continue
		}
		for i := range rows[j] {
			rows[j][i] -= w * rows[k][i]
		}
	}
}

// point gives the amounts for the coordinates.
func (p *plane) point(c []float64) []float64 {
	x := make([]float64, p.species)
	for k, i := range p.free {
		x[i] = c[k]
	}
	for k, d := range p.dependent {
		x[d] = p.constant[k]
		for j, w := range p.slope[k] {
			x[d] += w * c[j]
		}
	}
	return x
}

// line gives the part of the line along the first coordinate, the second being at
// b, that lies in the box.
func (p *plane) line(x box, b float64) (low, high float64) {
	low, high = x.low[p.free[0]], x.high[p.free[0]]
	for k, d := range p.dependent {
		base, w := p.constant[k]+p.slope[k][1]*b, p.slope[k][0]
		if w == 0 {
			if base < x.low[d] || base > x.high[d] {
				return 0, 0
			}
			continue
		}
		s, e := (x.low[d]-base)/w, (x.high[d]-base)/w
		low, high = max(low, min(s, e)), min(high, max(s, e))
	}
	return low, max(low, high)
}

// crossings lists, ascending, where the curves cross the line on which the second
// coordinate is b.
func (p *plane) crossings(curves []Curve, b float64) []float64 {
	i, j := p.free[0], p.free[1]
	var out []float64
	for _, c := range curves {
		for k := 1; k < len(c.Points); k++ {
			v, w := c.Points[k-1], c.Points[k]
			if (v[j] < b) != (w[j] < b) {
				out = append(out, v[i]+(w[i]-v[i])*(b-v[j])/(w[j]-v[j]))
			}
		}
	}
	slices.Sort(out)
	return out
}

// near tells whether a point is within reach of a curve, both coordinates measured
// by the units given.
func (p *plane) near(curves []Curve, a, b, reach float64, unit [2]float64) bool {
	i, j := p.free[0], p.free[1]
	for _, c := range curves {
		for k := 1; k < len(c.Points); k++ {
			v, w := c.Points[k-1], c.Points[k]
			s := [2]float64{(w[i] - v[i]) / unit[0], (w[j] - v[j]) / unit[1]}
			d := [2]float64{(a - v[i]) / unit[0], (b - v[j]) / unit[1]}
			t := 0.0
			if size := s[0]*s[0] + s[1]*s[1]; size > 0 {
				t = min(max((s[0]*d[0]+s[1]*d[1])/size, 0), 1)
			}
			if math.Hypot(d[0]-t*s[0], d[1]-t*s[1]) < reach {
				return true
			}
		}
	}
	return false
}
