package branch

import (
	"math"
	"slices"

	"holdfast/model"
)

// term is what one firing of a reaction adds to a species' count.
type term struct {
	species int
	count   float64
	mean    *model.Node // of a burst, with constants named; nil otherwise
}

// channel is a reaction with its constants still free.
type channel struct {
	index     int // in Network.Reactions
	law       *model.Node
	terms     []term
	scaling   bool // it changes scaling species only: its propensity is copies times the law
	species   []int
	constants []int
}

// field is the equations of rest, with the knobs free: unknowns u are the amounts
// followed by the knobs. Equation i is dxᵢ/dt = 0, or, for the species in
// dependent, the conserved total of the same place. It holds scratch: one a
// goroutine.
type field struct {
	*setting
	n        int
	knobs    int
	fixed    []bool
	start    []float64
	channels []channel

	totals      []model.Total
	dependent   []int
	independent []int
	link        []float64 // n × len(independent): dx = link·dx_independent, in molecules

	dx, dc, db []float64
}

func newField(net *model.Network, knobs ...Knob) *field {
	totals := net.Conserved()
	f := &field{
		setting: newSetting(net, knobs, totals), n: len(net.Species), knobs: len(knobs), totals: totals,
		dx: make([]float64, len(net.Species)), dc: make([]float64, len(net.Constants)), db: make([]float64, len(net.Constants)),
	}
	for _, s := range net.Species {
		f.fixed = append(f.fixed, s.Fixed)
		f.start = append(f.start, s.Start)
	}
	for i := range net.Reactions {
		f.channels = append(f.channels, f.newChannel(i, &net.Reactions[i]))
	}
	f.choose()
	return f
}

func (f *field) newChannel(index int, r *model.Reaction) channel {
	c := channel{index: index, law: r.Free, scaling: true, species: r.Free.Reads(), constants: r.Free.Constants()}
	for _, t := range r.Net {
		c.terms = append(c.terms, term{species: t.Species, count: float64(t.Count)})
	}
	for _, t := range r.Bursts {
		mean := t.Mean
		if mean == nil {
			mean = model.Number(t.Burst)
		}
		c.terms = append(c.terms, term{species: t.Species, mean: mean})
	}
	for _, t := range c.terms {
		c.scaling = c.scaling && !f.fixed[t.species]
	}
	return c
}

// choose picks the species that each total's equation stands in for, by
// elimination with the largest weight as pivot, and the directions along the class.
func (f *field) choose() {
	rows := make([][]float64, len(f.totals))
	for k, t := range f.totals {
		rows[k] = make([]float64, f.n)
		for i, w := range t.Weights {
			rows[k][i] = float64(w)
		}
	}
	for k := range rows {
		f.dependent = append(f.dependent, pivotOf(rows[k]))
		eliminate(rows, k, f.dependent[k])
	}
	for i := range f.n {
		if !slices.Contains(f.dependent, i) {
			f.independent = append(f.independent, i)
		}
	}
	m := len(f.independent)
	f.link = make([]float64, f.n*m)
	for q, i := range f.independent {
		f.link[i*m+q] = 1
		for k, d := range f.dependent {
			f.link[d*m+q] = -rows[k][i]
		}
	}
}

func pivotOf(row []float64) int {
	best := 0
	for i, w := range row {
		if math.Abs(w) > math.Abs(row[best]) {
			best = i
		}
	}
	return best
}

// eliminate makes row k's entry at the pivot 1 and the other rows' 0.
func eliminate(rows [][]float64, k, pivot int) {
	p := rows[k][pivot]
	for i := range rows[k] {
		rows[k][i] /= p
	}
	for j := range rows {
		if w := rows[j][pivot]; j != k && w != 0 {
			for i := range rows[j] {
				rows[j][i] -= w * rows[k][i]
			}
		}
	}
}

