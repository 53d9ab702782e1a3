package ssa

import (
	"holdfast/internal/variation"
)

// varied is the loop over events of a network whose constants vary. They are held for
// an interval at a time (see package variation): within it the process is the one that
// the method below is exact for, and at its end the time to the next event, which has
// no memory, is drawn anew. A worker has one lane, whose constants are in its
// propensities.
type varied struct {
	*worker
	method method
	cell   *variation.Cell
	laws   []variedLaw
	bursts []variedBurst
	turned int64   // intervals of the run that are over
	end    float64 // of the interval
}

// A method is an algorithm whose propensities may change between events.
type method interface {
	kernel
	// rate gives the rate of events, or of tries.
	rate(l *lane) float64
	// happen chooses by u, uniform from 0 to the rate, lets the choice fire, and tells
	// whether the run goes on.
	happen(l *lane, u float64) bool
	// refresh works out the propensities of so many laws again, and gives their new sum
	// with all others, NaN if one is bad.
	refresh(l *lane, laws []variedLaw) float64
}

// kernelOf gives the loop that fits the network.
func (s *system) kernelOf() func(*worker) kernel {
	if s.varies != nil {
		return newVaried
	}
	return newKernel
}

// lanesOf gives the number of runs that one goroutine advances in turn.
func (j *job) lanesOf() int {
	if j.varies != nil {
		return 1
	}
	return j.lanes()
}

func newVaried(w *worker) kernel {
	k := &varied{worker: w, cell: w.varies.NewCell(), laws: newVariedLaws(w), bursts: newVariedBursts(w.system)}
	if k.method = newDirect(w); w.sparse() {
		k.method = newSparse(w)
	}
	return k
}

// enter draws the constants of a run that begins.
func (k *varied) enter(l *lane) bool {
	replicate := k.Group<<40 | (k.FirstReplicate + uint64(l.run))
	k.cell.Begin(variation.Stream(k.Seed, k.Point, replicate))
	k.bind(l)
	k.turned = 0
	k.setEnd()
	return k.method.enter(l)
}

func (k *varied) leave(l *lane) { k.method.leave(l) }

// bind puts the constants into the propensities and the bursts.
func (k *varied) bind(l *lane) {
	for i := range k.laws {
		k.laws[i].bind(k.props, k.cell.Values)
	}
	l.scales = l.scales[:0]
	for i := range k.bursts {
		l.scales = append(l.scales, burstScale(k.bursts[i].mean.Eval(nil, k.cell.Values)))
	}
}

func (k *varied) setEnd() {
	k.end = endOfTime
	if k.varies.Interval > 0 {
		k.end = (k.cell.First + float64(k.turned)) * k.varies.Interval
	}
}

func (k *varied) advance(lanes []lane) {
	for i := range lanes {
		l := &lanes[i]
		for e := 0; e < turn && l.run >= 0; e++ {
			if !k.event(l) {
				k.begin(l)
			}
		}
	}
}

// event advances a lane by one event, or to the end of the interval, and tells whether
// its run goes on.
func (k *varied) event(l *lane) bool {
	rate := k.method.rate(l)
	draw := l.draw()
	t := l.time + draw.Exp/rate
	if !(t <= k.end) { // a rate of 0 may make t no number
		return k.turnOver(l)
	}
	if t > l.next && !k.late(l, t) {
		return false
	}
	l.time = t
	return k.method.happen(l, draw.Unit*rate)
}

// turnOver brings a lane to its constants' next interval, and tells whether its run
// goes on.
func (k *varied) turnOver(l *lane) bool {
	if k.end > l.next && !k.late(l, k.end) {
		return false
	}
	l.time = k.end
	k.turned++
	k.setEnd()
	k.cell.Step()
	k.bind(l)
	return k.settle(l, k.method.refresh(l, k.laws))
}

// wakes tells whether a state in which nothing can happen now may be left once the
// constants have changed: at their medians, something can.
func (w *worker) wakes(counts []int64) bool {
	if w.varies == nil || w.varies.Interval == 0 {
		return false
	}
	for r := range w.Network.Reactions {
		if w.Network.Propensity(r, counts) >= never {
			return true
		}
	}
	return false
}
