package staged

import (
	"fmt"
	"math"
	"slices"

	"holdfast/ssa"
)

// A Coordinate measures how far a run has come from one state to another: a line of
// Points from the one to the other, in molecules, and at each of them a direction,
// Normals, in which progress is made. Rungs are half-spaces whose border goes through
// a point of the line, at right angles to the direction there.
type Coordinate struct {
	// Name says in a few words what progress is measured along.
	Name    string
	Points  [][]float64
	Normals [][]float64
}

// Line measures progress along the straight line between two points in molecules.
// The direction is that in which linear noise leads: covariance⁻¹(to − from), with the
// covariance (molecules², row-major) about from, since the likeliest way out to a
// plane at right angles to it goes that way; without covariance, to − from.
func Line(from, to, covariance []float64) Coordinate {
	difference := make([]float64, len(from))
	for i := range difference {
		difference[i] = to[i] - from[i]
	}
	normal := difference
	if covariance != nil {
		normal = whiten(covariance, difference)
	}
	return Coordinate{Name: "the straight line between the states", Points: [][]float64{from, to}, Normals: [][]float64{normal, normal}}
}

// Count measures progress by the count of one species, of index i and the given name.
func Count(from, to []float64, i int, name string) (Coordinate, error) {
	if math.Abs(to[i]-from[i]) < 1 {
		return Coordinate{}, fmt.Errorf("the count of %s is nearly the same in both states (%.4g and %.4g): it tells no progress; take another species", name, from[i], to[i])
	}
	normal := make([]float64, len(from))
	normal[i] = math.Copysign(1, to[i]-from[i])
	return Coordinate{Name: "the count of " + name, Points: [][]float64{from, to}, Normals: [][]float64{normal, normal}}, nil
}

// rungsOffered is the number of rungs that the pilot chooses from.
const rungsOffered = 400

// A step is a rung with the point of the line that it goes through.
type step struct {
	ssa.Rung
	point []float64
	share float64 // of the line's points, from 0 to 1
}

// steps gives the rungs to choose from: equally spaced on the line by progress, one
// apart in the value of a direction at least.
func (c *Coordinate) steps() []step {
	var out []step
	segments := len(c.Points) - 1
	each := (rungsOffered + segments - 1) / segments
	for s := range segments {
		for k := range each {
			t := float64(k+1) / float64(each)
			point, normal := between(c.Points[s], c.Points[s+1], t), between(c.Normals[s], c.Normals[s+1], t)
			next := step{rung(point, normal), point, (float64(s) + t) / float64(segments)}
			if n := len(out); n == 0 || next.Level != out[n-1].Level || !slices.Equal(next.Weights, out[n-1].Weights) {
				out = append(out, next)
			}
		}
	}
	return out
}

func between(a, b []float64, t float64) []float64 {
	out := make([]float64, len(a))
	for i := range a {
		out[i] = a[i] + t*(b[i]-a[i])
	}
	return out
}

// resolution is the largest weight of a rung.
const resolution = 1 << 16

// rung turns a point and a direction into whole numbers. A direction along one
// species has the weight 1.
func rung(point, normal []float64) ssa.Rung {
	largest, several := 0.0, 0
	for _, w := range normal {
		largest = math.Max(largest, math.Abs(w))
		if w != 0 {
			several++
		}
	}
	scale := resolution / largest
	if several == 1 {
		scale = 1 / largest
	}
	r := ssa.Rung{Weights: make([]int64, len(normal))}
	level := 0.0
	for i, w := range normal {
		r.Weights[i] = int64(math.Round(w * scale))
		level += float64(r.Weights[i]) * point[i]
	}
	r.Level = int64(math.Ceil(level))
	return r
}
