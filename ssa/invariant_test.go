package ssa

import (
	"math"
	"math/rand/v2"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// stepper makes a worker with one lane under way.
func stepper(t *testing.T, p Plan, k func(*worker) kernel) (*worker, *lane) {
	t.Helper()
	p.Runs, p.From = 1, -1
	p, err := p.normal()
	if err != nil {
		t.Fatal(err)
	}
	j := newJob(newSystem(p))
	j.kernel = k
	w := newWorker(j, 1)
	w.begin(&w.lanes[0])
	return w, &w.lanes[0]
}

// fresh is the sum of all propensities, straight from the network.
func fresh(p *Plan, counts []int64) (sum float64) {
	for r := range p.Network.Reactions {
		sum += p.Network.Propensity(r, counts)
	}
	return sum
}

// invariants are plans whose sums have parts of very different sizes.
func invariants() map[string]Plan {
	return map[string]Plan{
		"latch":         {Network: zoo.Latch(100)},
		"schlögl":       {Network: zoo.Schlogl(), Start: []int64{100}},
		"dimer switch":  {Network: zoo.DimerSwitch()},
		"chain":         {Network: zoo.Chain(40, 1, 100)},
		"telegraph":     {Network: zoo.Telegraph()},
		"bursts":        {Network: zoo.BurstExpression(1, 20, 0.1)},
		"batch, copies": {Network: zoo.SymmetricRepression(5, 1000)},
	}
}

// Running sums are those of a fresh sum to the rounding of as many additions as
// there are reactions, after any number of events; values are those of the network
// to the last bit; and counts are never negative.
func TestDirectSumsDoNotDrift(t *testing.T) {
	for name, p := range invariants() {
		w, l := stepper(t, p, func(w *worker) kernel { return newDirect(w) })
		k := w.kernel.(*direct)
		for e := range 20_000 {
			if l.run < 0 {
				break
			}
			total, want := l.ends[len(l.ends)-1], fresh(&w.Plan, l.counts)
			if math.Abs(total-want) > 1e-16*float64(2*len(w.Network.Reactions))*want {
				t.Fatalf("%s, event %d: sum %v, fresh %v", name, e, total, want)
			}
			for pl, r := range k.reaction {
				if r >= 0 && l.values[pl] != w.Network.Propensity(r, l.counts) {
					t.Fatalf("%s, event %d: propensity %d is %v, the network's %v", name, e, r, l.values[pl], w.Network.Propensity(r, l.counts))
				}
			}
			nonNegative(t, l.counts)
			if !k.event(l) {
				break
			}
		}
	}
}

func nonNegative(t *testing.T, counts []int64) {
	t.Helper()
	for _, n := range counts {
		if n < 0 {
			t.Fatalf("counts %v", counts)
		}
	}
}

// In Sparse, every reaction that can fire is a member of the class that its
// propensity belongs to, once, and the rate of tries is the sum over classes.
func TestSparseClasses(t *testing.T) {
	for name, p := range invariants() {
		p.Method = Sparse
		w, l := stepper(t, p, newKernel)
		k := w.kernel.(*sparse)
		for e := range 20_000 {
			if e%16 == 0 {
				classesHold(t, name, w, l)
			}
			if !k.try(l) {
				break
			}
		}
	}
}

func classesHold(t *testing.T, name string, w *worker, l *lane) {
	t.Helper()
	c, members, rate := l.classes, 0, 0.0
	for _, b := range c.bins {
		members += len(b.members)
		rate += b.width * float64(len(b.members))
		for i, r := range b.members {
			if a := w.Network.Propensity(int(r), l.counts); a != c.values[r] || a < b.width/2 || a >= b.width || int(c.place[r]) != i {
				t.Fatalf("%s: reaction %d of propensity %v (taken down: %v) is in the class below %v", name, r, a, c.values[r], b.width)
			}
		}
	}
	able := 0
	for r := range w.Network.Reactions {
		if w.Network.Propensity(r, l.counts) > 0 {
			able++
		}
	}
	if members != able || rate != c.total {
		t.Fatalf("%s: %d members, %d reactions that can fire; rate %v, fresh %v", name, members, able, c.total, rate)
	}
}

// Entries of tables are those of the network to the last bit.
func TestEntriesAreTheNetworks(t *testing.T) {
	for name, p := range invariants() {
		w, l := stepper(t, p, newKernel)
		k, ok := w.kernel.(*blocks)
		if !ok {
			continue
		}
		for range 300 {
			w.kernel.advance(w.lanes)
			k.leave(l)
			sum := 0.0
			for i, row := range k.rows {
				e, part := &k.entries[l.at.half(i)], 0.0
				for j, r := range row.reactions {
					part += w.Network.Propensity(r, l.counts)
					if !math.IsNaN(e.total()) && e[j] != part {
						t.Fatalf("%s: sum %d of row %d is %v, the network's %v", name, j, i, e[j], part)
					}
				}
				sum += part
			}
			if total := k.total(l); total != sum {
				t.Fatalf("%s: total %v, the network's %v", name, total, sum)
			}
			nonNegative(t, l.counts)
		}
	}
}

// The choice never falls on a reaction that cannot fire, at any u up to the last
// number below the total, whatever the zeros and the sizes of the others.
func TestChoiceAtTheRoundingEdge(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	d := model.Draft{Copies: 1, Species: make([]model.Species, 14)}
	for r := range d.Species {
		d.Reactions = append(d.Reactions, model.DraftReaction{MassAction: model.Number(1), Uses: []model.Term{{Species: r, Count: 1}}})
	}
	net, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	w, l := stepper(t, Plan{Network: net, Start: make([]int64, 14)}, func(w *worker) kernel { return newDirect(w) })
	k := w.kernel.(*direct)
	for range 20_000 {
		for p, r := range k.reaction {
			l.values[p] = 0
			if r >= 0 && random.IntN(2) == 0 {
				l.values[p] = math.Exp(40 * random.NormFloat64())
			}
		}
		for g := range k.groups {
			l.resum(g)
		}
		total := l.total()
		if total == 0 {
			continue
		}
		for _, u := range edges(l, total) {
			if r := k.choose(l, u); r < 0 || l.values[k.place[r]] == 0 {
				t.Fatalf("u = %v of %v chooses reaction %d, which cannot fire, of %v", u, total, r, l.values)
			}
		}
	}
}

// edges are the numbers next to all running sums, and the ends.
func edges(l *lane, total float64) []float64 {
	out := []float64{0, math.Nextafter(total, 0), (1 - 0x1p-52) * total}
	for p, s := range l.sums {
		for _, u := range []float64{l.ends[p/groupWidth] + s, math.Nextafter(l.ends[p/groupWidth]+s, 0)} {
			if u < total {
				out = append(out, u)
			}
		}
	}
	return out
}
