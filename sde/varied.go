package sde

import (
	"errors"
	"fmt"
	"math"

	"holdfast/internal/variation"
	"holdfast/model"
)

// A vary is how the constants of a network vary over steps. A nil one leaves them.
type vary struct {
	law   *variation.Law
	steps int64 // for which constants that vary in time are held; 0: none does
}

// newVary works out how the constants of a plan, whose step is chosen, vary.
func newVary(p *Plan) *vary {
	s, ok := p.System.(*chemical)
	if !ok {
		return nil
	}
	law := variation.Of(s.net, p.Interval)
	if law == nil || law.Interval == 0 {
		return wrap(law, 0)
	}
	steps := max(1, int64(math.Min(math.Round(law.Interval/p.Step), mostSteps)))
	return wrap(variation.Of(s.net, float64(steps)*p.Step), steps)
}

func wrap(law *variation.Law, steps int64) *vary {
	if law == nil {
		return nil
	}
	return &vary{law, steps}
}

// An inputRow is a row of registers that hold a constant, one a lane.
type inputRow struct {
	constant int
	lanes    []float64
}

// vary draws the constants of the run that begins in a lane.
func (w *worker) vary(i int) {
	l := &w.lanes[i]
	l.turn = math.MaxInt64
	if w.varies == nil {
		return
	}
	if l.cell == nil {
		l.cell = w.varies.law.NewCell()
	}
	l.cell.Begin(variation.Stream(w.Seed, w.Point, w.replicate(l.run)))
	w.input(i)
	if w.varies.steps > 0 {
		l.turn = w.clock + 1 + int64(l.cell.First*float64(w.varies.steps))
	}
}

// turnOver brings a lane to its constants' next interval if it is due.
func (w *worker) turnOver(i int) {
	l := &w.lanes[i]
	if l.turn > w.clock {
		return
	}
	l.cell.Step()
	w.input(i)
	l.turn += w.varies.steps
}

// input puts a lane's constants into its registers.
func (w *worker) input(i int) {
	for _, r := range w.inputs {
		r.lanes[i] = w.lanes[i].cell.Values[r.constant]
	}
}

// valuesOf gives the constants of a lane.
func (w *worker) valuesOf(i int) []float64 {
	if cell := w.lanes[i].cell; cell != nil {
		return cell.Values
	}
	return w.System.(*chemical).net.ConstantValues()
}

// checkVariation refuses the one kind of variation that the merged directions cannot
// follow.
func (p *Plan) checkVariation() error {
	if !(p.Interval >= 0) || p.Interval > longest {
		return fmt.Errorf("interval is %v; it must be from 0 to 2⁸⁰⁰ (0: chosen)", p.Interval)
	}
	s, ok := p.System.(*chemical)
	if !ok {
		if p.Interval > 0 {
			return errors.New("interval is for a system that Chemical made")
		}
		return nil
	}
	for r := range s.net.Reactions {
		re := &s.net.Reactions[r]
		if varyingBurst(s.net, re) != nil && (len(re.Net) > 0 || len(re.Bursts) > 1) {
			return fmt.Errorf("reaction %q makes a burst whose mean varies beside other changes: the direction of its noise varies, which the Langevin engine cannot follow; split the reaction, or make exact runs", re.Name)
		}
	}
	return nil
}

// varyingBurst gives the mean of a reaction's burst that reads constants which vary,
// or nil.
func varyingBurst(net *model.Network, re *model.Reaction) *model.Node {
	for _, t := range re.Bursts {
		if t.Mean != nil && variesIn(net, t.Mean) {
			return t.Mean
		}
	}
	return nil
}

// variesIn tells whether a tree reads a constant that varies.
func variesIn(net *model.Network, tree *model.Node) bool {
	if tree == nil {
		return false
	}
	for _, i := range tree.Constants() {
		if net.Constants[i].Spread > 0 {
			return true
		}
	}
	return false
}

// named gives the register of a constant: an input where it varies.
func (c *compiler) named(index int) int {
	if c.net.Constants[index].Spread == 0 {
		return c.constant(c.net.Constants[index].Value)
	}
	if r, ok := c.inputAt[index]; ok {
		return r
	}
	r := c.fresh()
	c.inputAt[index] = r
	c.inputs = append(c.inputs, input{index, r})
	return r
}

// varied gives the register of a propensity that reads constants which vary.
func (c *compiler) varied(r int) int {
	re := &c.net.Reactions[r]
	law, unit := re.Free, re.Scale
	if re.MassAction {
		law, unit = re.FreeCoefficient, c.net.MassActionUnit(r)
	}
	a := c.mul(c.constant(unit), c.tree(law))
	if !nonNegative(law) {
		a = c.emit(instruction{op: opGuard, a: a})
	}
	if re.MassAction {
		a = c.falling(re, a)
	}
	return a
}

// burst gives the registers of what a burst of a mean m that varies makes of a rate:
// the drift m and the variance m(1+2m) of a geometric number, times the rate.
func (c *compiler) burst(rate int, mean *model.Node) (drift, variance int) {
	m := c.tree(mean)
	drift = c.mul(rate, m)
	return drift, c.mul(drift, c.add(c.constant(1), c.add(m, m)))
}
