package stream

import (
	"fmt"
	"math"
	"math/bits"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/gonum/stat/distuv"
)

// alarm is the chance that a statistical test here fails although all is right.
const alarm = 1e-6

// within fails the test where an observed χ² lies beyond the alarm's quantile on
// either side.
func within(t *testing.T, what string, chi2, freedom float64) {
	t.Helper()
	law := distuv.ChiSquared{K: freedom}
	if p := min(law.Survival(chi2), law.CDF(chi2)); p < alarm/2 {
		t.Errorf("%s: χ² = %.1f at %v degrees of freedom, p = %.2g", what, chi2, freedom, p)
	}
}

// The numbers that this package gave when it was first written: a seed must mean
// the same runs in every later version.
func TestFrozen(t *testing.T) {
	var got strings.Builder
	for _, k := range [][3]uint64{{0, 0, 0}, {1, 2, 3}, {1, 0, 1<<40 | 7}} {
		s := New(k[0], k[1], k[2])
		got.WriteString(fmt.Sprintf("%016x %016x %.16g %.16g %.16g\n", s.Uint64(), s.Uint64(), s.Float64(), s.Exp(), s.Normal()))
	}
	if got.String() != frozen {
		t.Errorf("the streams have changed:\n%s", got.String())
	}
}

func TestFillIsRepeatedUint64(t *testing.T) {
	a, b := New(1, 2, 3), New(1, 2, 3)
	for _, n := range []int{0, 1, 7, 64, 1000} {
		dst := make([]uint64, n)
		a.Fill(dst)
		for i, x := range dst {
			if y := b.Uint64(); x != y {
				t.Fatalf("Fill(%d)[%d] = %x, Uint64 = %x", n, i, x, y)
			}
		}
	}
}

func TestSaveRestore(t *testing.T) {
	a := New(9, 8, 7)
	for range 1001 {
		a.Exp()
	}
	saved, err := a.MarshalBinary()
	if err != nil || len(saved) != 16 {
		t.Fatalf("MarshalBinary: %d bytes, %v", len(saved), err)
	}
	var b Stream
	if err := b.UnmarshalBinary(saved); err != nil {
		t.Fatal(err)
	}
	for i := range 1000 {
		if x, y := a.Normal(), b.Normal(); x != y {
			t.Fatalf("number %d after restoring: %v, undisturbed %v", i, y, x)
		}
	}
	if err := b.UnmarshalBinary(saved[:15]); err == nil {
		t.Error("15 bytes were accepted")
	}
}

// keys are triples that a weak derivation confuses: a cube of small integers, all
// single bits in all places, replicates with a state's index above bit 40, and
// the same with the bytes or bits of a number swapped.
func keys() [][3]uint64 {
	var out [][3]uint64
	for i := range uint64(40) {
		for j := range uint64(40) {
			for k := range uint64(40) {
				out = append(out, [3]uint64{i, j, k})
			}
		}
	}
	for i := range 64 {
		for j := range 64 {
			a, b := uint64(1)<<i, uint64(1)<<j
			out = append(out, [3]uint64{a, b, 77}, [3]uint64{77, a, b}, [3]uint64{b, 77, a})
		}
	}
	for i := range uint64(2000) {
		out = append(out, [3]uint64{1, 0, 3<<40 | i}, [3]uint64{1 << 33, 0, i<<40 | 3},
			[3]uint64{bits.Reverse64(i), 1 << 50, 5}, [3]uint64{bits.ReverseBytes64(i), 1 << 50, 5}, [3]uint64{^i, ^i, ^i})
	}
	return out
}

func TestNoCollisions(t *testing.T) {
	unique := map[[3]uint64]bool{}
	states, firsts := map[[16]byte][3]uint64{}, map[uint64][3]uint64{}
	for _, k := range keys() {
		if unique[k] {
			continue
		}
		unique[k] = true
		s := New(k[0], k[1], k[2])
		data, _ := s.MarshalBinary()
		state, first := [16]byte(data), s.Uint64()
		if other, twice := states[state]; twice {
			t.Fatalf("%v and %v share a state", k, other)
		}
		// 93 thousand first numbers of 64 bits agree somewhere with chance 2.3e-10.
		if other, twice := firsts[first]; twice {
			t.Fatalf("%v and %v share the first number", k, other)
		}
		states[state], firsts[first] = k, k
	}
	if len(unique) < 80_000 {
		t.Fatalf("only %d triples were tried", len(unique))
	}
}

