package ssa

import (
	"math"

	"holdfast/model"
)

// A variedLaw is the law of a reaction that reads constants which vary. What hangs on
// constants alone is worked out when they change; what hangs on the count of one
// species alone is a table; only the rest is worked out for every event.
type variedLaw struct {
	reaction int32
	setup    []step  // of constants alone
	inputs   []input // constants that vary
	unit     float64 // mass action: the propensity is unit·result ∏ n!/(n−ν)!
	*program
}

// An input is a register that holds a constant.
type input struct{ constant, register int }

// newVariedLaws compiles the laws that vary into the worker's propensities.
func newVariedLaws(w *worker) []variedLaw {
	var out []variedLaw
	for r := range w.Network.Reactions {
		if !w.variesIn(w.Network.Reactions[r].Free) {
			continue
		}
		out = append(out, newVariedLaw(w, r))
	}
	return out
}

func newVariedLaw(w *worker, r int) variedLaw {
	re := &w.Network.Reactions[r]
	v := variedLaw{reaction: int32(r), unit: w.Network.MassActionUnit(r), program: &program{}}
	c := variedCompiler{system: w.system, law: &v, registers: map[*model.Node]int{}}
	c.fixed = compiler{program: v.program, net: w.Network, amounts: make([]float64, len(w.Network.Species)), done: map[*model.Node]int{}}
	if re.MassAction {
		v.result = c.register(re.FreeCoefficient)
		w.props[r] = massAction(re, 1)
		return v
	}
	v.result = c.register(re.Free)
	w.props[r] = propensity{shape: general, factor: re.Scale, law: &law{terms: re.Uses, program: v.program}}
	return v
}

// bind works out what hangs on the constants' values.
func (v *variedLaw) bind(props []propensity, values []float64) {
	for _, i := range v.inputs {
		v.registers[i.register] = values[i.constant]
	}
	v.run(v.setup)
	if v.unit != 0 {
		props[v.reaction].factor = v.unit * v.registers[v.result]
	}
}

// variesIn tells whether a tree reads a constant that varies.
func (s *system) variesIn(tree *model.Node) bool {
	if s.varies == nil || tree == nil {
		return false
	}
	for _, i := range tree.Constants() {
		if s.Network.Constants[i].Spread > 0 {
			return true
		}
	}
	return false
}

// variedCompiler compiles a law with constants named.
type variedCompiler struct {
	*system
	law       *variedLaw
	fixed     compiler // of trees without constants that vary
	registers map[*model.Node]int
}

// register gives the register that will hold the value of a tree.
func (c *variedCompiler) register(tree *model.Node) int {
	if r, ok := c.registers[tree]; ok {
		return r
	}
	r := c.emit(tree)
	c.registers[tree] = r
	return r
}

func (c *variedCompiler) emit(tree *model.Node) int {
	if !c.variesIn(tree) {
		return c.fixed.register(tree.Bind(c.Network.ConstantValues()))
	}
	if tree.Op == model.OpConstant {
		r := c.fixed.fresh(math.NaN())
		c.law.inputs = append(c.law.inputs, input{tree.Index, r})
		return r
	}
	var args [3]int
	for i, a := range tree.Args {
		args[i] = c.register(a)
	}
	s := step{tree.Op, args[0], args[1], args[2], c.fixed.fresh(0)}
	if len(tree.Reads()) == 0 {
		c.law.setup = append(c.law.setup, s)
	} else {
		c.law.steps = append(c.law.steps, s)
	}
	return s.to
}

// A variedBurst is the mean of a burst that reads constants which vary.
type variedBurst struct{ mean *model.Node }

// newVariedBursts lists the bursts whose means vary, by their slots.
func newVariedBursts(s *system) []variedBurst {
	var out []variedBurst
	for r := range s.Network.Reactions {
		for _, t := range s.Network.Reactions[r].Bursts {
			if s.variesIn(t.Mean) {
				out = append(out, variedBurst{t.Mean})
			}
		}
	}
	return out
}
