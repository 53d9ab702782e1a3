package model_test

import (
	"fmt"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// absorbers writes the absorbing sets of a network: "!" frozen, "~" trap, "*" when
// the start is in it.
func absorbers(n *model.Network) string {
	var out []string
	for _, a := range n.Absorbing() {
		text := map[bool]string{true: "!", false: "~"}[a.Frozen]
		var names []string
		for _, i := range a.Empty {
			names = append(names, n.Species[i].Name)
		}
		if a.AtStart {
			text += "*"
		}
		out = append(out, text+strings.Join(names, "+"))
	}
	return strings.Join(out, " ")
}

// TestAbsorbingKnown holds the absorbing sets against those that are plain from the
// reactions.
func TestAbsorbingKnown(t *testing.T) {
	xy := "x = { start = 1 }\ny = { start = 1 }"
	for _, c := range []struct {
		name string
		net  *model.Network
		want string
	}{
		{"latch", zoo.Latch(100), ""},
		{"leakless latch", zoo.LeaklessLatch(0.45, 1, 100), "!*mrna+protein"},
		{"self-activator", zoo.SelfActivator(2.5, 1, 1, 2, 100), "!x"},
		{"leaky activator", zoo.LeakyActivator(0.5, 0.1, 10), ""},
		{"activator at its cusp's leak 0", zoo.LeakyActivator(0.4, 0, 10), "!*x"},
		{"symmetric repression", zoo.SymmetricRepression(3, 20), ""},
		{"Schlögl", zoo.Schlogl(), ""},
		{"birth–death", zoo.BirthDeath(), "!x"},
		{"immigration–death", zoo.ImmigrationDeath(1, 0.1), ""},
		{"two-stage", zoo.TwoStage(1, 1, 1, 1), ""},
		{"telegraph", zoo.Telegraph(), ""},
		{"dimer switch", zoo.DimerSwitch(), ""},
		{"dimerisation", zoo.Dimerisation(), ""}, // p + 2 p2 is conserved, so both cannot be empty
		{"two-state chain", zoo.TwoStateChain(1, 1), ""},
		{"chain", zoo.Chain(3, 1, 5), "!s0+s1+s2 ~s0"},
		{"conversion", parse(t, xy, "uses = { x = 1 }\nmakes = { y = 1 }"), "!x"},
		{"two decays", parse(t, xy, "uses = { x = 1 }", "uses = { y = 1 }"), "!x+y ~x ~y"},
		{
			"predator and prey", parse(t, xy, "needs = { x = 1 }\nmakes = { x = 1 }", "uses = { x = 1, y = 1 }\nmakes = { y = 2 }", "uses = { y = 1 }"),
			"!x+y ~x ~y",
		},
		{
			"leakless with a reporter", parse(t, xy, "makes = { x = 1 }\nrate = \"hill(x, 2, 2)\"", "uses = { x = 1 }", "needs = { x = 1 }\nmakes = { y = 1 }", "uses = { y = 1 }"),
			"!x+y ~x",
		},
		{
			"latch on an operator", parse(t, "o = { start = 1, fixed_count = true }\nox = { start = 0, fixed_count = true }\nx = { start = 9 }",
				"uses = { o = 1, x = 2 }\nmakes = { ox = 1 }", "uses = { ox = 1 }\nmakes = { o = 1, x = 2 }", "needs = { ox = 1 }\nmakes = { x = 1 }", "uses = { x = 1 }"),
			"!ox+x",
		},
		{
			"either keeps it going", parse(t, xy, "makes = { x = 1 }\nrate = \"x + y\"", "uses = { x = 1 }", "uses = { y = 1 }", "makes = { y = 1 }\nrate = \"x*0.1\""),
			"!x+y",
		},
		{"product of laws", parse(t, xy, "makes = { x = 1 }\nrate = \"x*exp(y)/(1 + x)\"", "uses = { x = 1 }"), "!x"},
		{"a sum that does not vanish", parse(t, xy, "makes = { x = 1 }\nrate = \"x + exp(-y)\"", "uses = { x = 1 }"), ""},
		{"law of its own use", parse(t, xy, "uses = { x = 1 }\nrate = \"1 + y\"", "uses = { y = 1 }\nmakes = { x = 1 }\nrate = \"min(y, 3)\""), "!x+y ~y"},
		{"coefficient 0", parse(t, xy, "makes = { x = 1 }\nmass_action = 0", "uses = { x = 1 }"), "!x"},
		{"never made, only read", parse(t, "x = { start = 0 }\ny = { start = 1 }", "needs = { x = 1 }\nmakes = { y = 1 }", "uses = { y = 1 }"), "!x+y ~*x"},
		{"bursts", parse(t, xy, "makes = { x = { burst = 3 } }\nrate = \"hill(x, 1, 2)\"", "uses = { x = 1 }"), "!x"},
	} {
		if got := absorbers(c.net); got != c.want {
			t.Errorf("%s: %q, want %q", c.name, got, c.want)
		}
	}
}

// TestAbsorbingHolds checks over random mass-action networks that what is said is
// so: with the set's species empty and the others anything, no reaction of a frozen
// set can fire, and none that can fire makes a species of a trap.
func TestAbsorbingHolds(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 3))
	found := 0
	for range 300 {
		n, _ := randomNetwork(t, rng)
		for _, a := range n.Absorbing() {
			found++
			counts := make([]int64, len(n.Species))
			for i := range counts {
				counts[i] = int64(10 + rng.IntN(5))
			}
			for _, i := range a.Empty {
				counts[i] = 0
			}
			for r := range n.Reactions {
				if n.Propensity(r, counts) == 0 {
					continue
				}
				if a.Frozen {
					t.Fatalf("%s can fire at %v, in a frozen set", n.Equation(r), counts)
				}
				for _, net := range n.Reactions[r].Net {
					if counts[net.Species] == 0 && net.Count > 0 && contains(a.Empty, net.Species) {
						t.Fatalf("%s makes what the trap %v lacks", n.Equation(r), a.Empty)
					}
				}
			}
		}
	}
	if found < 100 {
		t.Errorf("only %d sets were tried", found)
	}
}

func contains(list []int, v int) bool {
	return slices.Contains(list, v)
}

// TestAbsorbingLarge checks that the search ends on a large network, and still
// finds its sets.
func TestAbsorbingLarge(t *testing.T) {
	n := zoo.Chain(400, 1, 5)
	list := n.Absorbing()
	if len(list) != 2 || !list[0].Frozen || len(list[0].Empty) != 400 || fmt.Sprint(list[1].Empty) != "[0]" {
		t.Errorf("%d sets", len(list))
	}
}
