package deterministic

import "math"

// lu is the factors of a small dense square matrix by Gaussian elimination with
// partial pivoting on rows scaled to the same size, so that rates many orders
// of magnitude apart do not mislead the pivots. It is scratch: one a goroutine.
type lu struct {
	n     int
	a     []float64
	scale []float64
	pivot []int
	work  []float64
	sign  float64 // of the determinant; 0 where singular
}

func newLU(n int) *lu {
	return &lu{
		n: n, a: make([]float64, n*n), scale: make([]float64, n),
		pivot: make([]int, n), work: make([]float64, n),
	}
}

// factor eliminates what a holds; false where it is singular or not finite.
func (f *lu) factor() bool {
	f.sign = 1
	if !f.equilibrate() {
		f.sign = 0
		return false
	}
	n, a := f.n, f.a
	for k := range n {
		p := k
		for i := k + 1; i < n; i++ {
			if abs(a[i*n+k]) > abs(a[p*n+k]) {
				p = i
			}
		}
		if a[p*n+k] == 0 {
			f.sign = 0
			return false
		}
		f.swap(k, p)
		f.eliminate(k)
	}
	return true
}

// equilibrate divides each row by its largest magnitude.
func (f *lu) equilibrate() bool {
	n := f.n
	for i := range n {
		f.pivot[i] = i
		row := f.a[i*n : (i+1)*n]
		largest := 0.0
		for _, v := range row {
			if !(abs(v) <= math.MaxFloat64) {
				return false
			}
			largest = max(largest, abs(v))
		}
		if largest == 0 {
			return false
		}
		f.scale[i] = 1 / largest
		for j := range row {
			row[j] *= f.scale[i]
		}
	}
	return true
}

func (f *lu) swap(k, p int) {
	if k == p {
		return
	}
	n := f.n
	for j := range n {
		f.a[k*n+j], f.a[p*n+j] = f.a[p*n+j], f.a[k*n+j]
	}
	f.pivot[k], f.pivot[p] = f.pivot[p], f.pivot[k]
	f.sign = -f.sign
}

func (f *lu) eliminate(k int) {
	n, a := f.n, f.a
	d := a[k*n+k]
	if d < 0 {
		f.sign = -f.sign
	}
	for i := k + 1; i < n; i++ {
		if a[i*n+k] == 0 {
			continue
		}
		m := a[i*n+k] / d
		a[i*n+k] = m
		for j := k + 1; j < n; j++ {
			a[i*n+j] -= m * a[k*n+j]
		}
	}
}

// solve overwrites b with the solution of A z = b.
func (f *lu) solve(b []float64) {
	n, a, w := f.n, f.a, f.work
	for i := range n {
		p := f.pivot[i]
		sum := b[p] * f.scale[p]
		for j := range i {
			sum -= a[i*n+j] * w[j]
		}
		w[i] = sum
	}
	for i := n - 1; i >= 0; i-- {
		sum := w[i]
		for j := i + 1; j < n; j++ {
			sum -= a[i*n+j] * w[j]
		}
		w[i] = sum / a[i*n+i]
	}
	copy(b, w)
}

// determinant gives the sign of A's determinant and the logarithm of its
// magnitude.
func (f *lu) determinant() (sign, size float64) {
	for k := range f.n {
		size += math.Log(abs(f.a[k*f.n+k])) - math.Log(f.scale[k])
	}
	return f.sign, size
}

// inverse gives A⁻¹ in row-major order.
func (f *lu) inverse() []float64 {
	n := f.n
	out, column := make([]float64, n*n), make([]float64, n)
	for j := range n {
		clear(column)
		column[j] = 1
		f.solve(column)
		for i := range n {
			out[i*n+j] = column[i]
		}
	}
	return out
}
