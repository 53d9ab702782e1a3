package ssa

import (
	"math"
	"slices"
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

// classes is the state of the method in one lane.
type classes struct {
	values  []float64 // the propensities
	class   []int32   // of each reaction: the exponent bits of its propensity; 0: cannot fire
	place   []int32   // of each reaction among the members of its class
	bins    []bin     // classes that have had members in this run, widest first
	bin     [2047]int32
	total   float64 // rate of all tries
	changed bool    // a class has won or lost a member since total was summed
}

// A bin is a class in use.
type bin struct {
	members []int32
	width   float64 // the rate at which each member is tried
	inverse float64 // 1/width
	class   int32
}

func newSparse(w *worker) *sparse { return &sparse{w} }

func (k *sparse) leave(*lane) {}

func (k *sparse) enter(l *lane) bool {
	if l.classes == nil {
		r := len(k.Network.Reactions)
		l.classes = &classes{values: make([]float64, r), class: make([]int32, r), place: make([]int32, r)}
	}
	c := l.classes
	c.clear()
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
	c.bins = c.bins[:0]
	c.changed = true
}

// set gives reaction r the propensity a, and tells whether it is one.
func (c *classes) set(r int32, a float64) bool {
	c.values[r] = a
	to := int32(0)
	if a >= never {
		to = int32(math.Float64bits(a) >> 52)
	}
	if bad(a) {
		return false
	}
	if to != c.class[r] {
		c.move(r, to)
	}
	return true
}

// move puts reaction r into another class.
func (c *classes) move(r, to int32) {
	if from := c.class[r]; from != 0 {
		b := &c.bins[c.bin[from]]
		end := len(b.members) - 1
		last := b.members[end]
		b.members[c.place[r]] = last
		c.place[last] = c.place[r]
		b.members = b.members[:end]
	}
	if to != 0 {
		b := c.use(to)
		c.place[r] = int32(len(b.members))
		b.members = append(b.members, r)
	}
	c.class[r] = to
	c.changed = true
}

// use gives the bin of a class, a new one if it has none.
func (c *classes) use(class int32) *bin {
	if i := int(c.bin[class]); i < len(c.bins) && c.bins[i].class == class {
		return &c.bins[i]
	}
	width := math.Float64frombits(uint64(class+1) << 52)
	i := 0
	for i < len(c.bins) && c.bins[i].class > class {
		i++
	}
	c.bins = slices.Insert(c.bins, i, bin{width: width, inverse: 1 / width, class: class})
	for ; i < len(c.bins); i++ {
		c.bin[c.bins[i].class] = int32(i)
	}
	return &c.bins[c.bin[class]]
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
	for i := range c.bins {
		c.total += float64(len(c.bins[i].members)) * c.bins[i].width
	}
	return c.total
}

// choose gives the reaction tried at u, 0 ≤ u < total, and the width of its class.
func (c *classes) choose(u float64) (r int32, width float64) {
	var last *bin
	for i := range c.bins {
		b := &c.bins[i]
		n := float64(len(b.members))
		if place := u * b.inverse; place < n {
			return b.members[int(place)], b.width
		}
		u -= n * b.width
		if n > 0 {
			last = b
		}
	}
	// Rounding has put u at the end of all: the last member is meant.
	return last.members[len(last.members)-1], last.width
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

// try advances a lane by one try and tells whether the run goes on.
func (k *sparse) try(l *lane) bool {
	c := l.classes
	draw := l.draw()
	t := l.time + draw.Exp/c.total
	if t > l.next && !k.late(l, t) {
		return false
	}
	l.time = t
	return k.happen(l, draw.Unit*c.total)
}

func (k *sparse) rate(l *lane) float64 { return l.classes.total }

// happen lets the reaction tried at u fire or not, and tells whether the run goes on.
func (k *sparse) happen(l *lane, u float64) bool {
	c := l.classes
	r, w := c.choose(u)
	if l.accept.Float64()*w >= c.values[r] {
		return true
	}
	return k.fired(l, int(r))
}

func (k *sparse) refresh(l *lane, laws []variedLaw) float64 {
	ok := true
	for i := range laws {
		r := laws[i].reaction
		ok = l.classes.set(r, k.props[r].at(l.counts)) && ok
	}
	return l.classes.rate(ok)
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
