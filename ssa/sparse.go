package ssa

import (
	"math"
	"slices"

	"holdfast/internal/stream"
)

// sparse is the Sparse method: composition–rejection (Slepoy, Thompson, Plimpton,
// J. Chem. Phys. 128 (2008) 205101), with the rejections thinned from a Poisson
// process (Lewis and Shedler, Nav. Res. Logist. Q. 26 (1979) 403).
//
// Propensities are classed by powers of two. A reaction of class c, 2ᶜ⁻¹ ≤ a < 2ᶜ,
// is tried at rate 2ᶜ and fires with chance a/2ᶜ, so the rate of all tries is a sum
// of whole multiples of powers of two: it is never added to or taken from, and no
// error builds up. The work of a try does not depend on the number of reactions.
type sparse struct {
	*worker
}

// classes is the state of the method in one lane. Class c is that of floats whose
// exponent bits are c.
type classes struct {
	values  []float64 // the propensities
	class   []int32   // of each reaction; 0: cannot fire
	place   []int32   // of each reaction among the members of its class
	members [2047][]int32
	used    []int32 // classes that have had members in this run, largest first
	total   float64 // rate of all tries
	changed bool    // a class has won or lost a member since total was summed
	next    int     // of the lane's draws
}

// width is the rate at which each member of class c is tried.
func width(c int32) float64 { return math.Float64frombits(uint64(c+1) << 52) }

func newSparse(w *worker) *sparse { return &sparse{w} }

func (k *sparse) leave(*lane) {}

func (k *sparse) enter(l *lane) bool {
	if l.classes == nil {
		r := len(k.Network.Reactions)
		l.classes = &classes{values: make([]float64, r), class: make([]int32, r), place: make([]int32, r)}
	}
	c := l.classes
	c.clear()
	c.next = blockSteps
	ok := true
	for r := range c.values {
		ok = (!k.live(r) || c.set(int32(r), k.props[r].at(l.counts))) && ok
	}
	return k.settle(l, c.rate(ok))
}

// clear forgets all propensities.
func (c *classes) clear() {
	clear(c.values)
	clear(c.class)
	for _, u := range c.used {
		c.members[u] = c.members[u][:0]
	}
	c.used = c.used[:0]
	c.changed = true
}

// set gives reaction r the propensity a, and tells whether it is one.
func (c *classes) set(r int32, a float64) bool {
	c.values[r] = a
	to := int32(0)
	if a >= never {
		to = int32(math.Float64bits(a) >> 52)
	}
	if to != c.class[r] && !bad(a) {
		c.move(r, to)
	}
	return !bad(a)
}

// move puts reaction r into another class.
func (c *classes) move(r, to int32) {
	if from := c.class[r]; from != 0 {
		m := c.members[from]
		last := m[len(m)-1]
		m[c.place[r]] = last
		c.place[last] = c.place[r]
		c.members[from] = m[:len(m)-1]
	}
	if to != 0 {
		if len(c.members[to]) == 0 {
			c.use(to)
		}
		c.place[r] = int32(len(c.members[to]))
		c.members[to] = append(c.members[to], r)
	}
	c.class[r] = to
	c.changed = true
}

func (c *classes) use(class int32) {
	i, found := slices.BinarySearchFunc(c.used, class, func(a, b int32) int { return int(b - a) })
	if !found {
		c.used = slices.Insert(c.used, i, class)
	}
}

// rate gives the rate of all tries, NaN if not ok.
func (c *classes) rate(ok bool) float64 {
	if !ok {
		return math.NaN()
	}
	if !c.changed {
		return c.total
	}
	c.changed, c.total = false, 0
	for _, u := range c.used {
		c.total += float64(len(c.members[u])) * width(u)
	}
	return c.total
}

// choose gives the reaction tried at u, 0 ≤ u < total, and its class' width.
func (c *classes) choose(u float64) (r int32, w float64) {
	for _, class := range c.used {
		m := c.members[class]
		w = width(class)
		if all := float64(len(m)) * w; u >= all {
			u -= all
			continue
		}
		return m[min(int(u/w), len(m)-1)], w
	}
	return c.lowest()
}

// lowest is the last member of the lowest class with members: the reaction at u
// where rounding has put u at the end of all.
func (c *classes) lowest() (r int32, w float64) {
	for _, class := range slices.Backward(c.used) {
		if m := c.members[class]; len(m) > 0 {
			return m[len(m)-1], width(class)
		}
	}
	return 0, math.Inf(1) // never tried: total is positive
}

// draw gives the next of the lane's draws, which are made by the block.
func (c *classes) draw(l *lane) *stream.Draw {
	if c.next == blockSteps {
		l.random.Fill(&l.draws)
		c.next = 0
	}
	c.next++
	return &l.draws[c.next-1]
}

func (k *sparse) advance(lanes []lane) {
	for i := range lanes {
		l := &lanes[i]
		for e := 0; e < turn && l.run >= 0; e++ {
			if !k.try(l) {
				k.begin(l)
			}
		}
	}
}

// try advances a lane to the next try, lets the reaction tried fire or not, and
// tells whether the run goes on.
func (k *sparse) try(l *lane) bool {
	c := l.classes
	draw := c.draw(l)
	t := l.time + draw.Exp/c.total
	if t > l.next && !k.late(l, t) {
		return false
	}
	l.time = t
	r, w := c.choose(draw.Unit * c.total)
	if l.accept.Float64()*w >= c.values[r] {
		return true
	}
	return k.fired(l, int(r))
}

// fired lets reaction r fire and tells whether the run goes on.
func (k *sparse) fired(l *lane, r int) bool {
	over := k.fire(l, r)
	l.left--
	ok := true
	for _, d := range k.dependents.of(r) {
		ok = l.classes.set(d, k.props[d].at(l.counts)) && ok
	}
	return k.goesOn(l, over, l.classes.rate(ok))
}
