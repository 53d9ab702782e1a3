package ssa

import "math"

// event gives a lane an event, and tells whether its run goes on.
func (c *Climber) event(l *climb) bool {
	if l.loft {
		return c.slow(l)
	}
	cells, n := c.tables.cells, len(c.tables.sheets)
	var ends [maxSheets + 1]float64
	total := 0.0
	for k := range n {
		total += cells[l.at[k&(maxSheets-1)]].total()
		ends[(k+1)&(maxSheets-1)] = total
	}
	if !(total >= never && total <= math.MaxFloat64) {
		return c.mend(l)
	}
	if l.timed && !c.tick(l, total) {
		return false
	}
	u := c.unit() * total
	g := 0
	for k := 1; k < len(c.groups); k++ {
		g += 1 - int(above(ends[k&(maxSheets-1)], u))
	}
	before := ends[g&(maxSheets-1)]
	if g == 0 {
		before = 0
	}
	s := &cells[l.at[g&(maxSheets-1)]]
	p := g*groupWidth + 3 - int(above(before+s[0], u)+above(before+s[1], u)+above(before+s[2], u))
	if c.bursty[p] {
		return c.burst(l, p)
	}
	shift := &c.tables.shifts[p]
	for k := range n {
		l.at[k&(maxSheets-1)] += shift[k&(maxSheets-1)]
	}
	l.value += l.adds[p]
	c.events++
	if l.value > l.low && l.value < l.high {
		return true
	}
	return c.look(l)
}

// tick takes the mean time of a state with this total propensity, and tells
// whether the lane's time is not over.
func (c *Climber) tick(l *climb, total float64) bool {
	l.time += 1 / total
	return l.time <= l.until || c.expire(l)
}

// mend fills in the cells that a lane has come to, and gives it its event.
func (c *Climber) mend(l *climb) bool {
	c.tables.read(&l.at, l.counts)
	if _, within := c.tables.place(l.counts); !within {
		return c.settle(l) && c.event(l)
	}
	total := 0.0
	for k := range c.tables.sheets {
		s := &c.tables.cells[l.at[k]]
		s.sum(c.tables.sheets[k].reactions, c.props, l.counts)
		total += s.total()
	}
	if end, ended := c.dead(l, total); ended {
		return end
	}
	return c.event(l)
}

// dead ends a run whose propensities sum to a total that none can go on with.
func (c *Climber) dead(l *climb, total float64) (goesOn, ended bool) {
	switch {
	case !(total <= math.MaxFloat64):
		c.course.err = c.rateError(l.counts)
		l.number = -1
		return false, true
	case total < never:
		return c.finish(l, Emptied, -1), true
	}
	return false, false
}

// rateError names the rate that makes counts a state no run may be in.
func (c *Climber) rateError(counts []int64) error {
	e := &RateError{Reaction: -1, Counts: append([]int64(nil), counts...)}
	for r := range c.props {
		if a := c.props[r].at(counts); c.live(r) && (bad(a) || e.Reaction < 0 || a > e.Value) {
			e.Reaction, e.Name, e.Value = r, c.Network.Reactions[r].Name, a
			if bad(a) {
				break
			}
		}
	}
	return e
}

// slow is event without tables.
func (c *Climber) slow(l *climb) bool {
	total := 0.0
	for g := range l.own {
		l.ends[g] = total
		total += l.own[g].total()
	}
	if !(total >= never && total <= math.MaxFloat64) {
		goesOn, _ := c.dead(l, total)
		return goesOn
	}
	if l.timed && !c.tick(l, total) {
		return false
	}
	u := c.unit() * total
	g := 0
	for k := 1; k < len(l.own); k++ {
		g += 1 - int(above(l.ends[k], u))
	}
	before, s := l.ends[g], &l.own[g]
	p := g*groupWidth + 3 - int(above(before+s[0], u)+above(before+s[1], u)+above(before+s[2], u))
	return c.fireSlow(l, p)
}

// fireSlow fires the reaction at a place of a run without tables.
func (c *Climber) fireSlow(l *climb, p int) bool {
	r := c.groups[p/groupWidth].reactions[p%groupWidth]
	over := c.throw(l, r)
	l.value += l.adds[p]
	for _, g := range c.touched[r] {
		l.own[g].sum(c.groups[g].reactions, c.props, l.counts)
	}
	c.events++
	switch {
	case over:
		c.course.err = newRunawayError(append([]int64(nil), l.counts...), l.time)
		l.number = -1
		return false
	case l.value > l.low && l.value < l.high:
		return true
	}
	return c.look(l)
}

// throw changes counts by one firing of reaction r, and the value by its bursts. It
// tells whether a count is above the limit.
func (c *Climber) throw(l *climb, r int) (over bool) {
	for _, d := range c.changes.of(r) {
		l.counts[d.species] += d.by
		over = over || l.counts[d.species] > c.MaxCount
	}
	for _, b := range c.bursts.of(r) {
		size := int64(min(c.sizes.Exp()*b.scale, maxCountLimit))
		l.counts[b.species] += size
		l.value += l.rung.Weights[b.species] * size
		over = over || l.counts[b.species] > c.MaxCount
	}
	return over
}

// burst fires a reaction with random products, of a run with tables.
func (c *Climber) burst(l *climb, p int) bool {
	c.tables.read(&l.at, l.counts)
	over := c.throw(l, c.groups[p/groupWidth].reactions[p%groupWidth])
	l.value += l.adds[p]
	c.events++
	if over {
		c.course.err = newRunawayError(append([]int64(nil), l.counts...), l.time)
		l.number = -1
		return false
	}
	if !c.settle(l) {
		return false
	}
	if l.value > l.low && l.value < l.high {
		return true
	}
	return c.look(l)
}