// neighbours are pairs of triples that differ in one place by one, by one bit, or
// by a swap.
func neighbours() (pairs [][2][3]uint64) {
	for i := range uint64(60) {
		pairs = append(pairs,
			[2][3]uint64{{1, 0, i}, {1, 0, i + 1}},
			[2][3]uint64{{1, i, 0}, {1, i + 1, 0}},
			[2][3]uint64{{i, 0, 0}, {i + 1, 0, 0}},
			[2][3]uint64{{7, 7, 0}, {7, 7, 1 << i}},
			[2][3]uint64{{i, 100, 5}, {100, i, 5}},
			[2][3]uint64{{5, i, 100}, {5, 100, i}})
	}
	return pairs
}

// Correlation between neighbouring streams at lags −1, 0 and 1: over n = 4000
// numbers Σ(u−½)(v−½)·12/√n is standard normal to 1 part in n, so its squares
// summed over the 360 pairs are χ² at 360 degrees of freedom. Bits that agree
// number 64 n/2 with variance 64 n/4.
func TestNeighboursAreUncorrelated(t *testing.T) {
	const n = 4000
	var chi2 [3]float64
	agree := 0.0
	pairs := neighbours()
	for _, p := range pairs {
		a, b := New(p[0][0], p[0][1], p[0][2]), New(p[1][0], p[1][1], p[1][2])
		var x, y [n + 1]uint64
		a.Fill(x[:])
		b.Fill(y[:])
		for lag, z := range [3]float64{correlation(x[:n], y[:n]), correlation(x[1:], y[:n]), correlation(x[:n], y[1:])} {
			chi2[lag] += z * z
		}
		agree += agreement(x[:n], y[:n])
	}
	for lag, c := range chi2 {
		within(t, fmt.Sprintf("correlation, lag case %d", lag), c, float64(len(pairs)))
	}
	within(t, "agreeing bits", agree, float64(len(pairs)))
}

func correlation(x, y []uint64) float64 {
	sum := 0.0
	for i := range x {
		sum += (float64(x[i])*0x1p-64 - 0.5) * (float64(y[i])*0x1p-64 - 0.5)
	}
	return 12 * sum / math.Sqrt(float64(len(x)))
}

func agreement(x, y []uint64) float64 {
	same := 0
	for i := range x {
		same += bits.OnesCount64(^(x[i] ^ y[i]))
	}
	all := 64 * float64(len(x))
	return (float64(same) - all/2) * (float64(same) - all/2) / (all / 4)
}

// The first numbers of many streams, as one sequence, are uniform: χ² of 1000
// cells over 100,000 streams, and the serial correlation of the sequence.
func TestFirstNumbersAreUniform(t *testing.T) {
	const n, cells = 100_000, 1000
	var count [cells]int
	var first [n + 1]uint64
	for i := range first {
		s := New(1, 0, uint64(i))
		first[i] = s.Uint64()
		if i < n {
			count[int(float64(first[i]>>11)*0x1p-53*cells)]++
		}
	}
	within(t, "first numbers", cellChi2(count[:], n), cells-1)
	z := correlation(first[:n], first[1:])
	within(t, "serial correlation of first numbers", z*z, 1)
}

// cellChi2 is χ² of counts in cells of the same chance.
func cellChi2(count []int, n int) (chi2 float64) {
	want := float64(n) / float64(len(count))
	for _, c := range count {
		chi2 += (float64(c) - want) * (float64(c) - want) / want
	}
	return chi2
}

// A law's own distribution function turns its numbers into uniform ones: χ² of
// 500 cells over n numbers.
func lawTest(t *testing.T, what string, x []float64, cdf func(float64) float64) {
	t.Helper()
	var count [500]int
	for _, v := range x {
		count[min(int(cdf(v)*500), 499)]++
	}
	within(t, what, cellChi2(count[:], len(x)), 499)
}

func TestFloat64(t *testing.T) {
	s, x := New(3, 0, 0), make([]float64, 1_000_000)
	for i := range x {
		if x[i] = s.Float64(); x[i] <= 0 || x[i] >= 1 {
			t.Fatalf("Float64 = %v", x[i])
		}
	}
	lawTest(t, "uniform", x, func(v float64) float64 { return v })
}