// unit gives the molecules in one unit of species i at the present setting.
func (f *field) unit(i int) float64 {
	if f.fixed[i] {
		return 1
	}
	return f.copies
}

// columns is the number of unknowns, amounts and knobs.
func (f *field) columns() int { return f.n + f.knobs }

// evaluate writes the n equations at u into out and, unless jac is nil, their
// n×columns derivatives into jac.
func (f *field) evaluate(u, out, jac []float64) {
	f.turn(u[f.n:])
	clear(out)
	clear(jac)
	for i := range f.channels {
		f.add(&f.channels[i], u[:f.n], out, jac)
	}
	f.addTotals(u[:f.n], out, jac)
}

// add adds a reaction to the rate equations.
func (f *field) add(c *channel, x, out, jac []float64) {
	if len(c.terms) == 0 {
		return
	}
	if jac == nil {
		v := c.law.Eval(x, f.constants)
		for _, t := range c.terms {
			out[t.species] += f.change(c, t) * v
		}
		return
	}
	v := c.law.Gradient(x, f.constants, f.dx, f.dc)
	for _, t := range c.terms {
		a := f.change(c, t)
		out[t.species] += a * v
		row := jac[t.species*f.columns() : (t.species+1)*f.columns()]
		for _, j := range c.species {
			row[j] += a * f.dx[j]
		}
		for k := range f.knobs {
			row[f.n+k] += a*f.alongKnob(k, f.dc, c.constants) + f.changeSlope(c, t, k)*v
		}
	}
}

// alongKnob is the derivative in knob k of what has derivatives dc in the constants.
func (f *field) alongKnob(k int, dc []float64, constants []int) float64 {
	sum := 0.0
	for _, j := range constants {
		if s := f.slope[k][j]; s != 0 {
			sum += s * dc[j]
		}
	}
	return sum
}

// change is what one firing per unit of time adds to the species' amount, per
// unit of the law.
func (f *field) change(c *channel, t term) float64 {
	a := t.count
	if t.mean != nil {
		a += t.mean.Eval(nil, f.constants)
	}
	if !c.scaling {
		a /= f.unit(t.species)
	}
	return a
}

// changeSlope is the derivative of change in knob k.
func (f *field) changeSlope(c *channel, t term, k int) float64 {
	slope := 0.0
	if t.mean != nil {
		t.mean.Gradient(nil, f.constants, nil, f.db)
		slope = f.alongKnob(k, f.db, t.mean.Constants())
	}
	if c.scaling {
		return slope
	}
	unit := f.unit(t.species)
	if f.turned[k].kind == copiesKnob && !f.fixed[t.species] {
		return slope/unit - f.change(c, t)/unit
	}
	return slope / unit
}

// addTotals overwrites the dependent species' equations with the totals, in
// molecules: Σ wᵢ unitᵢ xᵢ = total + Σ wᵢ startᵢ (unitᵢ − unitᵢ today).
func (f *field) addTotals(x, out, jac []float64) {
	for k, d := range f.dependent {
		sum := -f.held[k]
		for i, w := range f.totals[k].Weights {
			if w != 0 {
				sum += float64(w) * (f.unit(i)*x[i] - f.start[i]*(f.unit(i)-f.net.Unit(i)))
			}
		}
		out[d] = sum
		if jac != nil {
			f.totalRow(k, x, jac[d*f.columns():(d+1)*f.columns()])
		}
	}
}

func (f *field) totalRow(k int, x, row []float64) {
	clear(row)
	for i, w := range f.totals[k].Weights {
		row[i] = float64(w) * f.unit(i)
	}
	for j, knob := range f.turned {
		switch {
		case knob.kind == totalKnob && knob.total == k:
			row[f.n+j] = -1
		case knob.kind == copiesKnob:
			for i, w := range f.totals[k].Weights {
				if !f.fixed[i] {
					row[f.n+j] += float64(w) * (x[i] - f.start[i])
				}
			}
		}
	}
}
