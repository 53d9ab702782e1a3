package action

import (
	"math"
	"slices"
)

// path turns a curve of least action into a Path.
func (s *system) path(p *Problem, c *curve, value, change float64) (*Path, error) {
	out := &Path{
		From: p.From.Name, Saddle: p.Saddle.Name, To: p.To, S: value, Error: change, Elements: c.elements,
		Extinct: p.extinct(),
	}
	gradient, ok := c.gradient()
	if !ok {
		return nil, &PathError{p.From.Name, p.Saddle.Name, errBarred.Error()}
	}
	out.Gradient = gradient
	out.addClimb(c)
	out.Points[0], out.Points[out.Summit] = slices.Clone(p.From.Amounts), slices.Clone(p.Saddle.Amounts)
	clear(out.Momenta[0])
	if !out.Extinct {
		clear(out.Momenta[out.Summit])
	}
	out.addDown(s, p.Down)
	return out, nil
}

// extinct tells that species are gone at the saddle which no reaction brings back.
func (p *Problem) extinct() bool {
	for _, a := range p.Network.Absorbing() {
		if empty(a, p.Saddle.Amounts) && !empty(a, p.From.Amounts) {
			return true
		}
	}
	return false
}

// addClimb adds the points up to the saddle: the nodes, with the momenta that the
// points of quadrature about them have.
func (out *Path) addClimb(c *curve) {
	z, v := make([]float64, c.sys.m), make([]float64, c.sys.m)
	length := lengths(c.polygon())
	spent := 0.0
	for e := range c.elements {
		var cost [gauss]float64
		for q := range gauss {
			c.point(e, &c.element.value[q], &c.element.slope[q], z, v)
			cost[q], _, _ = c.local.cost(z, v, c.p[e*gauss+q])
		}
		last := degree - 1
		if e == c.elements-1 {
			last = degree
		}
		for k := range last + 1 {
			out.add(c, e, k, length[min((e*degree+k)*fine, len(length)-1)], spent+dot(c.element.upTo[k][:], cost[:]))
		}
		spent += dot(c.element.upTo[degree][:], cost[:])
	}
	out.Summit = len(out.Points) - 1
}

// add adds node k of element e.
func (out *Path) add(c *curve, e, k int, length, spent float64) {
	x, p := make([]float64, c.sys.n), make([]float64, c.sys.m)
	c.sys.amounts(c.node[e*degree+k], x)
	for i, v := range x {
		x[i] = max(v, 0)
	}
	for q, w := range c.element.ends[k] {
		addScaled(p, w, c.p[e*gauss+q])
	}
	out.Points = append(out.Points, x)
	out.Momenta = append(out.Momenta, c.sys.momenta(p))
	out.Position = append(out.Position, length)
	if k := len(out.Action); k > 0 {
		spent = max(spent, out.Action[k-1]) // but for rounding it only grows
	}
	out.Action = append(out.Action, min(max(spent, 0), out.S))
}

// addDown adds the flow down from the saddle and turns lengths into positions.
func (out *Path) addDown(s *system, down [][]float64) {
	line := [][]float64{s.coordinates(out.Points[out.Summit])}
	climbed := out.Position[out.Summit]
	for _, x := range down {
		line = append(line, s.coordinates(x))
	}
	for k, length := range lengths(line) {
		if k == 0 || length == 0 {
			continue
		}
		out.Points = append(out.Points, slices.Clone(down[k-1]))
		out.Momenta = append(out.Momenta, make([]float64, s.n))
		out.Position = append(out.Position, climbed+length)
		out.Action = append(out.Action, out.S)
	}
	out.Action[out.Summit] = out.S
	out.Length = out.Position[len(out.Position)-1]
	for k := range out.Position {
		out.Position[k] /= out.Length
	}
}

// gradient finds ∂S/∂k for each constant. The time of a stretch is its parameter's
// over λ.
func (c *curve) gradient() ([]float64, bool) {
	out := make([]float64, len(c.sys.net.Constants))
	one := make([]float64, len(out))
	z, v := make([]float64, c.sys.m), make([]float64, c.sys.m)
	for e := range c.elements {
		for q := range gauss {
			c.point(e, &c.element.value[q], &c.element.slope[q], z, v)
			p := c.p[e*gauss+q]
			_, lambda, ok := c.local.cost(z, v, p)
			if !ok {
				return nil, false
			}
			if lambda > 0 {
				c.local.constants(p, -c.element.weight[q]/lambda, one, out)
			}
		}
	}
	return out, true
}

// constants adds weight·∂H/∂k to out; one is scratch.
func (l *local) constants(p []float64, weight float64, one, out []float64) {
	net := l.sys.net
	for c := range l.sys.channels {
		ch := &l.sys.channels[c]
		net.FluxConstants(ch.reaction, l.x, one)
		addFinite(out, weight*math.Expm1(l.exponent[c]), one)
		for i := range ch.bursts {
			b := &ch.bursts[i]
			mean := net.Reactions[ch.reaction].Bursts[b.term].Mean
			if mean == nil {
				continue
			}
			mean.Gradient(nil, net.ConstantValues(), nil, one)
			e := math.Expm1(dot(b.change, p))
			addFinite(out, weight*l.rate[c]*math.Exp(l.exponent[c])*e/(1-b.mean*e), one)
		}
	}
}

// addFinite adds f·b to a, but nothing where f is 0 or b has no value.
func addFinite(a []float64, f float64, b []float64) {
	for i, v := range b {
		if f != 0 && v != 0 {
			a[i] += f * v
		}
	}
}
