package deterministic

import (
	"context"
	"slices"
)

// finder gathers the resting states of one network's class.
type finder struct {
	ctx        context.Context
	w          *workspace
	options    Options
	whole      *class // without frozen species: decides stability
	low, high  []float64
	floor      []float64 // Newton: smallest amount told from 0
	resolution []float64 // flows: amounts below are not resolved relatively
	limit      []float64 // flows: amounts that count as running away
	found      []*candidate
	starts     int // Newton starts and scan points
	flows      int
	ranAway    []int // species, by flow that ran away
	unsettled  int
	scanned    bool // every line was searched without a gap
	drifting   *ContinuumError
	lingering  []float64 // where a flow came to rest on no separate state, or nil
}

// candidate is a resting state with its type.
type candidate struct {
	*root
	kind     Kind
	values   []complex128
	unstable int
	probed   bool
}

// spectrumScale is the amounts that perturbations of each species are measured in.
func (f *finder) spectrumScale(x []float64) []float64 {
	scale := slices.Clone(f.resolution)
	for i, v := range x {
		scale[i] = max(scale[i], v)
	}
	return scale
}

func (f *finder) classify(r *root) *candidate {
	values, slack, ok := f.w.spectrum(f.whole, r.x, f.spectrumScale(r.x))
	c := &candidate{root: r, values: values}
	c.kind, c.unstable = kindOf(values, slack)
	if !ok || !r.simple() {
		c.kind = Degenerate
	}
	return c
}

// tryRoot polishes x, which it overwrites, and takes it up if it is a resting
// state inside its face. It gives the state, or nil.
func (f *finder) tryRoot(c *class, x []float64) *candidate {
	if !f.w.polish(c, x, f.floor) {
		return nil
	}
	return f.take(c, x)
}

// take adds the converged point x unless it is known or lies on a further face.
func (f *finder) take(c *class, x []float64) *candidate {
	for i, v := range x {
		if !c.frozen[i] && !(v > 0) {
			return nil
		}
	}
	if known := f.known(x); known != nil {
		return known
	}
	r := f.w.examine(c, x, f.floor)
	for k, known := range f.found {
		if !known.same(r) {
			continue
		}
		if r.quality.Isolation < known.quality.Isolation && countTrue(r.face.frozen) >= countTrue(known.face.frozen) {
			better := f.classify(r)
			better.probed = known.probed
			*f.found[k] = *better
		}
		return f.found[k]
	}
	f.found = append(f.found, f.classify(r))
	return f.found[len(f.found)-1]
}

// known gives the simple state that x is to within its own error bound, or nil.
func (f *finder) known(x []float64) *candidate {
	for _, k := range f.found {
		same := k.simple()
		for i, v := range x {
			same = same && abs(v-k.x[i]) <= 2*k.quality.Error[i]+4*epsilon*v
		}
		if same {
			return k
		}
	}
	return nil
}

// searchFace finds the resting states with every species present that the face
// does not freeze.
func (f *finder) searchFace(c *class) {
	switch c.dim() {
	case 0:
		x := make([]float64, c.n)
		for k, d := range c.dependent {
			x[d] = max(c.total[k], 0)
		}
		f.starts++
		f.tryRoot(c, x)
	case 1:
		f.scanLine(c)
	default:
		f.multiStart(c)
	}
}
