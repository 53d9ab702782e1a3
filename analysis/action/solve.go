package action

import (
	"context"
	"errors"
	"fmt"
	"math"
)

// Solve finds a path of least action from a stable resting state to a saddle.
//
// The path is made of elements, polynomials of degree 4 on a mesh graded towards its
// ends; their nodes are moved across the path by Newton's method until the action,
// by Gauss's quadrature, is least (a Ritz method: the error of S is of second order in
// that of the path). Then the elements are doubled until S stays the same to
// Tolerance. The minimum is a local one: the cheapest of those that the guesses lead
// to.
//
// Errors: *FixedNoiseError, *EndError, *NeverError, *RateError, *PathError, and that
// of ctx. If the elements are spent before Tolerance is reached there is no error;
// Path.Error says what was.
func Solve(ctx context.Context, p Problem) (*Path, error) {
	if err := p.check(); err != nil {
		return nil, err
	}
	s := newSystem(p.Network, p.From.Amounts, p.Saddle.Amounts, p.dead())
	if err := s.holds(&p); err != nil {
		return nil, err
	}
	best, value, err := s.coarse(ctx, &p)
	if err != nil {
		return nil, err
	}
	curve, value, change, err := s.refine(ctx, best, value, &p)
	if err != nil {
		return nil, err
	}
	return s.path(&p, curve, value, change)
}

// holds checks that the saddle can be reached by the reactions at all.
func (s *system) holds(p *Problem) error {
	if s.m == 0 {
		return &PathError{p.From.Name, p.Saddle.Name, "no reaction fires between them"}
	}
	x := make([]float64, s.n)
	s.amounts(s.coordinates(p.Saddle.Amounts), x)
	for i, scale := range scales(p.From.Amounts, p.Saddle.Amounts) {
		if math.Abs(x[i]-p.Saddle.Amounts[i]) > 1e-6*scale {
			return &PathError{p.From.Name, p.Saddle.Name, "they do not have the same conserved totals"}
		}
	}
	return nil
}

// lines gives the lines to start from, in coordinates.
func (s *system) lines(p *Problem) [][][]float64 {
	straight := [][]float64{make([]float64, s.m), s.coordinates(p.Saddle.Amounts)}
	out := [][][]float64{straight}
	for _, guess := range p.Guesses {
		line := [][]float64{straight[0]}
		for _, x := range guess {
			line = append(line, s.coordinates(x))
		}
		out = append(out, append(line, straight[1]))
	}
	return out
}

// coarse finds the cheapest path in few elements.
func (s *system) coarse(ctx context.Context, p *Problem) (*curve, float64, error) {
	var best *curve
	least := math.Inf(1)
	reason := errBarred
	for _, line := range s.lines(p) {
		c := newCurve(s, coarsest, line)
		value, err := c.settle(ctx)
		if ctx.Err() != nil {
			return nil, 0, ctx.Err()
		}
		if err != nil {
			reason = err
		}
		if !errors.Is(err, errBarred) && value < least*(1-1e-9) {
			best, least = c, value
		}
	}
	if best == nil {
		return nil, 0, s.blame(p, reason)
	}
	return best, least, nil
}

// settle moves the nodes until the action is least and they are spread as they
// should be.
func (c *curve) settle(ctx context.Context) (float64, error) {
	for range 20 {
		value, err := c.relax(ctx)
		if err != nil || c.uneven() < lumpy {
			return value, err
		}
		c.lay(c.polygon())
	}
	return c.relax(ctx)
}

// refine doubles the elements until S stays the same.
func (s *system) refine(ctx context.Context, c *curve, value float64, p *Problem) (*curve, float64, float64, error) {
	change := math.Inf(1)
	for 2*c.elements <= p.Elements {
		d := c.doubled()
		next, err := d.settle(ctx)
		if ctx.Err() != nil {
			return nil, 0, 0, ctx.Err()
		}
		if err != nil && !math.IsInf(change, 1) {
			break // too fine for the digits of the states; change is the error of what there is
		}
		if err != nil {
			return nil, 0, 0, &PathError{p.From.Name, p.Saddle.Name, fmt.Sprintf("%v (with %d elements)", err, d.elements)}
		}
		change = math.Abs(value - next)
		c, value = d, next
		if change <= p.Tolerance*math.Abs(value) && c.elements >= fewest {
			break
		}
	}
	return c, value, change, nil
}

// blame finds why no line could be started from.
func (s *system) blame(p *Problem, reason error) error {
	x := make([]float64, s.n)
	line := s.lines(p)[0]
	for k := 1; k < 200; k++ {
		z := make([]float64, s.m)
		addScaled(z, float64(k)/200, line[1])
		s.amounts(z, x)
		for _, c := range s.channels {
			if a := s.net.Flux(c.reaction, x); !(a >= 0 && a <= math.MaxFloat64) {
				return &RateError{s.net.Reactions[c.reaction].Name, speciesNames(s), x, a}
			}
		}
	}
	return &PathError{p.From.Name, p.Saddle.Name, reason.Error()}
}

func speciesNames(s *system) []string {
	var out []string
	for _, species := range s.net.Species {
		out = append(out, species.Name)
	}
	return out
}