func TestExp(t *testing.T) {
	s, x := New(5, 0, 0), make([]float64, 4_000_000)
	var tail []float64
	for i := range x {
		if x[i] = s.Exp(); x[i] > expRight {
			tail = append(tail, x[i]-expRight)
		}
	}
	lawTest(t, "exponential", x, func(v float64) float64 { return -math.Expm1(-v) })
	tailTest(t, tail, float64(len(x))*math.Exp(-expRight), func(v float64) float64 { return -math.Expm1(-v) })
}

// tailTest holds the number of values beyond the lowest strip against the
// Poisson law of its mean (z² of about 1800), and their law against cdf by χ² of 50 cells.
func tailTest(t *testing.T, tail []float64, mean float64, cdf func(float64) float64) {
	t.Helper()
	z := (float64(len(tail)) - mean) / math.Sqrt(mean)
	within(t, "values in the tail", z*z, 1)
	var count [50]int
	for _, v := range tail {
		count[min(int(cdf(v)*50), 49)]++
	}
	within(t, "law of the tail", cellChi2(count[:], len(tail)), 49)
}

func TestNormal(t *testing.T) {
	s, x := New(6, 0, 0), make([]float64, 8_000_000)
	var tail []float64
	s.FillNormal(x)
	beyond := math.Erfc(normalRight / math.Sqrt2)
	for _, v := range x {
		if math.Abs(v) > normalRight {
			tail = append(tail, math.Abs(v))
		}
	}
	law := distuv.UnitNormal
	lawTest(t, "normal", x, law.CDF)
	tailTest(t, tail, float64(len(x))*beyond, func(v float64) float64 { return 1 - math.Erfc(v/math.Sqrt2)/beyond })
}

// The strips of both ziggurats have the area they were built with and end at the
// top of the density, to rounding over 256 steps.
func TestZigguratsClose(t *testing.T) {
	for name, z := range map[string]*ziggurat{"exp": expZiggurat, "normal": normalZiggurat} {
		area := z.edge[0] * z.height[1]
		if top := z.height[255] + area/z.edge[255]; math.Abs(top-1) > 1e-12 {
			t.Errorf("%s: the topmost strip ends at %v", name, top)
		}
		if !slices.IsSortedFunc(z.edge[:], func(a, b float64) int { return int(math.Copysign(1, b-a)) }) {
			t.Errorf("%s: edges do not fall", name)
		}
	}
}

// The bounds of a law in a strip never say other than the law itself, at random and hard
// by it: within a few parts in 10⁹ to 10¹⁶.
func TestBelow(t *testing.T) {
	for name, law := range map[string]struct {
		z     *ziggurat
		below func(i int, x, y float64) bool
		f     func(x float64) float64
	}{
		"exp":    {expZiggurat, expZiggurat.below, func(x float64) float64 { return math.Exp(-x) }},
		"normal": {normalZiggurat, normalZiggurat.belowBell, func(x float64) float64 { return math.Exp(-x * x / 2) }},
	} {
		s, near := New(12, 0, 0), 0
		for n := range 2_000_000 {
			i := 1 + int(s.Uint64()%255)
			x := law.z.edge[i+1] + s.Float64()*(law.z.edge[i]-law.z.edge[i+1])
			y := law.z.height[i] + s.Float64()*(law.z.height[i+1]-law.z.height[i])
			if n%2 == 0 {
				y = law.f(x) * (1 + s.Normal()*math.Pow(10, -9-7*s.Float64()))
			}
			if y == law.f(x) {
				near++
			}
			if law.below(i, x, y) != (y < law.f(x)) {
				t.Fatalf("%s, strip %d, x = %v: y = %v is below: %v, the law is %v", name, i, x, y, law.below(i, x, y), law.f(x))
			}
		}
		if near == 0 {
			t.Errorf("%s: no y was as near as can be", name)
		}
	}
}

func BenchmarkExp(b *testing.B) {
	s, sum := New(1, 2, 3), 0.0
	for b.Loop() {
		sum += s.Exp()
	}
}

func BenchmarkNormal(b *testing.B) {
	s, dst := New(1, 2, 3), make([]float64, 1024)
	for b.Loop() {
		s.FillNormal(dst)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/1024, "ns/number")
}

func BenchmarkFill(b *testing.B) {
	s, dst := New(1, 2, 3), make([]uint64, 1024)
	for b.Loop() {
		s.Fill(dst)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/1024, "ns/number")
}
