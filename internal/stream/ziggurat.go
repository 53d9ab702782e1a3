package stream

import "math"

// A Strip is one layer of a ziggurat: 53 random bits j make x = j·Width, which
// lies under the curve for sure where j < Inside.
type Strip struct {
	Inside uint64
	Width  float64
}

// A ziggurat covers a falling density f on x ≥ 0, f(0) = 1, by 256 strips of the
// same area: the lowest reaches to right and has the tail beyond it. Marsaglia
// and Tsang, J. Stat. Softw. 5 (2000) 8. The strip and the place in it are made
// of different bits of a random number, as Doornik (Univ. of Oxford working
// paper, 2005) has it, so that the law is exact to the last of the 53 bits.
type ziggurat struct {
	strips [256]Strip
	edge   [257]float64 // right edges; edge[0] is the area over f(right), edge[256] is 0
	height [257]float64 // f(edge), but 0 at 0: the base has the tail to itself
}

// newZiggurat stacks the strips of a density f with its inverse, from the right
// edge of the lowest strip and the area of a strip.
func newZiggurat(f, inverse func(float64) float64, right, area float64) *ziggurat {
	z := &ziggurat{}
	z.edge[0], z.edge[1], z.height[1] = area/f(right), right, f(right)
	for i := 2; i < 256; i++ {
		z.height[i] = z.height[i-1] + area/z.edge[i-1]
		z.edge[i] = inverse(z.height[i])
	}
	z.height[256] = 1
	for i := range z.strips {
		z.strips[i] = Strip{uint64(z.edge[i+1] / z.edge[i] * 0x1p53), z.edge[i] * 0x1p-53}
	}
	return z
}

// The right edges for 256 strips are those of Marsaglia and Tsang, page 6; the
// areas follow from them: right·f(right) and the tail beyond.
const (
	expRight    = 7.69711747013104972
	normalRight = 3.6541528853610088
)

// The two ziggurats. They are built once and never written again.
var (
	expZiggurat = newZiggurat(
		func(x float64) float64 { return math.Exp(-x) },
		func(y float64) float64 { return -math.Log(y) },
		expRight, (expRight+1)*math.Exp(-expRight))
	normalZiggurat = newZiggurat(
		func(x float64) float64 { return math.Exp(-x * x / 2) },
		func(y float64) float64 { return math.Sqrt(-2 * math.Log(y)) },
		normalRight, normalRight*math.Exp(-normalRight*normalRight/2)+
			math.Sqrt(math.Pi/2)*math.Erfc(normalRight/math.Sqrt2))
)

// ExpStrips gives the strips of Exp, for loops that have its common case in line:
// with b of Uint64, j = b>>11 and the strip at b&255, the number is j·Width where
// j < Inside, and otherwise what ExpEdge makes of b and j·Width. The strips must
// not be changed.
func ExpStrips() *[256]Strip { return &expZiggurat.strips }

// Exp gives an exponential number of mean 1.
func (s *Stream) Exp() float64 {
	b := s.src.Uint64()
	l := &expZiggurat.strips[b&255]
	x := float64(int64(b>>11)) * l.Width
	if b>>11 < l.Inside {
		return x
	}
	return s.ExpEdge(b, x)
}

// ExpEdge decides the one case in fifty that is not inside its strip for
// sure; see ExpStrips. Beyond the right edge an exponential law starts anew.
func (s *Stream) ExpEdge(b uint64, x float64) float64 {
	z, shift := expZiggurat, 0.0
	for {
		i, j := b&255, b>>11
		switch {
		case j < z.strips[i].Inside:
			return shift + x
		case i == 0:
			shift += expRight
		case z.below(int(i), x, z.height[i]+s.Float64()*(z.height[i+1]-z.height[i])):
			return shift + x
		}
		b = s.src.Uint64()
		x = float64(int64(b>>11)) * z.strips[b&255].Width
	}
}

// below tells whether y < e⁻ˣ, for x in strip i ≥ 1 between its edges c < d. There e⁻ˣ
// is convex: it lies between its tangent at c, e⁻ᶜ(1 + c − x), and the chord from c to d.
// These settle 49 in 50 without working it out. The margin is many times what rounding
// amounts to, so that the answer is always that of the last line.
func (z *ziggurat) below(i int, x, y float64) bool {
	const margin = 0x1p-40
	c, d := z.edge[i+1], z.edge[i]
	if y < z.height[i+1]*(1+c-x-margin) {
		return true
	}
	if y > (z.height[i]+(z.height[i+1]-z.height[i])*(d-x)/(d-c))*(1+margin) {
		return false
	}
	return y < math.Exp(-x)
}

// Normal gives a number of the standard normal law.
func (s *Stream) Normal() float64 {
	b := s.src.Uint64()
	l := &normalZiggurat.strips[b&255]
	x := float64(int64(b>>11)) * l.Width
	if b>>11 >= l.Inside {
		x = s.normalEdge(b, x)
	}
	return signed(x, b)
}

// signed gives x the sign of bit 8 of b, which neither the strip nor the place
// in it is made of.
func signed(x float64, b uint64) float64 {
	return math.Float64frombits(math.Float64bits(x) | b>>8<<63)
}

func (s *Stream) normalEdge(b uint64, x float64) float64 {
	z := normalZiggurat
	for {
		i, j := b&255, b>>11
		switch {
		case j < z.strips[i].Inside:
			return x
		case i == 0:
			return s.normalTail()
		case z.belowBell(int(i), x, z.height[i]+s.Float64()*(z.height[i+1]-z.height[i])):
			return x
		}
		b = s.src.Uint64()
		x = float64(int64(b>>11)) * z.strips[b&255].Width
	}
}

// belowBell tells whether y < exp(−x²/2), for x in strip i ≥ 1 between its edges c < d, as
// below does. The curve lies between the tangent at c and the chord, below the tangent
// where it is concave, from 0 to 1, and above it beyond.
func (z *ziggurat) belowBell(i int, x, y float64) bool {
	const margin = 0x1p-40
	c, d := z.edge[i+1], z.edge[i]
	tangent := z.height[i+1] * (1 - c*(x-c))
	chord := z.height[i] + (z.height[i+1]-z.height[i])*(d-x)/(d-c)
	switch {
	case c < 1 && d > 1:
	case y < min(tangent, chord)*(1-margin):
		return true
	case y > max(tangent, chord)*(1+margin):
		return false
	}
	return y < math.Exp(-x*x/2)
}

// normalTail draws from the normal law beyond normalRight. Marsaglia,
// Technometrics 6 (1964) 101.
func (s *Stream) normalTail() float64 {
	for {
		x := s.Exp() / normalRight
		if 2*s.Exp() > x*x {
			return normalRight + x
		}
	}
}
