package lattice

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/blas"
	"gonum.org/v1/gonum/blas/blas64"
)

func randomMatrix(r *rand.Rand, rows, columns int) matrix {
	m := dense(rows, columns, make([]float64, rows*columns))
	for i := range m.data {
		m.data[i] = r.Float64()
	}
	return m
}

func general(m matrix) blas64.General {
	return blas64.General{Rows: m.rows, Cols: m.columns, Stride: m.stride, Data: m.data}
}

// Against gonum's general product. Every entry is a sum of k products of
// non-negative numbers, so the two differ by no more than 2(k+1) roundings.
func TestMultiplyAgainstGonum(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for _, size := range [][3]int{{1, 1, 1}, {6, 8, 4}, {7, 9, 3}, {13, 300, 40}, {200, 17, 201}, {97, 257, 193}, {310, 530, 65}} {
		a, b, c := randomMatrix(r, size[0], size[2]), randomMatrix(r, size[2], size[1]), randomMatrix(r, size[0], size[1])
		want := dense(c.rows, c.columns, append([]float64(nil), c.data...))
		blas64.Gemm(blas.NoTrans, blas.NoTrans, 1, general(a), general(b), 1, general(want))
		plain := dense(c.rows, c.columns, append([]float64(nil), c.data...))
		team{newWorker(), newWorker()}.multiplyAdd(c, a, b)
		slow := newWorker()
		slow.fast = false
		team{slow}.multiplyAdd(plain, a, b)
		tolerance := 2 * float64(size[2]+1) * 0x1p-52
		for i, v := range want.data {
			if math.Abs(c.data[i]-v) > tolerance*v || math.Abs(plain.data[i]-v) > tolerance*v {
				t.Fatalf("%v: entry %d is %v and %v, want %v", size, i, c.data[i], plain.data[i], v)
			}
		}
	}
}

// Products with vectors, against the plain loops.
func TestVectorSums(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	fast, slow := newWorker(), newWorker()
	slow.fast = false
	for rows := range 12 {
		for columns := range 14 {
			m := randomMatrix(r, rows, columns+3).part(0, rows, 1, columns+1)
			x, y := randomMatrix(r, 1, columns).data, randomMatrix(r, 1, rows).data
			right, left := randomMatrix(r, 1, rows).data, randomMatrix(r, 1, columns).data
			right2, left2 := slices.Clone(right), slices.Clone(left)
			fast.addRight(right, m, x)
			slow.addRight(right2, m, x)
			fast.addLeft(left, y, m)
			slow.addLeft(left2, y, m)
			for i, v := range slices.Concat(right2, left2) {
				if got := slices.Concat(right, left)[i]; math.Abs(got-v) > 32*0x1p-52*v {
					t.Fatalf("%d × %d: entry %d is %v, want %v", rows, columns, i, got, v)
				}
			}
		}
	}
}

func BenchmarkMultiply(b *testing.B) {
	r := rand.New(rand.NewPCG(1, 2))
	for _, n := range []int{32, 64, 256, 1024} {
		a, c, d := randomMatrix(r, n, n), randomMatrix(r, n, n), randomMatrix(r, n, n)
		slow := newWorker()
		slow.fast = false
		run := func(name string, f func()) {
			b.Run(name, func(b *testing.B) {
				for b.Loop() {
					f()
				}
				b.ReportMetric(2*float64(n*n*n)*float64(b.N)/1e9/b.Elapsed().Seconds(), "Gflop/s")
			})
		}
		size := map[int]string{32: "32", 64: "64", 256: "256", 1024: "1024"}[n]
		one, two := team{newWorker()}, team{newWorker(), newWorker()}
		run(size+"/vector", func() { one.multiplyAdd(d, a, c) })
		run(size+"/vector-two", func() { two.multiplyAdd(d, a, c) })
		run(size+"/plain", func() { team{slow}.multiplyAdd(d, a, c) })
		run(size+"/gonum", func() { blas64.Gemm(blas.NoTrans, blas.NoTrans, 1, general(a), general(c), 1, general(d)) })
	}
}
