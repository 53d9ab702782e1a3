package deterministic

import "math"

// program is a linear program: maximise c·v over A v = b, v ≥ 0, solved by the
// two-phase simplex method on a dense tableau with Bland's rule, which cannot
// cycle (Bland, Math. Oper. Res. 2 (1977) 103).
type program struct {
	rows, columns int
	tableau       []float64 // rows × (columns + rows + 1): A, artificial variables, b
	basis         []int
}

// pivotSize is the smallest entry, of rows scaled to largest entry 1, that is
// told from 0.
const pivotSize = 1e-11

// newProgram takes A, row by row, and b, scales each row to a largest entry of
// 1, and finds a feasible v; false where there is none.
func newProgram(a [][]float64, b []float64) (*program, bool) {
	p := &program{rows: len(a)}
	if len(a) > 0 {
		p.columns = len(a[0])
	}
	width := p.width()
	p.tableau = make([]float64, p.rows*width)
	p.basis = make([]int, p.rows)
	for i, row := range a {
		scale := norm(row)
		if scale == 0 {
			scale = 1
		}
		if b[i] < 0 {
			scale = -scale
		}
		t := p.row(i)
		for j, v := range row {
			t[j] = v / scale
		}
		t[p.columns+i], t[width-1] = 1, b[i]/scale
		p.basis[i] = p.columns + i
	}
	return p, p.feasible(norm(b))
}

func (p *program) width() int { return p.columns + p.rows + 1 }

func (p *program) row(i int) []float64 {
	w := p.width()
	return p.tableau[i*w : (i+1)*w]
}

// feasible drives the artificial variables out: phase one.
func (p *program) feasible(size float64) bool {
	cost := make([]float64, p.width())
	for i := range p.rows {
		for j, v := range p.row(i) {
			if j < p.columns || j == p.width()-1 {
				cost[j] += v
			}
		}
	}
	if !p.run(cost) || cost[p.width()-1] > 1e-9*max(size, 1) {
		return false
	}
	for i := range p.rows { // artificial variables left in the basis at 0
		if p.basis[i] < p.columns {
			continue
		}
		for j := range p.columns {
			if abs(p.row(i)[j]) > 1e-7 {
				p.pivot(i, j, cost)
				break
			}
		}
	}
	return true
}

// maximise gives the largest c·v, +Inf where there is none. The program can be
// used again.
func (p *program) maximise(c []float64) float64 {
	cost := make([]float64, p.width())
	copy(cost, c)
	for i, k := range p.basis {
		if k < p.columns && cost[k] != 0 {
			f := cost[k]
			for j, v := range p.row(i) {
				cost[j] -= f * v
			}
		}
	}
	if !p.run(cost) {
		return math.Inf(1)
	}
	return -cost[p.width()-1]
}

// run pivots until no entry of cost is positive; false where the maximum is not
// bounded.
func (p *program) run(cost []float64) bool {
	for range 200 * (p.rows + p.columns) {
		enter := -1
		for j := range p.columns {
			if cost[j] > pivotSize {
				enter = j
				break
			}
		}
		if enter < 0 {
			return true
		}
		leave := p.leaving(enter)
		if leave < 0 {
			return false
		}
		p.pivot(leave, enter, cost)
	}
	return false
}

// leaving is the row with the smallest ratio, the smallest basic variable among
// equals.
func (p *program) leaving(enter int) int {
	leave, best := -1, math.Inf(1)
	for i := range p.rows {
		t := p.row(i)
		if t[enter] <= pivotSize {
			continue
		}
		ratio := max(t[p.width()-1], 0) / t[enter]
		if ratio < best || ratio == best && p.basis[i] < p.basis[leave] {
			leave, best = i, ratio
		}
	}
	return leave
}

func (p *program) pivot(leave, enter int, cost []float64) {
	t := p.row(leave)
	d := t[enter]
	for j := range t {
		t[j] /= d
	}
	for i := range p.rows {
		if i != leave {
			subtract(p.row(i), t, enter)
		}
	}
	subtract(cost, t, enter)
	p.basis[leave] = enter
}

// subtract takes the multiple of t from row that clears its entry at column.
func subtract(row, t []float64, column int) {
	f := row[column]
	if f == 0 {
		return
	}
	for j, v := range t {
		row[j] -= f * v
	}
	row[column] = 0
}
