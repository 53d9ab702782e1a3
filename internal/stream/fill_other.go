//go:build !amd64

package stream

func fill(dst *Batch, high, low uint64) (edges uint64) {
	return fillPlain(dst, &expZiggurat.strips, &oneAndTwo, high, low)
}

func fillNormals(dst []float64, high, low uint64) (edges uint64) {
	return normalsPlain(dst, &normalZiggurat.strips, &oneAndTwo, high, low)
}
