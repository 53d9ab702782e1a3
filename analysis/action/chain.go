package action

import (
	"fmt"
	"math"
	"slices"
)

// A leg is a chain of states found so far.
type leg struct {
	s, err float64
	via    []string
}

// chain gives the pairs that no saddle joins the cheapest chain of pairs that one
// does (Dijkstra, Numer. Math. 1 (1959) 269, from each state).
func (r *Routes) chain() {
	for k := range r.Pairs {
		p := &r.Pairs[k]
		if len(p.Paths) > 0 || p.Never || p.Err != nil {
			continue
		}
		best, ok := r.cheapest(p.From)[p.To]
		switch {
		case ok:
			p.S, p.Error, p.Via = best.s, best.err, best.via
		case r.leavesNever(p.From):
			p.S, p.Never = math.Inf(1), true
		default:
			p.Err = fmt.Errorf("no saddle that was found leads from %s to %s", p.From, p.To)
		}
	}
	for k := range r.Pairs {
		if r.Pairs[k].Never {
			r.Pairs[k].S = math.Inf(1)
		}
	}
}

// cheapest gives the cheapest chain from a state to every other.
func (r *Routes) cheapest(from string) map[string]leg {
	done := map[string]leg{}
	open := map[string]leg{from: {}}
	for len(open) > 0 {
		name := ""
		for n, l := range open {
			if name == "" || l.s < open[name].s || l.s == open[name].s && n < name {
				name = n
			}
		}
		at := open[name]
		delete(open, name)
		done[name] = at
		for k := range r.Pairs {
			p := &r.Pairs[k]
			if _, seen := done[p.To]; seen || p.From != name || len(p.Paths) == 0 {
				continue
			}
			next := leg{at.s + p.S, at.err + p.Error, slices.Clone(at.via)}
			if name != from {
				next.via = append(next.via, name)
			}
			if old, known := open[p.To]; !known || next.s < old.s {
				open[p.To] = next
			}
		}
	}
	return done
}

// leavesNever tells that every saddle of a state is out of its reach.
func (r *Routes) leavesNever(from string) bool {
	never := false
	for k := range r.Pairs {
		p := &r.Pairs[k]
		if p.From == from && len(p.Paths) > 0 {
			return false
		}
		never = never || p.From == from && p.Never
	}
	return never
}
