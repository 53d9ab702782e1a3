package proof

import (
	"math"
	"slices"
)

// split cuts the box in two across the unknown whose width matters most, or gives
// it up where it is small. The measure is the change of each row over the box, by
// unknown, as a share of the row's (smear: Kearfott and Novoa, ACM Trans. Math.
// Softw. 16 (1990) 152, from memory); unknowns that all rates are linear in are
// left to the narrowing as long as others can be cut.
func (e *examiner) split(b box, heaps []heap) report {
	if slices.ContainsFunc(heaps, func(h heap) bool { return h.absorbs(b) }) {
		return report{stuck: b}
	}
	at, best := -1, 0.0
	score := e.smear(b)
	for i := range b {
		if v := score[i]; e.wide(b[i], i) && v > best {
			at, best = i, v
		}
	}
	if at < 0 {
		return report{stuck: b}
	}
	left, right := slices.Clone(b), slices.Clone(b)
	m := b[at].Lo + 0.4873*(b[at].Hi-b[at].Lo)
	left[at].Hi, right[at].Lo = m, m
	return report{parts: []box{left, right}}
}

// wide tells whether the unknown may be cut further.
func (e *examiner) wide(a iv, i int) bool {
	scale := max(a.Mag(), 1e-6*e.t.most[i])
	m := a.Lo + 0.4873*(a.Hi-a.Lo)
	return a.Width() > e.t.width*scale && a.Lo < m && m < a.Hi
}

func (e *examiner) smear(b box) []float64 {
	score := make([]float64, len(b))
	e.sheet.forward(&e.s.graph, b)
	e.differentiate(e.sheet)
	rows := make([]float64, len(b)*len(b))
	for k, col := range e.s.columns {
		for j, place := range e.s.atoms[k].species {
			for i, r := range col.rows {
				rows[r*len(b)+place] += col.coef[i].Mag() * min(e.slopes[k][j].Mag(), 1e300) * b[place].Width()
			}
		}
	}
	for i := range b {
		total := 0.0
		for j := range b {
			total += rows[i*len(b)+j]
		}
		for j := range b {
			if total > 0 {
				score[j] += rows[i*len(b)+j] / total
			}
		}
	}
	for j := range b {
		score[j] += 1e-9 * b[j].Width() / max(b[j].Mag(), 1e-300)
		if e.s.bent[j] {
			score[j] += 1e3
		}
		if math.IsNaN(score[j]) {
			score[j] = 1
		}
	}
	return score
}
