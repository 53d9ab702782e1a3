package lattice

import "math"

// bound is the largest relative error that cutting the lattice off can cause in
// the mean dwell time of an origin.
//
// Leaving the box is an extra way for a dwell to end (finite state projection:
// Munsky and Khammash, J. Chem. Phys. 124 (2006) 044104), so the computed mean T₀
// is below the true mean T. Let ε be the probability of leaving the box before
// the flip, from the start. Then T = T₀ + ε·(mean time left after leaving). A
// path that has left comes back to some point of the box, from where it takes no
// longer than the longest mean time Tₘ of all points, and leaves again before the
// flip with a probability of at most 1−κ, κ being the smallest chance of
// flipping first, of all points. With mean time outside at most Tₘ an excursion,
// the time left is at most 2Tₘ/κ, and
//
//	0 ≤ T − T₀ ≤ 2 ε Tₘ/κ.
//
// That an excursion outside lasts no longer than the slowest flip from inside is
// the one assumption; it fails only where counts run away. The probabilities of
// the targets are each off by at most ε.
func (o *origin) bound() float64 {
	if o.time == nil || o.leave == 0 {
		return 0
	}
	return 2 * o.leave * o.longest / (o.mean * o.weakest)
}

func (s *solver) worstBound() float64 {
	worst := 0.0
	for _, o := range s.origin {
		if b := o.bound(); !(b <= worst) {
			worst = b
		}
	}
	if math.IsNaN(worst) {
		return math.Inf(1)
	}
	return worst
}

// A visit is where paths spend their time: what decides where the box must grow.
type visit struct {
	times []float64 // expected time in each node, by position
	scale float64   // truncation error for a rate of leaving of 1
}

// visits lists the origins' visits. What matters is leaving relative to flipping,
// whichever comes first.
func (s *solver) visits() []visit {
	var out []visit
	for _, o := range s.origin {
		if o.time != nil && o.leave > 0 {
			scale := 2 * o.longest / (o.mean * o.weakest) / max(o.flipping, math.SmallestNonzeroFloat64)
			out = append(out, visit{o.stay[0], scale})
		}
	}
	return out
}

// grown is the next box to try: each face through which too much leaves is moved
// out as far as the decay of the occupied times near it says is needed.
func (s *solver) grown(visits []visit) Box {
	b := s.box.clone()
	faces := 2 * s.species
	need := make([]float64, faces) // natural logarithm of the reduction needed
	for _, v := range visits {
		for f, flow := range s.flows(v.times) {
			need[f] = max(need[f], math.Log(flow)+math.Log(v.scale)+math.Log(2*float64(faces)/s.problem.truncation()))
		}
	}
	moved := false
	for f, n := range need {
		if n > 0 {
			moved = s.move(b, f, n, visits) || moved
		}
	}
	if !moved {
		for sp := range b.High {
			b.High[sp] += (b.High[sp]-b.Low[sp])/4 + 1
		}
	}
	return b
}

// flows gives the rate of leaving by each face.
func (s *solver) flows(times []float64) []float64 {
	out := make([]float64, 2*s.species)
	for _, e := range s.exits {
		out[e.face] += times[s.position[e.node]] * e.rate
	}
	return out
}

// move shifts one face by what a fall of exp(−need) takes, and at most by the
// box's width.
func (s *solver) move(b Box, face int, need float64, visits []visit) bool {
	sp, up := face/2, face%2 == 1
	width := b.High[sp] - b.Low[sp] + 1
	step := width
	if slope := s.slope(sp, up, visits); slope > 0 {
		step = int64(min(float64(width), 1.02*need/slope+2))
	}
	if up {
		b.High[sp] += step
		return true
	}
	before := b.Low[sp]
	b.Low[sp] = max(0, before-step)
	return b.Low[sp] != before
}

// slope is how fast the occupied time falls towards a face, per molecule: the
// slowest of the visits. Laws fall faster the further out, so it is taken near
// the face, though not where the cut itself bends it.
func (s *solver) slope(sp int, up bool, visits []visit) float64 {
	low, high := s.box.Low[sp], s.box.High[sp]
	width := high - low + 1
	near, far := width/40+1, width/12+2
	if far >= width {
		return 0
	}
	if up {
		near, far = width-1-near, width-1-far
	}
	least := math.Inf(1)
	for _, v := range visits {
		m := make([]float64, width)
		for i, node := range s.node {
			m[int64(s.point(int(node))[sp])-low] += v.times[i]
		}
		least = min(least, math.Log(m[far]/m[near])/math.Abs(float64(far-near)))
	}
	return least
}
