package model_test

import (
	"fmt"
	"math/rand/v2"
	"strings"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// totalsOf writes the conserved totals of a network.
func totalsOf(n *model.Network) string {
	var out []string
	for _, t := range n.Conserved() {
		var terms []string
		for i, w := range t.Weights {
			if w != 0 {
				terms = append(terms, fmt.Sprintf("%d %s", w, n.Species[i].Name))
			}
		}
		out = append(out, fmt.Sprintf("%s = %d", strings.Join(terms, " + "), t.Value))
	}
	return strings.Join(out, "; ")
}

// TestConservedKnown holds totals against what is plain from the reactions.
func TestConservedKnown(t *testing.T) {
	for _, c := range []struct {
		net  *model.Network
		want string
	}{
		{zoo.Latch(100), ""},
		{zoo.Dimerisation(), "1 p + 2 p2 = 100"},
		{zoo.Telegraph(), "1 off + 1 on = 1"},
		{zoo.TwoStateChain(1, 2), "1 a + 1 b = 1"},
		{zoo.DimerSwitch(), "1 o + 1 oa2 + 1 ob2 + 1 oa2b2 = 1"},
		{zoo.Chain(3, 1, 7), "1 s0 + 1 s1 + 1 s2 + 1 s3 = 7"},
		{
			parse(t, "e = { start = 5 }\ns = { start = 9 }\nes = { start = 1 }\np = { start = 0 }",
				"uses = { e = 1, s = 1 }\nmakes = { es = 1 }", "uses = { es = 1 }\nmakes = { e = 1, p = 1 }"),
			"1 e + 1 es = 6; 1 s + 1 es + 1 p = 10",
		}, // the two totals of an enzyme with its substrate
		{
			parse(t, "a = { start = 5 }\nb = { start = 3 }", "uses = { a = 1, b = 1 }"),
			"1 a + -1 b = 2",
		}, // only a difference is conserved
		{
			parse(t, "a = { start = 6 }\nb = { start = 4 }", "uses = { a = 3 }\nmakes = { b = 2 }"),
			"2 a + 3 b = 24",
		},
		{
			parse(t, "a = { start = 6 }\nb = { start = 4 }\nc = { start = 2 }", "uses = { a = 1 }\nmakes = { b = { burst = 2 }, c = 1 }"),
			"1 a + 1 c = 8",
		}, // a burst's number varies, so b is in no total
		{parse(t, "a = { start = 6 }\ng = { start = 4 }", "needs = { g = 1 }\nmakes = { a = 1 }"), "1 g = 4"},
	} {
		if got := totalsOf(c.net); got != c.want {
			t.Errorf("%s: totals %q, want %q", c.net.Title, got, c.want)
		}
	}
}

// parse makes a network of a list of species and the effects of reactions.
func parse(t *testing.T, species string, effects ...string) *model.Network {
	t.Helper()
	var text strings.Builder
	text.WriteString("time = \"s\"\n[species]\n" + species + "\n")
	for i, e := range effects {
		text.WriteString(fmt.Sprintf("[[reaction]]\nname = \"r%d\"\n%s\n", i+1, e))
		if !strings.Contains(e, "rate =") && !strings.Contains(e, "mass_action") {
			text.WriteString("mass_action = 1\n")
		}
	}
	d, err := model.Parse("t.toml", []byte(text.String()))
	if err != nil {
		t.Fatal(err)
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n
}

// TestConservedRandom checks over random networks that totals are orthogonal to
// every change, that they are independent, and that their number is the number of
// species less the rank, which is counted in floating point.
func TestConservedRandom(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 9))
	for range 300 {
		n, changes := randomNetwork(t, rng)
		totals := n.Conserved()
		var weights [][]float64
		for _, total := range totals {
			row := make([]float64, len(total.Weights))
			for i, w := range total.Weights {
				row[i] = float64(w)
			}
			weights = append(weights, row)
			for _, change := range changes {
				dot := 0.0
				for i := range change {
					dot += change[i] * row[i]
				}
				if dot != 0 {
					t.Fatalf("weights %v are not orthogonal to %v", row, change)
				}
			}
		}
		if want := len(n.Species) - rank(changes); len(totals) != want || rank(weights) != want {
			t.Fatalf("%d totals of rank %d, want %d; changes %v", len(totals), rank(weights), want, changes)
		}
	}
}

func randomNetwork(t *testing.T, rng *rand.Rand) (*model.Network, [][]float64) {
	size := 2 + rng.IntN(5)
	d := model.Draft{Copies: 1, TimeUnit: "s"}
	for i := range size {
		d.Species = append(d.Species, model.Species{Name: fmt.Sprintf("s%d", i), Start: float64(rng.IntN(9))})
	}
	var changes [][]float64
	for range 1 + rng.IntN(size) {
		change := make([]float64, size)
		r := model.DraftReaction{MassAction: model.Number(1)}
		for i := range change {
			switch k := rng.IntN(7) - 3; {
			case k > 0 && rng.IntN(2) == 0:
				r.Makes = append(r.Makes, model.Term{Species: i, Count: k})
				change[i] = float64(k)
			case k < 0 && rng.IntN(2) == 0:
				r.Uses = append(r.Uses, model.Term{Species: i, Count: -k})
				change[i] = float64(k)
			}
		}
		d.Reactions = append(d.Reactions, r)
		changes = append(changes, change)
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	return n, changes
}

// rank is the rank of a small matrix of small whole numbers, by elimination with
// the largest pivot.
func rank(rows [][]float64) int {
	var m [][]float64
	for _, r := range rows {
		m = append(m, append([]float64(nil), r...))
	}
	done := 0
	for column := 0; len(m) > 0 && column < len(m[0]); column++ {
		best := -1
		for i := done; i < len(m); i++ {
			if abs(m[i][column]) > 1e-9 && (best < 0 || abs(m[i][column]) > abs(m[best][column])) {
				best = i
			}
		}
		if best < 0 {
			continue
		}
		m[done], m[best] = m[best], m[done]
		for i := done + 1; i < len(m); i++ {
			f := m[i][column] / m[done][column]
			for j := range m[i] {
				m[i][j] -= f * m[done][j]
			}
		}
		done++
	}
	return done
}

func abs(v float64) float64 { return max(v, -v) }

// TestConservedLarge checks that a network of thousands of reactions is no burden.
func TestConservedLarge(t *testing.T) {
	n := zoo.Chain(4096, 1, 50)
	totals := n.Conserved()
	if len(totals) != 1 || totals[0].Value != 50 {
		t.Fatalf("%d totals", len(totals))
	}
	for i, w := range totals[0].Weights {
		if w != 1 {
			t.Fatalf("weight %d of species %d", w, i)
		}
	}
}
