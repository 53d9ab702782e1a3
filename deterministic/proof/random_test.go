package proof_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"holdfast/model"
)

// A cubic has three real roots, or one and a pair b ± ic.
type cubic struct {
	roots []float64  // ascending: three, or one
	e     [3]float64 // the elementary symmetric functions of all three
}

// anyCubic draws roots above 0 over three decades, no two nearer than the given
// share, or one root and a complex pair with positive real part: then all
// elementary symmetric functions are above 0.
func anyCubic(r *rand.Rand, real bool, apart float64) cubic {
	draw := func() float64 { return math.Pow(10, 3*r.Float64()-1.5) }
	if !real {
		x, b := draw(), draw()
		c := b * (0.05 + 2*r.Float64())
		n := b*b + c*c
		return cubic{roots: []float64{x}, e: [3]float64{x + 2*b, 2*x*b + n, x * n}}
	}
	for {
		x := []float64{draw(), draw(), draw()}
		slices.Sort(x)
		if x[1] < x[0]*(1+apart) || x[2] < x[1]*(1+apart) {
			continue
		}
		return cubic{roots: x, e: [3]float64{x[0] + x[1] + x[2], x[0]*x[1] + x[0]*x[2] + x[1]*x[2], x[0] * x[1] * x[2]}}
	}
}

// apart is the least relative distance of roots. The coefficients are rounded, to
// 1e-16 relative, which moves a root by at most about 1e-16 (Σ|coefficient xᵏ|)/|x
// p′(x)|: with roots 1e-3 apart below 1e-16·8/1e-6 = 1e-9.
const apart, moved = 1e-3, 1e-9

// massCubic adds y' = −scale Π(y − ρ_j x): mass action of third order in y and x;
// x empty stands for 1.
func massCubic(d *design, y, x string, c cubic, scale float64) {
	yy := y + " " + y
	d.mass(y, yy, "", scale)
	d.mass("", yy+" "+x, y, scale*c.e[0])
	d.mass(y, x+" "+x, "", scale*c.e[1])
	d.mass("", x+" "+x+" "+x, y, scale*c.e[2])
}

// hillCubic adds y' = x (s + β z²/(K²+z²)) − y with z = y/x, x empty standing for 1:
// its roots z solve z³ − (s+β) z² + K² z − s K² = 0, so K² = e₂, s = e₃/e₂ and
// β = e₁ − s > 0 put them where asked (algebra). hill chooses the way it is written.
func hillCubic(d *design, y, x string, c cubic, loss float64, written int) {
	k2, s := c.e[1], c.e[2]/c.e[1]
	beta := c.e[0] - s
	z := d.x(y)
	if x != "" {
		z = over(z, d.x(x))
	}
	var rise *model.Node
	switch written {
	case 0:
		rise = model.Call(model.OpHill, z, num(math.Sqrt(k2)), num(2))
	case 1:
		rise = over(raised(z, 2), plus(num(k2), raised(z, 2)))
	case 2:
		rise = minus(num(1), model.Call(model.OpHillFall, z, num(math.Sqrt(k2)), num(2)))
	default:
		rise = minus(num(1), over(num(1), plus(num(1), over(times(z, z), num(k2)))))
	}
	law := plus(num(loss*s), times(num(loss*beta), rise))
	if x != "" {
		law = times(d.x(x), law)
	}
	d.rate("", y, law).mass(y, "", "", loss)
}

// withTranscript replaces nothing, but adds m made at k·y and lost at b: one more
// species whose states follow.
func withTranscript(d *design, m, y string, k, b float64) {
	d.mass("", y, m, k).mass(m, "", "", b)
}

// TestRandomCubicsOneSpecies: 40 cubic and 40 Hill networks of one species.
func TestRandomCubicsOneSpecies(t *testing.T) {
	r := rand.New(rand.NewPCG(11, 12))
	for k := range 80 {
		c := anyCubic(r, k%3 != 0, apart)
		d := newDesign("y")
		if k%2 == 0 {
			massCubic(d, "y", "", c, math.Exp(4*r.Float64()-2))
		} else {
			hillCubic(d, "y", "", c, math.Exp(4*r.Float64()-2), k/2%4)
		}
		var want [][]float64
		for _, x := range c.roots {
			want = append(want, []float64{x})
		}
		got := prove(t, d.network(t), nil, nil)
		wantComplete(t, fmt.Sprintf("network %d, roots %v", k, c.roots), got, want, moved)
		if !got.All {
			t.Errorf("network %d: %v: not said to hold for all amounts", k, got)
		}
	}
}

// TestRandomCubicsTwoSpecies: 60 networks of two coupled species, each with one,
// three or nine states: y's roots scale with x. Half have transcripts as well, so
// three or four species.
func TestRandomCubicsTwoSpecies(t *testing.T) {
	r := rand.New(rand.NewPCG(13, 14))
	for k := range 60 {
		cx, cy := anyCubic(r, r.IntN(3) > 0, 0.01), anyCubic(r, r.IntN(3) > 0, 0.01)
		names := [][]string{{"x", "y"}, {"x", "y", "m"}, {"x", "y", "m", "n"}}[k%3]
		d := newDesign(names...)
		factors := []float64{1, 1}
		if k%3 > 0 {
			withTranscript(d, "m", "x", 2, 0.5)
			factors[0] = 4
		}
		if k%3 > 1 {
			withTranscript(d, "n", "m", 3, 0.5)
			factors[1] = 24
		}
		if k%2 == 0 {
			massCubic(d, "x", "", cx, 1)
			hillCubic(d, "y", "x", cy, 0.3, k/2%4)
		} else {
			hillCubic(d, "x", "", cx, 1.7, k/2%4)
			massCubic(d, "y", "x", cy, 0.2)
		}
		got := prove(t, d.network(t), nil, nil)
		wantComplete(t, fmt.Sprintf("network %d, roots %v and %v", k, cx.roots, cy.roots), got, pairs(cx, cy, len(names), factors), moved)
	}
}

func pairs(cx, cy cubic, species int, factors []float64) [][]float64 {
	var want [][]float64
	for _, x := range cx.roots {
		for _, z := range cy.roots {
			want = append(want, []float64{x, x * z, factors[0] * x, factors[1] * x}[:species])
		}
	}
	return want
}

// TestRandomQuintics: 20 networks of one species with five states, three of them
// stable, and mass action of fifth order.
func TestRandomQuintics(t *testing.T) {
	r := rand.New(rand.NewPCG(15, 16))
	for k := range 20 {
		x := []float64{1 + r.Float64()}
		for range 4 {
			x = append(x, x[len(x)-1]*(1.1+r.Float64()))
		}
		e := symmetric(x)
		d := newDesign("y")
		reactants := []string{"", "y", "y y", "y y y", "y y y y", "y y y y y"}
		for i, c := range e { // −Π(y − xᵢ) = Σ (−1)^{i+1} e_i y^{5−i}
			if i%2 == 1 {
				d.mass("", reactants[5-i], "y", c)
			} else {
				d.mass("y", reactants[4-i], "", c)
			}
		}
		var want [][]float64
		for _, v := range x {
			want = append(want, []float64{v})
		}
		wantComplete(t, fmt.Sprintf("quintic %d, roots %v", k, x), prove(t, d.network(t), nil, nil), want, 1e-8) // condition below 1e7
	}
}

// symmetric gives the elementary symmetric functions e₀ … e_n.
func symmetric(x []float64) []float64 {
	e := []float64{1}
	for _, v := range x {
		next := append(slices.Clone(e), 0)
		for i, c := range e {
			next[i+1] += c * v
		}
		e = next
	}
	return e
}
