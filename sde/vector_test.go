package sde

import (
	"math"
	"slices"
	"testing"

	"holdfast/internal/stream"
)

// odd are numbers that arithmetic treats in its own ways.
var odd = []float64{
	0, math.Copysign(0, -1), 1, -1, 0x1p-1074, -0x1p-1030, 0x1p-1022, math.MaxFloat64, -math.MaxFloat64, math.Inf(1), math.Inf(-1), math.NaN(), 1e-300, 3,
}

// arguments gives registers of n lanes with odd and with random numbers.
func arguments(s *stream.Stream, n int) [4][]float64 {
	var out [4][]float64
	for r := range out {
		for range n {
			v := s.Normal() * math.Exp(5*s.Normal())
			if k := s.Uint64() % 40; k < uint64(len(odd)) {
				v = odd[k]
			}
			out[r] = append(out[r], v)
		}
	}
	return out
}

// same tells whether two numbers have the same bits, or are none both.
func same(a, b float64) bool {
	return math.Float64bits(a) == math.Float64bits(b) || math.IsNaN(a) && math.IsNaN(b)
}

// The loops by fours give the bits of the plain ones, and the same verdicts, at any number of
// lanes. (On machines without a form by fours the two are the same.)
func TestLoopsByFours(t *testing.T) {
	s := stream.New(1, 2, 3)
	for trial := range 3000 {
		a := arguments(&s, 4*(1+trial%9))
		h, limit := math.Abs(s.Normal()), math.Exp(3*s.Normal())
		for name, f := range map[string][2]func(to []float64) bool{
			"add":     {done(func(to []float64) { addLanes(to, a[0], a[1]) }), done(func(to []float64) { addPlain(to, a[0], a[1]) })},
			"sub":     {done(func(to []float64) { subLanes(to, a[0], a[1]) }), done(func(to []float64) { subPlain(to, a[0], a[1]) })},
			"mul":     {done(func(to []float64) { mulLanes(to, a[0], a[1]) }), done(func(to []float64) { mulPlain(to, a[0], a[1]) })},
			"div":     {done(func(to []float64) { divLanes(to, a[0], a[1]) }), done(func(to []float64) { divPlain(to, a[0], a[1]) })},
			"sqrt":    {done(func(to []float64) { sqrtLanes(to, a[0]) }), done(func(to []float64) { sqrtPlain(to, a[0]) })},
			"guard":   {done(func(to []float64) { guardLanes(to, a[0]) }), done(func(to []float64) { guardPlain(to, a[0]) })},
			"cut":     {done(func(to []float64) { cutLanes(to, a[0]) }), done(func(to []float64) { cutPlain(to, a[0]) })},
			"noise":   {done(func(to []float64) { noiseLanes(to, a[0], a[1], a[2], h) }), done(func(to []float64) { noisePlain(to, a[0], a[1], a[2], h) })},
			"pair":    {done(func(to []float64) { pairLanes(to, a[0], a[1], a[2], h) }), done(func(to []float64) { pairPlain(to, a[0], a[1], a[2], h) })},
			"move":    {done(func(to []float64) { moveLanes(to, a[0], h) }), done(func(to []float64) { movePlain(to, a[0], h) })},
			"reflect": {func(to []float64) bool { return reflectLanes(to, a[0], -h, limit) }, func(to []float64) bool { return reflectPlain(to, a[0], -h, limit) }},
			"within":  {func(to []float64) bool { return withinLanes(to, h, limit) }, func(to []float64) bool { return withinPlain(to, h, limit) }},
		} {
			x, y := append([]float64(nil), a[3]...), append([]float64(nil), a[3]...)
			if f[0](x) != f[1](y) {
				t.Fatalf("%s: the two verdicts on %v differ", name, a)
			}
			for i := range x {
				if !same(x[i], y[i]) {
					t.Fatalf("%s, lane %d: %v and %v of %v", name, i, x[i], y[i], a)
				}
			}
		}
	}
}

// Rows become columns, by fours or not, and nothing beside them is touched.
func TestColumns(t *testing.T) {
	const room, lane = 12, 4
	for n := 1; n < 70; n++ {
		from, got, want := make([]float64, 4*n), make([]float64, room*n), make([]float64, room*n)
		for i := range from {
			from[i] = float64(1 + i)
			want[i%n*room+lane+i/n] = from[i]
		}
		columns(got[lane:], room, from)
		if !slices.Equal(got, want) {
			t.Fatalf("%d numbers a row: %v, want %v", n, got, want)
		}
	}
}

func done(f func(to []float64)) func(to []float64) bool {
	return func(to []float64) bool { f(to); return false }
}

// Reactions with parallel changes share a direction, whatever their sign and size; a
// burst adds its own.
func TestRatio(t *testing.T) {
	for _, c := range []struct {
		v, w []float64
		want float64
	}{
		{[]float64{-2, 1}, []float64{2, -1}, -1},
		{[]float64{0, 6}, []float64{0, 2}, 3},
		{[]float64{1, 1}, []float64{1, -1}, 0},
		{[]float64{0, 1}, []float64{1, 0}, 0},
		{[]float64{1, 2}, []float64{0, 2}, 0},
	} {
		if got := ratio(c.v, c.w); got != c.want {
			t.Errorf("ratio of %v to %v is %v, want %v", c.v, c.w, got, c.want)
		}
	}
}
