package lattice

// matrix is a row-major view of rows × columns numbers whose rows lie stride
// apart.
type matrix struct {
	rows, columns, stride int
	data                  []float64
}

func dense(rows, columns int, data []float64) matrix {
	return matrix{rows, columns, columns, data}
}

func (m matrix) row(i int) []float64 {
	return m.data[i*m.stride : i*m.stride+m.columns]
}

// part gives rows r0 to r1 and columns c0 to c1 of m.
func (m matrix) part(r0, r1, c0, c1 int) matrix {
	if r0 >= r1 || c0 >= c1 {
		return matrix{rows: max(r1-r0, 0), columns: max(c1-c0, 0), stride: m.stride}
	}
	end := (r1-1)*m.stride + c1
	return matrix{r1 - r0, c1 - c0, m.stride, m.data[r0*m.stride+c0 : end]}
}
