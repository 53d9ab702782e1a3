package ssa

import "holdfast/internal/stream"

// A pause says why a rush has stopped.
type pause uint8

const (
	// due: the lane is due an event that is for event to give.
	due pause = iota
	// noted: the lane has had its event, and look is due.
	noted
)

// pairPlaces are the places of the reactions of two tables of at most two each, by how
// many running sums are above a number: those of the second table come first.
var pairPlaces = [4]int{groupWidth + 1, groupWidth, 1, 0}

// isPair tells whether the tables are two of at most two reactions each, without
// bursts: the shape of a gene with its transcript or of two genes.
func (c *Climber) isPair() bool {
	if c.tables == nil || len(c.tables.sheets) != 2 || len(c.groups) != 2 {
		return false
	}
	for g := range c.groups {
		if len(c.groups[g].reactions) > 2 {
			return false
		}
	}
	for _, bursty := range c.bursty {
		if bursty {
			return false
		}
	}
	return true
}

// rushPair gives the lanes events in turn from lane i on, those that event would, bit
// for bit, up to the first that is out of the ordinary, and gives its lane.
func (c *Climber) rushPair(i int) (lane int, why pause) {
	cells, lanes, units, used := c.tables.cells, c.lanes[:c.active], &c.units, c.used
	var shifts [4][2]uint32
	for r, p := range pairPlaces {
		shifts[r] = [2]uint32{c.tables.shifts[p][0], c.tables.shifts[p][1]}
	}
	for ; ; i++ {
		if i >= len(lanes) {
			i = 0
		}
		l := &lanes[i]
		x, y := &cells[l.at[0]], &cells[l.at[1]]
		total := x[groupWidth-1] + y[groupWidth-1]
		if used >= len(units) || !(total >= never && total <= most) {
			break
		}
		if l.timed {
			t := l.time + 1/total
			if !(t <= l.until) {
				break
			}
			l.time = t
		}
		u := units[used&(len(stream.Units{})-1)] * total
		used++
		r := (above(x[0], u) + above(x[groupWidth-1], u) + above(x[groupWidth-1]+y[0], u)) & 3
		l.at[0] += shifts[r][0]
		l.at[1] += shifts[r][1]
		l.value += l.rung.pair[r]
		if l.value <= l.low || l.value >= l.high {
			c.took(used)
			return i, noted
		}
	}
	c.took(used)
	return i, due
}

// took notes that the numbers before used have each made an event.
func (c *Climber) took(used int) {
	c.events += int64(used - c.used)
	c.used = used
}
