package deterministic

import (
	"math/rand/v2"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// TestEnclosures: values and slopes of laws at random points of random boxes lie in
// their enclosures.
func TestEnclosures(t *testing.T) {
	r := rand.New(rand.NewPCG(15, 16))
	x, y := model.SpeciesRef(0), model.SpeciesRef(1)
	call, num := model.Call, model.Number
	squares := sumOf(num(1), call(model.OpPow, sumOf(x, y), num(2)))
	laws := []*model.Node{
		hillOf(3, 0, 0.7, 2.5), fallOf(2, 1, 3, 4),
		call(model.OpDiv, sumOf(num(0.1), call(model.OpMul, x, y)), squares),
		call(model.OpDiv, call(model.OpPow, call(model.OpDiv, x, num(3)), num(4)), sumOf(num(1), call(model.OpPow, call(model.OpDiv, x, num(3)), num(4)))),
		call(model.OpSub, call(model.OpExp, call(model.OpNeg, x)), call(model.OpSqrt, y)),
		call(model.OpMax, call(model.OpSub, x, y), call(model.OpMin, x, num(2))),
		call(model.OpAbs, call(model.OpSub, x, call(model.OpLog, sumOf(num(1), y)))),
		call(model.OpPow, sumOf(x, num(0.5)), call(model.OpDiv, y, num(4))),
	}
	e := newEncloser()
	for range 3000 {
		law := laws[r.IntN(len(laws))]
		over, point := make([]span, 2), make([]float64, 2)
		for i := range over {
			low := logUniform(r, 1e-3, 30)
			over[i] = span{Lo: low, Hi: low + logUniform(r, 1e-6, 10)}
			point[i] = min(over[i].Lo+r.Float64()*(over[i].Hi-over[i].Lo), over[i].Hi)
		}
		direction := []float64{1, -0.5}
		gradient := make([]float64, 2)
		v := law.Gradient(point, nil, gradient, nil)
		d := gradient[0]*direction[0] + gradient[1]*direction[1]
		value, slope := e.slope(law, over, direction)
		slack := 1e-13 * (1 + abs(v) + abs(d)) // rounding of the point values
		if v < value.Lo-slack || v > value.Hi+slack || d < slope.Lo-slack || d > slope.Hi+slack {
			t.Fatalf("%s at %v: %g in %v, slope %g in %v", law.Format([]string{"x", "y"}, nil), point, v, value, d, slope)
		}
	}
}

// TestRatioBounds: quotients over all amounts are bounded as they truly are.
func TestRatioBounds(t *testing.T) {
	e := newEncloser()
	all := []span{{Lo: 0, Hi: 1e300}, {Lo: 0, Hi: 1e300}}
	for _, c := range []struct {
		net  *model.Network
		want float64 // the supremum of the first law
	}{
		{zoo.Latch(100), 1.02}, {zoo.SymmetricRepression(3, 1), 3}, {zoo.SelfActivator(7, 2, 1, 3, 1), 7},
	} {
		v := e.enclose(c.net.Reactions[0].Law, all)
		if !(v.Hi >= c.want && v.Hi <= c.want*1.01 && v.Lo >= 0) {
			t.Errorf("law in %v, want at most %v", v, c.want)
		}
	}
}
