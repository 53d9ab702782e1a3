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
	moved := false
	for face := range 2 * s.species {
		if step := s.step(face, visits); step > 0 {
			moved = b.move(face, step) || moved
		}
	}
	if !moved {
		for sp := range b.High {
			b.High[sp] += (b.High[sp]-b.Low[sp])/4 + 1
		}
	}
	return b
}

// move shifts one face outwards, not below 0, and tells whether it moved.
func (b Box) move(face int, step int64) bool {
	sp := face / 2
	if face%2 == 1 {
		b.High[sp] += step
		return true
	}
	before := b.Low[sp]
	b.Low[sp] = max(0, before-step)
	return b.Low[sp] != before
}

// flows gives the rate of leaving by each face.
func (s *solver) flows(times []float64) []float64 {
	out := make([]float64, 2*s.species)
	for _, e := range s.exits {
		out[e.face] += times[s.position[e.node]] * e.rate
	}
	return out
}

// step is how far a face must move for every visit, at most the box's width.
func (s *solver) step(face int, visits []visit) int64 {
	faces := float64(2 * s.species)
	furthest := 0.0
	for _, v := range visits {
		// the natural logarithm of the reduction needed
		need := math.Log(s.flows(v.times)[face]) + math.Log(v.scale) + math.Log(2*faces/s.problem.truncation())
		if need > 0 {
			furthest = max(furthest, s.reach(face, v, need))
		}
	}
	sp := face / 2
	return int64(math.Ceil(min(furthest, float64(s.box.High[sp]-s.box.Low[sp]+1))))
}

// reach is how many molecules beyond a face the occupied time has fallen by
// exp(−need): its logarithm is continued as a parabola, since laws fall faster the
// further out.
func (s *solver) reach(face int, v visit, need float64) float64 {
	width := int(s.box.High[face/2] - s.box.Low[face/2] + 1)
	near, far := width/40+1, width/12+2
	end := 2*far - near
	if end >= width {
		return float64(width)
	}
	m := s.profile(face, v)
	gap := float64(far - near)
	slope, inner := math.Log(m[far]/m[near])/gap, math.Log(m[end]/m[far])/gap
	if !(slope > 0) {
		return float64(width)
	}
	bend := max(slope-inner, 0) / gap
	slope += bend * (gap/2 + float64(near)) // at the face
	if bend == 0 {
		return 1 + 1.05*need/slope
	}
	return 1 + 1.05*(math.Sqrt(slope*slope+2*bend*need)-slope)/bend
}

// profile is the occupied time by distance from a face.
func (s *solver) profile(face int, v visit) []float64 {
	sp := face / 2
	low, high := s.box.Low[sp], s.box.High[sp]
	m := make([]float64, high-low+1)
	for i, node := range s.node {
		k := int64(s.point(int(node))[sp])
		if face%2 == 1 {
			m[high-k] += v.times[i]
		} else {
			m[k-low] += v.times[i]
		}
	}
	return m
}
