package sde

import (
	"math"

	"holdfast/model"
)

// kinetic is the scheme for a network's equation: its laws are a program over
// lanes.
type kinetic struct {
	*machine
	before table
	h      float64
	limit  float64
	legs   []leg
	wall   []journey // species that are reflected at 0
	kept   []journey // species of conserved totals
	width  int
}

// A leg is the change along one direction.
type leg struct {
	// up and down are the registers of two propensities where these make the drift
	// and the variance; otherwise drift and variance are.
	pair            bool
	up, down        int
	drift, variance int
	to              int // register of the change
}

// A journey is what moves a species.
type journey struct {
	species int
	parts   []part
}

// A part is v times the change along a direction.
type part struct {
	leg int
	v   float64
}

func newKinetic(w *worker, s *chemical, room int) *kinetic {
	c := newCompiler(s.net)
	k := &kinetic{before: w.before, h: w.Step, limit: w.Limit}
	for d := range s.groups {
		k.legs = append(k.legs, newLeg(c, &s.groups[d]))
	}
	for i := range s.net.Species {
		j := journey{species: i}
		for d := range s.groups {
			if v := s.groups[d].direction[i]; v != 0 {
				j.parts = append(j.parts, part{d, v})
			}
		}
		switch {
		case s.kept[i]:
			k.kept = append(k.kept, j)
		case j.parts != nil:
			k.wall = append(k.wall, j)
		}
	}
	k.machine = newMachine(&c.program, room)
	k.width = room
	for _, i := range c.inputs {
		w.inputs = append(w.inputs, k.inputRow(s.net, i))
	}
	w.x = table{k.file[:len(s.net.Species)*room], room}
	return k
}

// inputRow gives the registers of a constant that varies, at its median in all lanes.
func (k *kinetic) inputRow(net *model.Network, i input) inputRow {
	row := inputRow{i.constant, k.lanes(i.register, k.room)}
	for lane := range row.lanes {
		row.lanes[lane] = net.Constants[i.constant].Value
	}
	return row
}

// newLeg compiles the propensities of a direction's reactions.
func newLeg(c *compiler, g *group) leg {
	var rates []int
	var net, spread []float64
	for _, s := range g.shares {
		if s.burst != nil {
			return newBurstLeg(c, g)
		}
		rates = append(rates, c.reaction(s.reaction))
		net, spread = append(net, s.net), append(spread, s.spread)
	}
	l := leg{}
	if len(rates) == 2 && net[0] == 1 && net[1] == -1 && spread[0] == 1 && spread[1] == 1 {
		l.pair, l.up, l.down = true, rates[0], rates[1]
	} else {
		l.drift, l.variance = c.sum(rates, net), c.sum(rates, spread)
	}
	l.to = c.fresh()
	return l
}

// newBurstLeg is newLeg for a direction with bursts whose means vary.
func newBurstLeg(c *compiler, g *group) leg {
	l := leg{drift: c.constant(0), variance: c.constant(0)}
	for _, s := range g.shares {
		rate := c.reaction(s.reaction)
		drift, variance, net, spread := rate, rate, s.net, s.spread
		if s.burst != nil {
			drift, variance = c.burst(rate, s.burst)
			net, spread = s.scale, s.scale*s.scale
		}
		l.drift = c.add(l.drift, c.mul(c.constant(net), drift))
		l.variance = c.add(l.variance, c.mul(c.constant(spread), variance))
	}
	l.to = c.fresh()
	return l
}

// step is one of the Euler–Maruyama scheme, with the rules at 0 that Chemical states.
func (k *kinetic) step(z table, lanes int) (over bool) {
	if lanes != k.width {
		k.width = lanes
		k.narrow(lanes)
	}
	k.run()
	for d := range k.legs {
		l := &k.legs[d]
		to := k.lanes(l.to, lanes)
		if l.pair {
			pairLanes(to, k.lanes(l.up, lanes), k.lanes(l.down, lanes), z.row(d, lanes), k.h)
		} else {
			noiseLanes(to, k.lanes(l.drift, lanes), k.lanes(l.variance, lanes), z.row(d, lanes), k.h)
		}
	}
	over = k.moveKept(lanes)
	for i := range k.wall {
		j := &k.wall[i]
		x, last := k.lanes(j.species, lanes), len(j.parts)-1
		for _, p := range j.parts[:last] {
			moveLanes(x, k.lanes(k.legs[p.leg].to, lanes), p.v)
		}
		p := j.parts[last]
		over = reflectLanes(x, k.lanes(k.legs[p.leg].to, lanes), p.v, k.limit) || over
	}
	return over
}

// moveKept moves the species of conserved totals.
func (k *kinetic) moveKept(lanes int) (over bool) {
	below := false
	for i := range k.kept {
		below = k.move(&k.kept[i], lanes) || below
	}
	if below {
		k.shorten(lanes)
	}
	for i := range k.kept {
		over = overLanes(k.lanes(k.kept[i].species, lanes), k.limit) || over
	}
	return over
}

// move moves a species, and tells whether it is below 0 in some lane.
func (k *kinetic) move(j *journey, lanes int) (below bool) {
	x := k.lanes(j.species, lanes)
	for _, p := range j.parts {
		moveLanes(x, k.lanes(k.legs[p.leg].to, lanes), p.v)
	}
	return belowLanes(x)
}

// shorten does the step again, from the coordinates before it, with the changes
// shortened in the lanes where a species of a conserved total is below 0.
func (k *kinetic) shorten(lanes int) {
	for i := range lanes {
		for s := range k.kept {
			if k.file[k.kept[s].species*k.room+i] < 0 {
				k.shortenLane(i)
				break
			}
		}
	}
}

// shortenLane shortens, for each species kept, the changes that take from it so
// that they take no more than there is; a change is as short as its most short of
// species allows. (A flux limiter: Zalesak, J. Comput. Phys. 31 (1979) 335, from
// memory.)
func (k *kinetic) shortenLane(i int) {
	factor := make([]float64, len(k.legs))
	for d := range factor {
		factor[d] = 1
	}
	for s := range k.kept {
		k.share(&k.kept[s], i, factor)
	}
	for d := range k.legs {
		k.file[k.legs[d].to*k.room+i] *= factor[d]
	}
	for s := range k.kept {
		j := &k.kept[s]
		x := k.before.cells[j.species*k.before.room+i]
		for _, p := range j.parts {
			x += float64(k.file[k.legs[p.leg].to*k.room+i] * p.v)
		}
		if x < 0 { // by rounding only
			x = 0
		}
		k.file[j.species*k.room+i] = x
	}
}

// share lowers the factors of the changes that would take more of a species than
// there is.
func (k *kinetic) share(j *journey, i int, factor []float64) {
	taken := 0.0
	for _, p := range j.parts {
		taken += max(0, -k.file[k.legs[p.leg].to*k.room+i]*p.v)
	}
	there := k.before.cells[j.species*k.before.room+i]
	if !(taken > there) {
		return
	}
	for _, p := range j.parts {
		if k.file[k.legs[p.leg].to*k.room+i]*p.v < 0 {
			factor[p.leg] = min(factor[p.leg], math.Max(there/taken, 0))
		}
	}
}
