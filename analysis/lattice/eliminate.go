package lattice

import "context"

// block is how many pivots are eliminated at a time before their effect on the
// rest is added by one matrix product.
const block = 48

// A system is the dense part of a front: rates among p pivots, from pivots to b
// border nodes, and back, with the rates of leaving the box.
//
// After eliminate, diagonal holds L below, U above and the total rates D on the
// diagonal, right holds the border's part of U and below that of L, where
// (I−L)(D−U) is the negative generator.
type system struct {
	diagonal, right, below matrix
	exit                   []float64 // pivots, then border
}

// eliminate removes the pivots without a subtraction: the total rate out of a
// state, by which a row is divided, is summed from the rates that are left
// instead of being carried on the diagonal (Grassmann, Taksar, Heyman, Oper. Res.
// 33 (1985) 1107), so every number is a sum of products of non-negative numbers
// and keeps its relative accuracy however rare a transition is (O'Cinneide,
// Numer. Math. 65 (1993) 109). Blocks of pivots are eliminated with all other
// columns lumped into one; the rest follows by products with the inverses of the
// two triangles, which are non-negative too. It stops between blocks when ctx is
// done.
func (s system) eliminate(ctx context.Context, t team) {
	p := s.diagonal.rows
	for k := 0; k < p && ctx.Err() == nil; k += block {
		e := panelElimination{s, t, k, min(k+block, p), t[0].triangles}
		e.run()
	}
}

// panelElimination eliminates pivots low to high of a system.
type panelElimination struct {
	system
	team
	low, high int
	*triangles
}

// triangles is scratch memory for one panel.
type triangles struct {
	lump  [block]float64
	lower [block * block]float64 // (I−L)⁻¹
	upper [block * block]float64 // (D−U)⁻¹
}

func (e *panelElimination) run() {
	p, b, n := e.diagonal.rows, e.right.columns, e.high-e.low
	own := e.diagonal.part(e.low, e.high, e.low, e.high)
	e.sumRest()
	e.pivots(own)
	if e.high == p && b == 0 {
		return
	}
	e.invert(own)
	lower, upper := dense(n, n, e.lower[:n*n]), dense(n, n, e.upper[:n*n])
	across, aside := e.diagonal.part(e.low, e.high, e.high, p), e.right.part(e.low, e.high, 0, b)
	down, under := e.diagonal.part(e.high, p, e.low, e.high), e.below.part(0, b, e.low, e.high)
	e.fromLeft(across, lower)
	e.fromLeft(aside, lower)
	e.fromRight(down, upper)
	e.fromRight(under, upper)
	e.passExits(down, e.exit[e.high:p])
	e.passExits(under, e.exit[p:])
	e.multiplyAdd(e.diagonal.part(e.high, p, e.high, p), down, across)
	e.multiplyAdd(e.right.part(e.high, p, 0, b), down, aside)
	e.multiplyAdd(e.below.part(0, b, e.high, p), under, across)
}

// sumRest lumps, for each pivot, the rates to everything later than the panel.
func (e *panelElimination) sumRest() {
	p, w := e.diagonal.rows, e.team[0]
	lump := e.lump[:e.high-e.low]
	copy(lump, e.exit[e.low:e.high])
	w.addRight(lump, e.diagonal.part(e.low, e.high, e.high, p), w.ones(p))
	w.addRight(lump, e.right.part(e.low, e.high, 0, e.right.columns), w.ones(e.right.columns))
}

// pivots eliminates within the panel.
func (e *panelElimination) pivots(a matrix) {
	for k := range a.rows {
		row := a.row(k)
		total := e.lump[k]
		for _, v := range row[k+1:] {
			total += v
		}
		row[k] = total
		for i := k + 1; i < a.rows; i++ {
			other := a.row(i)
			if other[k] == 0 {
				continue
			}
			l := other[k] / total
			other[k] = l
			for j := k + 1; j < len(row); j++ {
				other[j] += l * row[j]
			}
			e.lump[i] += l * e.lump[k]
			e.exit[e.low+i] += l * e.exit[e.low+k]
		}
	}
}

// invert fills lower and upper, row by row.
func (e *panelElimination) invert(a matrix) {
	n := a.rows
	clear(e.lower[:n*n])
	clear(e.upper[:n*n])
	for i := range n {
		row := e.lower[i*n : i*n+n]
		for j, l := range a.row(i)[:i] {
			addMultiple(row[:j+1], l, e.lower[j*n:j*n+j+1])
		}
		row[i] = 1
	}
	for i := n - 1; i >= 0; i-- {
		row := e.upper[i*n : i*n+n]
		row[i] = 1
		for j := i + 1; j < n; j++ {
			addMultiple(row[j:], a.row(i)[j], e.upper[j*n+j:j*n+n])
		}
		for j := i; j < n; j++ {
			row[j] /= a.row(i)[i]
		}
	}
}

// fromLeft sets m = lower·m.
func (e *panelElimination) fromLeft(m, lower matrix) {
	if m.columns > 0 {
		old := e.copyOut(m)
		e.multiplyAdd(m, lower, old)
	}
}

// fromRight sets m = m·upper.
func (e *panelElimination) fromRight(m, upper matrix) {
	if m.rows > 0 {
		old := e.copyOut(m)
		e.multiplyAdd(m, old, upper)
	}
}

// copyOut moves m's entries to scratch memory and leaves zeros.
func (e *panelElimination) copyOut(m matrix) matrix {
	w := e.team[0]
	if n := m.rows * m.columns; len(w.temp) < n {
		w.temp = make([]float64, n+n/2)
	}
	out := dense(m.rows, m.columns, w.temp[:m.rows*m.columns])
	for i := range m.rows {
		copy(out.row(i), m.row(i))
		clear(m.row(i))
	}
	return out
}

// passExits adds to the exits of later rows what they inherit from the panel's.
func (e *panelElimination) passExits(l matrix, exit []float64) {
	e.team[0].addRight(exit, l, e.exit[e.low:e.high])
}
