package deterministic

import (
	"fmt"
	"math"
	"slices"

	"holdfast/model"
)

// declare replaces or adds the cores that the design declares. Where all declared
// names are those of stable states their cores are replaced. Where one is not, one
// declared core alone is a state besides the resting ones; two or more are all the
// states there are, start and target of a passage: resting states that are not
// declared lose their cores.
func (k *coreMaker) declare() error {
	m := k.m
	isDeclared := make([]bool, len(m.Cores))
	for _, d := range m.Network.Declared {
		i := slices.IndexFunc(m.Cores, func(c model.Core) bool { return c.State == d.State })
		c, err := k.declaredCore(d, i)
		if err != nil {
			return err
		}
		if i >= 0 {
			m.Cores[i], isDeclared[i] = c, true
			continue
		}
		k.addDeclared(c)
		isDeclared = append(isDeclared, true)
	}
	if len(m.Network.Declared) > 1 && countKind(m.States, func(k Kind) bool { return k == Declared }) > 0 {
		isDeclared = m.onlyDeclared(isDeclared)
	}
	for i := range m.Cores {
		for j := range i {
			if isDeclared[i] || isDeclared[j] {
				if err := k.settle(j, isDeclared[j], i, isDeclared[i]); err != nil {
					return err
				}
			}
		}
	}
	k.warnHeld(isDeclared)
	return nil
}

// onlyDeclared takes away the cores that are not declared, and puts their states
// behind those that have one.
func (m *Map) onlyDeclared(isDeclared []bool) []bool {
	var cores []model.Core
	var with, without []State
	for i, declared := range isDeclared {
		if declared {
			cores, with = append(cores, m.Cores[i]), append(with, m.States[i])
		} else {
			without = append(without, m.States[i])
		}
	}
	for _, s := range without {
		m.warn("the resting state %q has no core: the declared ones, not all of resting states, are all the states", s.Name)
	}
	m.States = slices.Concat(with, without, m.States[len(m.Cores):])
	m.Cores = cores
	return slices.Repeat([]bool{true}, len(cores))
}

// declaredCore makes the core of a declaration, of the stable state i or of none.
func (k *coreMaker) declaredCore(d model.DeclaredCore, i int) (model.Core, error) {
	n := k.m.class.n
	c := model.Core{State: d.State, Low: make([]int64, n), High: slices.Repeat([]int64{math.MaxInt64}, n)}
	for _, r := range d.Ranges {
		c.Low[r.Species], c.High[r.Species] = r.Min, r.Max
	}
	target := floats(k.m.Network.StartCounts())
	if i >= 0 {
		target = k.m.States[i].Molecules
	}
	start, ok := k.nearestIn(target, c.Low, c.High)
	if !ok {
		return c, &CoreError{d.State, "no counts within its ranges keep the conserved totals of the start"}
	}
	c.Start = start
	if i >= 0 && !within(target, c.Low, c.High) {
		k.m.warn("[core.%s] does not hold the resting state itself: a dwell starts at the nearest counts that it holds, %v", d.State, start)
	}
	c.Center = slices.Clone(target)
	if i < 0 {
		c.Center = floats(start)
	}
	return c, nil
}

// within tells whether the molecules, rounded, lie in the ranges.
func within(molecules []float64, low, high []int64) bool {
	for i, v := range molecules {
		if r := math.Round(v); r < float64(low[i]) || r > float64(high[i]) {
			return false
		}
	}
	return true
}

// nearestIn gives the lattice point within the ranges nearest to the target: the
// target is first moved to the nearest point of ranges and totals.
func (k *coreMaker) nearestIn(target []float64, low, high []int64) ([]int64, bool) {
	moved, ok := k.m.class.nearestWithin(k.m.sys, target, low, high)
	if !ok {
		return nil, false
	}
	return k.lattice.nearest(moved, low, high)
}

// addDeclared adds a state of its own for a declared core that is no resting
// state.
func (k *coreMaker) addDeclared(c model.Core) {
	m := k.m
	s := State{
		Name: c.State, Kind: Declared, Molecules: slices.Clone(c.Center),
		Amounts: m.Network.Amounts(nil, c.Start), SlowRate: math.NaN(),
	}
	m.States = slices.Insert(m.States, len(m.Cores), s)
	m.Cores = append(m.Cores, c)
}

// settle sees that cores a and b, of which one at least is declared, do not meet:
// a core of the program's own is shrunk away from a declared one.
func (k *coreMaker) settle(a int, aDeclared bool, b int, bDeclared bool) error {
	m := k.m
	if aDeclared && bDeclared {
		return k.apart(&m.Cores[a], &m.Cores[b])
	}
	if aDeclared {
		a, b = b, a
	}
	own, declared := &m.Cores[a], &m.Cores[b]
	if declared.Contains(own.Start) {
		return &CoreError{declared.State, fmt.Sprintf(
			"its ranges hold the resting state %q (%v): call it [core.%s], or narrow the ranges", own.State, own.Start, own.State)}
	}
	if boxesApart(own, declared) {
		return nil
	}
	limit := k.boxDistance(k.shapes[a], own.Center, declared)
	k.shapes[a].radius = min(k.shapes[a].radius, touch*limit)
	c, err := k.core(a)
	m.Cores[a] = c
	return err
}

// boxDistance is the distance, in standard deviations, from the centre to the
// furthest of the bounds of a declared core that it violates: no point of the core
// is nearer.
func (k *coreMaker) boxDistance(e *ellipsoid, center []float64, c *model.Core) float64 {
	full := inMolecules(k.m.sys, k.m.class, e.cov)
	n := len(center)
	most := 0.0
	for i, v := range center {
		sd := math.Sqrt(max(full[i*n+i], 0))
		short := max(float64(c.Low[i])-v, v-float64(c.High[i]))
		switch {
		case short <= 0:
		case sd == 0:
			return math.Inf(1)
		default:
			most = max(most, short/sd)
		}
	}
	return most
}

func boxesApart(a, b *model.Core) bool {
	for i := range a.Low {
		if a.Low[i] > b.High[i] || b.Low[i] > a.High[i] {
			return true
		}
	}
	return false
}

// apart gives an error where two declared cores have a lattice point in common.
func (k *coreMaker) apart(a, b *model.Core) error {
	if boxesApart(a, b) {
		return nil
	}
	low, high := slices.Clone(a.Low), slices.Clone(a.High)
	for i := range low {
		low[i], high[i] = max(low[i], b.Low[i]), min(high[i], b.High[i])
	}
	if shared, ok := k.nearestIn(floats(a.Start), low, high); ok {
		return &CoreError{b.State, fmt.Sprintf("it overlaps [core.%s]: both hold the counts %v", a.State, shared)}
	}
	return nil
}

// warnHeld warns of declared cores that hold a saddle or another state that is not
// stable.
func (k *coreMaker) warnHeld(isDeclared []bool) {
	m := k.m
	for _, s := range m.States[len(m.Cores):] {
		if s.Kind.Stable() {
			continue
		}
		for i, c := range m.Cores {
			inside := isDeclared[i]
			for j, v := range s.Molecules {
				inside = inside && v >= float64(c.Low[j]) && v <= float64(c.High[j])
			}
			if inside {
				m.warn("[core.%s] holds the %v %q: a path there is as likely to turn back", c.State, s.Kind, s.Name)
			}
		}
	}
}
