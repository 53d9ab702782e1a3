package action

import (
	"math"

	"holdfast/model"
)

// A system is a network in coordinates of the compatibility class: amounts are
// origin + frame·z, with as many z as there are independent directions of
// change, and the momenta belonging to z are frameᵀ·θ.
type system struct {
	net      *model.Network
	n, m     int       // species, coordinates
	frame    []float64 // n×m: amounts for one unit of each coordinate
	dual     []float64 // n×m: θ for one unit of each coordinate's momentum
	origin   []float64
	channels []channel
}

// A channel is a reaction that can fire.
type channel struct {
	reaction int
	change   []float64 // its whole-number part, in coordinates
	bursts   []burst
}

// A burst is a geometric product of a channel.
type burst struct {
	change []float64 // of one molecule, in coordinates
	mean   float64
	term   int // in Reaction.Bursts
}

// newSystem sets up the coordinates for paths from one point to another.
func newSystem(net *model.Network, from, to []float64, dead []bool) *system {
	s := &system{net: net, n: len(net.Species), origin: from}
	scale := scales(from, to)
	var alive []int
	var columns [][]float64
	for r := range net.Reactions {
		if !silent(&net.Reactions[r]) && !dead[r] {
			alive = append(alive, r)
			columns = append(columns, scaledChanges(&net.Reactions[r], scale)...)
		}
	}
	basis := orthonormal(columns)
	s.m = len(basis)
	s.frame, s.dual = make([]float64, s.n*s.m), make([]float64, s.n*s.m)
	for k, b := range basis {
		for i, v := range b {
			s.frame[i*s.m+k] = v * scale[i]
			s.dual[i*s.m+k] = v / scale[i]
		}
	}
	for _, r := range alive {
		s.channels = append(s.channels, s.channel(r))
	}
	return s
}

// silent tells that a reaction cannot fire whatever the amounts.
func silent(r *model.Reaction) bool {
	return r.MassAction && r.Coefficient == 0 || r.Law.Op == model.OpNumber && r.Law.Value == 0
}

// scales gives a length for each species, so that paths have about the same
// extent in all: it sets what even spacing means, and no result depends on it.
func scales(from, to []float64) []float64 {
	most := 0.0
	for i := range from {
		most = max(most, from[i], to[i])
	}
	out := make([]float64, len(from))
	for i := range out {
		out[i] = math.Abs(from[i]-to[i]) + 0.01*max(from[i], to[i]) + 1e-6*most
	}
	return out
}

// scaledChanges lists the directions in which a reaction changes the amounts.
func scaledChanges(r *model.Reaction, scale []float64) [][]float64 {
	var out [][]float64
	net := make([]float64, len(scale))
	for _, t := range r.Net {
		net[t.Species] = float64(t.Count) / scale[t.Species]
	}
	out = append(out, net)
	for _, t := range r.Bursts {
		one := make([]float64, len(scale))
		one[t.Species] = 1 / scale[t.Species]
		out = append(out, one)
	}
	return out
}

func (s *system) channel(r int) channel {
	reaction := &s.net.Reactions[r]
	c := channel{reaction: r, change: make([]float64, s.m)}
	for _, t := range reaction.Net {
		s.addDual(c.change, t.Species, float64(t.Count))
	}
	for i, t := range reaction.Bursts {
		b := burst{change: make([]float64, s.m), mean: t.Burst, term: i}
		s.addDual(b.change, t.Species, 1)
		c.bursts = append(c.bursts, b)
	}
	return c
}

// addDual adds count molecules of a species to a change in coordinates.
func (s *system) addDual(change []float64, species int, count float64) {
	for k := range change {
		change[k] += count * s.dual[species*s.m+k]
	}
}

// amounts writes the amounts at z into x.
func (s *system) amounts(z, x []float64) {
	for i := range x {
		x[i] = s.origin[i] + dot(s.frame[i*s.m:(i+1)*s.m], z)
	}
}

// coordinates gives z of amounts that lie on the class.
func (s *system) coordinates(x []float64) []float64 {
	z := make([]float64, s.m)
	for i := range x {
		for k := range z {
			z[k] += s.dual[i*s.m+k] * (x[i] - s.origin[i])
		}
	}
	return z
}

// momenta gives θ by species of the momenta in coordinates.
func (s *system) momenta(p []float64) []float64 {
	out := make([]float64, s.n)
	for i := range out {
		out[i] = dot(s.dual[i*s.m:(i+1)*s.m], p)
	}
	return out
}
