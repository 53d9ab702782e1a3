package deterministic

import (
	"math"
	"slices"

	"gonum.org/v1/gonum/stat/distuv"

	"holdfast/model"
)

// oneDeviation is the share of a normal law within one standard deviation.
const oneDeviation = 0.6826894921370859

// coreMaker makes the cores of a Map.
type coreMaker struct {
	m       *Map
	lattice *lattice
	shapes  []*ellipsoid // by stable state
}

// coreRadius is the radius, in standard deviations, that holds the given share
// of a normal law in m dimensions: 1 for the default share in one dimension. A
// fixed radius would not do: at 1 a core in eight dimensions holds a five-hundredth
// of the law, a path at rest in the state would seldom be seen to have arrived,
// and for an operator of one copy with k states, whose vertices lie √(1/p−1) from
// the mean, it would hold no lattice point at all.
func coreRadius(share float64, m int) float64 {
	if share == 0 {
		share = oneDeviation
	}
	return math.Sqrt(distuv.ChiSquared{K: float64(max(m, 1))}.Quantile(share))
}

// makeCores makes a core for every stable state: the ellipsoid of its linear
// noise, shrunk to at most half the way to any state that is not stable (there
// the linear noise puts the barrier's fourth part) and until it meets no other,
// and the nearest lattice point alone where that is not inside.
func (m *Map) makeCores(o Options) error {
	k := &coreMaker{m: m, lattice: newLattice(m.Network)}
	stable := countKind(m.States, Kind.Stable)
	radius := coreRadius(o.CoreShare, m.class.dim())
	for i := range stable {
		k.shapes = append(k.shapes, k.shape(&m.States[i], radius))
	}
	k.keepFromUnstable()
	k.keepApart()
	for i := range stable {
		c, err := k.core(i)
		if err != nil {
			return err
		}
		m.Cores = append(m.Cores, c)
	}
	return k.declare()
}

// independent picks the independent species of amounts in molecules.
func (k *coreMaker) independent(molecules []float64) []float64 {
	c := k.m.class
	out := make([]float64, c.dim())
	for p, i := range c.independent {
		out[p] = molecules[i]
	}
	return out
}

func (k *coreMaker) shape(s *State, radius float64) *ellipsoid {
	c := k.m.class
	m := c.dim()
	cov := make([]float64, m*m)
	for p, i := range c.independent {
		for q, j := range c.independent {
			if s.Covariance != nil {
				cov[p*m+q] = s.Covariance[i*c.n+j]
			}
		}
	}
	return newEllipsoid(k.independent(s.Molecules), cov, radius)
}

func (k *coreMaker) keepFromUnstable() {
	for i := range k.m.States {
		s := &k.m.States[i]
		if s.Kind.Stable() || s.Kind == Declared {
			continue
		}
		u := k.independent(s.Molecules)
		for _, e := range k.shapes {
			e.radius = min(e.radius, e.distance(u)/2)
		}
	}
}

// touch keeps shrunk cores this far short of each other.
const touch = 0.999

func (k *coreMaker) keepApart() {
	for i, a := range k.shapes {
		for _, b := range k.shapes[:i] {
			if g := touch * gap(a, b); g < 1 {
				a.radius, b.radius = a.radius*g, b.radius*g
			}
		}
	}
}

// core makes the core of stable state i.
func (k *coreMaker) core(i int) (model.Core, error) {
	s, e := &k.m.States[i], k.shapes[i]
	n := len(s.Molecules)
	low, high := make([]int64, n), slices.Repeat([]int64{math.MaxInt64}, n)
	start, ok := k.lattice.nearest(s.Molecules, low, high)
	if !ok {
		return model.Core{}, &CoreError{s.Name, "no whole numbers of molecules near the state keep the conserved totals"}
	}
	c := model.Core{State: s.Name, Center: slices.Clone(s.Molecules), Start: start}
	if !(e.distance(k.independent(floats(start))) <= e.radius) {
		c.Low, c.High = slices.Clone(start), slices.Clone(start)
		return c, nil
	}
	c.Low, c.High = low, high
	k.bounds(&c, e)
	c.Shape = k.fullShape(e)
	return c, nil
}

// bounds sets Low and High to the box about the ellipsoid, which its start is in.
func (k *coreMaker) bounds(c *model.Core, e *ellipsoid) {
	full := inMolecules(k.m.sys, k.m.class, e.cov)
	n := len(c.Center)
	for i := range n {
		half := e.radius * math.Sqrt(max(full[i*n+i], 0)) * (1 + 1e-9)
		c.Low[i] = max(min(int64(math.Ceil(c.Center[i]-half)), c.Start[i]), 0)
		c.High[i] = max(int64(math.Floor(c.Center[i]+half)), c.Start[i])
	}
}

// fullShape is the pseudo-inverse of the full covariance over radius²: with the
// link L in molecules, L(LᵀL)⁻¹ C⁻¹ (LᵀL)⁻¹Lᵀ.
func (k *coreMaker) fullShape(e *ellipsoid) []float64 {
	s, c := k.m.sys, k.m.class
	n, m := c.n, e.m
	link := make([]float64, n*m)
	f := newLU(m)
	for i := range n {
		for p, j := range c.independent {
			link[i*m+p] = c.link[i*m+p] * s.unit[i] / s.unit[j]
		}
	}
	for p := range m {
		for q := range m {
			for i := range n {
				f.a[p*m+q] += link[i*m+p] * link[i*m+q]
			}
		}
	}
	f.factor()
	for i := range n {
		f.solve(link[i*m : (i+1)*m])
	}
	out := make([]float64, n*n)
	for i := range n {
		for j := range n {
			for p := range m {
				for q := range m {
					out[i*n+j] += link[i*m+p] * e.inverse[p*m+q] * link[j*m+q]
				}
			}
			out[i*n+j] /= e.radius * e.radius
		}
	}
	return out
}

func floats(counts []int64) []float64 {
	out := make([]float64, len(counts))
	for i, k := range counts {
		out[i] = float64(k)
	}
	return out
}
