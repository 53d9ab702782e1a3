package lattice

import (
	"sync"
	"unsafe"
)

// Sizes of the blocks that a product is cut into: a panel of b of depth × wide
// numbers stays in the second-level cache, one of depth × 8 in the first.
const (
	panelRows    = 6
	panelColumns = 8
	blockRows    = 96
	blockDepth   = 192
	blockWide    = 256
)

// team is the set of workers that share one large product; workers[0] does the
// small ones.
type team []*worker

// multiplyAdd sets c += a·b. The parts that the work is cut into, and so every
// rounding, do not depend on the number of workers.
func (t team) multiplyAdd(c, a, b matrix) {
	const worthSharing = 4 << 20 // multiplications
	if len(t) == 1 || c.rows*c.columns*a.columns < worthSharing {
		for j := 0; j < c.columns; j += blockWide {
			t[0].stripe(c, a, b, j)
		}
		return
	}
	stripes := make(chan int, c.columns/panelColumns+1)
	for j := 0; j < c.columns; j += blockWide {
		stripes <- j
	}
	close(stripes)
	var wait sync.WaitGroup
	for _, w := range t {
		wait.Go(func() {
			for j := range stripes {
				w.stripe(c, a, b, j)
			}
		})
	}
	wait.Wait()
}

// stripe does columns j to j+blockWide of c += a·b.
func (w *worker) stripe(c, a, b matrix, j int) {
	j1 := min(j+blockWide, c.columns)
	for k := 0; k < a.columns; k += blockDepth {
		k1 := min(k+blockDepth, a.columns)
		w.packColumns(b.part(k, k1, j, j1))
		for i := 0; i < c.rows; i += blockRows {
			i1 := min(i+blockRows, c.rows)
			w.packRows(a.part(i, i1, k, k1))
			w.block(c.part(i, i1, j, j1), k1-k)
		}
	}
}

// packColumns copies b eight columns at a time, each panel row by row, filled up
// with zeros.
func (w *worker) packColumns(b matrix) {
	at := 0
	for j := 0; j < b.columns; j += panelColumns {
		n := min(panelColumns, b.columns-j)
		for k := range b.rows {
			dst := w.b[at : at+panelColumns]
			copy(dst, b.data[k*b.stride+j:k*b.stride+j+n])
			clear(dst[n:])
			at += panelColumns
		}
	}
}

// packRows copies a six rows at a time, each panel column by column, filled up
// with zeros.
func (w *worker) packRows(a matrix) {
	at := 0
	for i := 0; i < a.rows; i += panelRows {
		n := min(panelRows, a.rows-i)
		for r := range panelRows {
			dst := w.a[at+r : at+panelRows*a.columns]
			if r >= n {
				for k := 0; k < len(dst); k += panelRows {
					dst[k] = 0
				}
				continue
			}
			for k, v := range a.row(i + r) {
				dst[k*panelRows] = v
			}
		}
		at += panelRows * a.columns
	}
}

// block adds the product of the packed panels, depth deep, to c.
func (w *worker) block(c matrix, depth int) {
	whole := c.rows / panelRows
	for j := 0; j < c.columns; j += panelColumns {
		b := &w.b[j*depth]
		if c.columns-j < panelColumns {
			w.rim(c.part(0, c.rows, j, c.columns), depth, 0, b)
			continue
		}
		if whole > 0 {
			w.kernel(whole, depth, &w.a[0], b, &c.data[j], c.stride)
		}
		if whole*panelRows < c.rows {
			w.rim(c.part(whole*panelRows, c.rows, j, j+panelColumns), depth, whole, b)
		}
	}
}

// rim does a part of c that does not fill whole panels, from the packed panel
// of rows number first on.
func (w *worker) rim(c matrix, depth, first int, b *float64) {
	blocks := (c.rows + panelRows - 1) / panelRows
	edge := w.edge[:blocks*panelRows*panelColumns]
	clear(edge)
	w.kernel(blocks, depth, &w.a[first*panelRows*depth], b, &edge[0], panelColumns)
	for i := range c.rows {
		row := c.row(i)
		for j := range row {
			row[j] += edge[i*panelColumns+j]
		}
	}
}

func (w *worker) kernel(blocks, depth int, a, b, c *float64, stride int) {
	if w.fast {
		panel(blocks, depth, a, b, c, stride)
		return
	}
	plainPanel(blocks, depth, a, b, c, stride)
}

// plainPanel is panel in plain Go, for processors without vector units.
func plainPanel(blocks, k int, a, b, c *float64, ldc int) {
	left := unsafe.Slice(a, blocks*panelRows*k)
	right := unsafe.Slice(b, panelColumns*k)
	out := unsafe.Slice(c, (blocks*panelRows-1)*ldc+panelColumns)
	for i := range blocks * panelRows {
		rows := left[i/panelRows*panelRows*k+i%panelRows:]
		half(rows, right, out[i*ldc:i*ldc+4], k)
		half(rows, right[4:], out[i*ldc+4:i*ldc+8], k)
	}
}

// half adds one row times four columns of a packed panel to out.
func half(row, columns, out []float64, k int) {
	var s0, s1, s2, s3 float64
	for l := range k {
		x := row[l*panelRows]
		b := columns[l*panelColumns : l*panelColumns+4 : l*panelColumns+4]
		s0 += x * b[0]
		s1 += x * b[1]
		s2 += x * b[2]
		s3 += x * b[3]
	}
	out[0] += s0
	out[1] += s1
	out[2] += s2
	out[3] += s3
}
