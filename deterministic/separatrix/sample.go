package separatrix

import "math"

// bySample labels points of the Halton sequence (Halton, Numer. Math. 2 (1960) 84)
// in the box of the free species; those with other species outside are passed over.
func (g *gauge) bySample(samples int) Basins {
	sums := make([]float64, g.stable+1)
	count := 0
	for k := 1; count < samples && k < 1000*samples && g.ctx.Err() == nil; k++ {
		c := make([]float64, len(g.plane.free))
		for d, i := range g.plane.free {
			c[d] = g.box.low[i] + (g.box.high[i]-g.box.low[i])*halton(k, d)
		}
		if !g.inside(c) {
			continue
		}
		count++
		label := g.label(c...)
		if label < 0 {
			label = g.stable
		}
		sums[label]++
	}
	out := g.result(BySample, sums)
	for s, p := range out.Shares {
		out.Errors[s] = wilson(p, float64(count))
	}
	return out
}

func (g *gauge) inside(c []float64) bool {
	x := g.plane.point(c)
	for _, d := range g.plane.dependent {
		if x[d] < g.box.low[d] || x[d] > g.box.high[d] {
			return false
		}
	}
	return true
}

// wilson is the greater distance from p to an end of its 95 % interval.
func wilson(p, n float64) float64 {
	const z = 1.959963984540054
	centre := (p + z*z/(2*n)) / (1 + z*z/n)
	half := z / (1 + z*z/n) * math.Sqrt(p*(1-p)/n+z*z/(4*n*n))
	return max(centre+half-p, p-centre+half)
}

// halton is coordinate d of point k of the sequence: the digits of k in the d-th
// prime, mirrored at the point.
func halton(k, d int) float64 {
	base := prime(d)
	value, unit := 0.0, 1/float64(base)
	for ; k > 0; k /= base {
		value += float64(k%base) * unit
		unit /= float64(base)
	}
	return value
}

// prime is the d-th prime from 2 on.
func prime(d int) int {
	for p := 2; ; p++ {
		isPrime := true
		for q := 2; q*q <= p; q++ {
			isPrime = isPrime && p%q != 0
		}
		if !isPrime {
			continue
		}
		if d == 0 {
			return p
		}
		d--
	}
}
