package branch

import (
	"fmt"
	"math"

	"holdfast/model"
)

// kink is a min, max or abs in a reaction's law: it has no derivative where its
// arguments meet (for abs, where its argument is 0).
type kink struct {
	law  *channel
	node *model.Node
}

// kinks lists those of all laws.
func (f *field) kinks() []kink {
	var out []kink
	for i := range f.channels {
		c := &f.channels[i]
		c.law.Walk(func(n *model.Node) {
			if n.Op == model.OpMin || n.Op == model.OpMax || n.Op == model.OpAbs {
				out = append(out, kink{c, n})
			}
		})
	}
	return out
}

// side gives the difference of the arguments at u: its sign tells which holds.
func (f *field) side(k kink, u []float64) float64 {
	f.turn(u[f.n:])
	v := k.node.Args[0].Eval(u[:f.n], f.constants)
	if k.node.Op != model.OpAbs {
		v -= k.node.Args[1].Eval(u[:f.n], f.constants)
	}
	return v
}

// along tells whether u lies on the kink to within rounding.
func (f *field) along(k kink, u []float64) bool {
	f.turn(u[f.n:])
	size := 0.0
	for _, a := range k.node.Args {
		size = max(size, math.Abs(a.Eval(u[:f.n], f.constants)))
	}
	return math.Abs(f.side(k, u)) <= 1e-12*size
}

// rough says which law has no finite derivative at u; empty where all have.
func (f *field) rough(u []float64) string {
	f.turn(u[f.n:])
	for i := range f.channels {
		c := &f.channels[i]
		v := c.law.Gradient(u[:f.n], f.constants, f.dx, f.dc)
		if math.IsInf(largest(f.dx), 1) || math.IsInf(v, 0) || math.IsNaN(v) {
			return fmt.Sprintf("the law of reaction %q has no finite derivative there", f.net.Reactions[c.index].Name)
		}
	}
	return ""
}

// sideGradient gives side and writes its derivatives in the unknowns into grad.
func (f *field) sideGradient(k kink, u, grad []float64) float64 {
	f.turn(u[f.n:])
	clear(grad)
	value := 0.0
	for i, a := range k.node.Args {
		sign := 1.0
		if i == 1 {
			sign = -1
		}
		value += sign * a.Gradient(u[:f.n], f.constants, f.dx, f.dc)
		for j, d := range f.dx {
			grad[j] += sign * d
		}
		for j := range f.knobs {
			grad[f.n+j] += sign * f.alongKnob(j, f.dc, a.Constants())
		}
	}
	return value
}

// text says where the kink is.
func (f *field) text(k kink) string {
	species, constants := make([]string, f.n), make([]string, len(f.net.Constants))
	for i, s := range f.net.Species {
		species[i] = s.Name
	}
	for i, c := range f.net.Constants {
		constants[i] = c.Name
	}
	return fmt.Sprintf("the law of reaction %q has no derivative here, at the kink of %s", f.net.Reactions[k.law.index].Name, k.node.Format(species, constants))
}

// kinkSystem is the equations of rest together with side = 0.
type kinkSystem struct {
	f *field
	k kink
}

func (s *kinkSystem) columns() int { return s.f.columns() }

func (s *kinkSystem) evaluate(u, out, jac []float64) {
	n, cols := s.f.n, s.f.columns()
	s.f.evaluate(u, out[:n], jac[:n*cols])
	out[n] = s.f.sideGradient(s.k, u, jac[n*cols:])
}
