package action

import (
	"slices"
	"strings"
	"testing"
)

// tristable has three stable states, one after the other in p, and a transcript.
const tristable = `
title = "two steps"
time = "min"
copies = 100
[species]
m = { start = 0 }
p = { start = 0, readout = true }
[constants]
leak = 0.05
a = 1.0
[[reaction]]
name = "transcription"
makes = { m = 1 }
rate = "leak + hill(p, 0.5, 6) + hill(p, 2.0, 12)*1.5"
[[reaction]]
name = "decay"
uses = { m = 1 }
mass_action = "3.0"
[[reaction]]
name = "translation"
needs = { m = 1 }
makes = { p = 1 }
mass_action = "3.0"
[[reaction]]
name = "dilution"
uses = { p = 1 }
mass_action = "a"
`

// changed is tristable with its species and reactions in another order, dilution in
// two halves, and a pair of forms of another molecule that take no part.
const changed = `
title = "two steps, written otherwise"
time = "min"
copies = 100
[species]
p = { start = 0, readout = true }
on = { start = 1 }
m = { start = 0 }
off = { start = 1 }
[constants]
half = 0.5
leak = 0.05
[[reaction]]
name = "dilution one"
uses = { p = 1 }
mass_action = "half"
[[reaction]]
name = "translation"
needs = { m = 1 }
makes = { p = 1 }
mass_action = "3.0"
[[reaction]]
name = "switch on"
uses = { off = 1 }
makes = { on = 1 }
mass_action = "0.7"
[[reaction]]
name = "switch off"
uses = { on = 1 }
makes = { off = 1 }
mass_action = "0.3"
[[reaction]]
name = "decay"
uses = { m = 1 }
mass_action = "3.0"
[[reaction]]
name = "dilution two"
uses = { p = 1 }
mass_action = "half"
[[reaction]]
name = "transcription"
makes = { m = 1 }
rate = "hill(p, 2.0, 12)*1.5 + leak + hill(p, 0.5, 6)"
`

// TestInvariance: how a design is written does not change S, nor does what takes no
// part. With dilution in halves ∂S/∂half is the ∂S/∂a of both.
func TestInvariance(t *testing.T) {
	plain, other := routes(t, parse(t, tristable, nil)), routes(t, parse(t, changed, nil))
	if len(plain.Pairs) != 6 || len(other.Pairs) != 6 {
		t.Fatalf("%d and %d pairs of three states", len(plain.Pairs), len(other.Pairs))
	}
	for k := range plain.Pairs {
		a, b := &plain.Pairs[k], &other.Pairs[k]
		near(t, "S "+a.From+" to "+a.To, b.S, a.S, 1e-7)
		if len(a.Paths) > 0 {
			near(t, "∂S/∂half", b.Paths[0].Gradient[0], 2*a.Paths[0].Gradient[1], 1e-5)
			near(t, "∂S/∂leak", b.Paths[0].Gradient[1], a.Paths[0].Gradient[0], 1e-5)
		}
	}
}

// TestChain: from the lowest state to the highest and back the way is by the middle
// one, and S the sum of both steps.
func TestChain(t *testing.T) {
	r := routes(t, parse(t, tristable, nil))
	for _, way := range [][3]string{{"low", "middle", "high"}, {"high", "middle", "low"}} {
		direct := r.Find(way[0], way[2])
		if len(direct.Paths) != 0 || !slices.Equal(direct.Via, way[1:2]) {
			t.Errorf("%s to %s: %d paths, via %v", way[0], way[2], len(direct.Paths), direct.Via)
		}
		near(t, "S of the chain", direct.S, r.Find(way[0], way[1]).S+r.Find(way[1], way[2]).S, 1e-15)
	}
	for _, j := range r.Joins {
		ends := slices.Sorted(slices.Values(j.Ends[:]))
		if got := strings.Join(ends, " "); got != "low middle" && got != "high middle" {
			t.Errorf("%s joins %s", j.Saddle, got)
		}
	}
}
