package deterministic

import (
	"math"
	"slices"

	"holdfast/deterministic/proof/interval"
)

// piece is a stretch of a line. Where monotone, the rate along the line rises or
// falls throughout, so that it vanishes once at most.
type piece struct {
	from, to float64
	monotone bool
}

// vanisher finds the pieces of a line on which the rate along it may vanish: the
// others are left out because the rate, or on a piece with one end where it
// vanishes its slope, is enclosed away from 0 (branch and prune by interval
// arithmetic: Moore, Kearfott, Cloud, Introduction to Interval Analysis, 2009, ch.
// 8).
type vanisher struct {
	s      *system
	l      *line
	e      *encloser
	pieces []piece
	boxes  int
	spent  bool // mostBoxes were used: gaps remain
}

// Limits of the search along a line.
const (
	mostBoxes = 20000
	// thinnest is the relative width of a piece that is not split further: the
	// root of the rounding, to which a state that two merge in can be located.
	thinnest = 1e-8
)

func (v *vanisher) run() {
	queue := []piece{{v.l.from, v.l.to, false}}
	for len(queue) > 0 {
		p := queue[len(queue)-1]
		queue = queue[:len(queue)-1]
		if v.boxes++; v.boxes > mostBoxes {
			v.spent = true
			v.pieces = append(v.pieces, p)
			continue
		}
		value, slope := v.enclose(p)
		mid := middle(p.from, p.to)
		switch {
		case value.Lo > 0 || value.Hi < 0:
		case slope.Lo > 0 || slope.Hi < 0:
			p.monotone = true
			v.pieces = append(v.pieces, p)
		case p.to-p.from <= thinnest*max(abs(p.from), abs(p.to)) || mid <= p.from || mid >= p.to:
			v.pieces = append(v.pieces, p)
		default:
			queue = append(queue, piece{p.from, mid, false}, piece{mid, p.to, false})
		}
	}
	v.join()
}

// middle splits evenly, or where the ends differ by orders of magnitude between
// them.
func middle(a, b float64) float64 {
	switch {
	case a == 0 && b > 0:
		return b / 16
	case a > 0 && b > 4*a:
		return math.Sqrt(a) * math.Sqrt(b)
	}
	return a + (b-a)/2
}

// join sorts the pieces and joins neighbours that are not monotone.
func (v *vanisher) join() {
	slices.SortFunc(v.pieces, func(a, b piece) int { return sign(a.from - b.from) })
	var out []piece
	for _, p := range v.pieces {
		if k := len(out) - 1; k >= 0 && !p.monotone && !out[k].monotone && p.from <= out[k].to {
			out[k].to = p.to
			continue
		}
		out = append(out, p)
	}
	v.pieces = out
}

// enclose encloses the rate of the independent species over a piece and its slope
// along the line, the rate also by its middle value and the slope.
func (v *vanisher) enclose(p piece) (value, slope span) {
	whole := v.over(span{Lo: p.from, Hi: p.to})
	value, slope = v.rate(whole)
	mid := p.from + (p.to-p.from)/2
	center, _ := v.rate(v.over(interval.Point(mid)))
	away := span{Lo: p.from, Hi: p.to}.Add(interval.Point(-mid))
	centered := center.Add(slope.Mul(away))
	return value.Meet(centered), slope
}

// over gives the box of amounts along a piece.
func (v *vanisher) over(t span) []span {
	out := make([]span, v.l.c.n)
	for i, d := range v.l.c.link {
		x := interval.Point(v.l.base[i]).Add(interval.Point(d).Mul(t))
		out[i] = span{Lo: max(x.Lo, 0), Hi: max(x.Hi, 0)}
	}
	return out
}

func (v *vanisher) rate(over []span) (value, slope span) {
	i := v.l.c.independent[0]
	for r, list := range v.s.changes {
		for _, c := range list {
			if c.species != i {
				continue
			}
			a, d := v.e.slope(v.s.net.Reactions[r].Law, over, v.l.c.link)
			value = value.Add(interval.Point(c.amount).Mul(a))
			slope = slope.Add(interval.Point(c.amount).Mul(d))
		}
	}
	return value, slope
}
