package ssa

import (
	"context"
	"fmt"
	"math"
	"reflect"
	"strings"
	"sync"
	"testing"

	"holdfast/internal/race"
	"holdfast/internal/zoo"
	"holdfast/model"
)

// kernels are the ways to do the Dense method. All of them must make the same
// runs, bit for bit.
var kernels = map[string]func(*worker) kernel{
	"direct":  func(w *worker) kernel { return newDirect(w) },
	"careful": func(w *worker) kernel { return newBlocks(newLookup(w), rushNone) },
	"plain": func(w *worker) kernel {
		k := newLookup(w)
		return newBlocks(k, k.plainRush())
	},
	"rush": newKernel,
}

// runWith is Run with a given kernel.
func runWith(t testing.TB, p Plan, k func(*worker) kernel) Result {
	t.Helper()
	p, err := p.normal()
	if err != nil {
		t.Fatal(err)
	}
	j := newJob(newSystem(p))
	j.kernel = k
	j.work()
	res, err := j.result(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	return res
}

// samples takes down what Plan.Sample is given.
type samples struct {
	sync.Mutex
	seen map[[2]int][]int64
}

func (s *samples) add(run, k int, _ float64, counts []int64) {
	s.Lock()
	defer s.Unlock()
	if s.seen == nil {
		s.seen = map[[2]int][]int64{}
	}
	s.seen[[2]int{run, k}] = append([]int64(nil), counts...)
}

// shapes are plans that between them call for each kernel, and for each reason
// to leave its ordinary path.
func shapes() map[string]Plan {
	times := []float64{0, 0.5, 1, 3, 7, 7, 20}
	target := func(s string, low, high []int64) model.Core { return model.Core{State: s, Low: low, High: high} }
	out := map[string]Plan{
		"latch, flips": {Network: zoo.Latch(10), Cores: []model.Core{
			target("low", []int64{0, 0}, []int64{2, 2}), target("high", []int64{5, 14}, []int64{11, 22}),
		}, From: 0, MaxEvents: 5000},
		"latch, round core": {Network: zoo.Latch(10), Cores: []model.Core{{
			Low: []int64{4, 9}, High: []int64{12, 25}, Center: []float64{8, 17}, Shape: []float64{1. / 16, 0, 0, 1. / 64},
		}}, From: -1, Until: 2000},
		"latch at 100, samples":  {Network: zoo.Latch(100), From: -1, Until: 20, Times: times},
		"latch, tiny budget":     {Network: zoo.Latch(10), From: -1, MaxEvents: 7},
		"latch, odd budget":      {Network: zoo.Latch(10), From: -1, MaxEvents: 129},
		"schlögl":                {Network: zoo.Schlogl(), From: -1, Until: 3},
		"birth–death, absorbed":  {Network: zoo.BirthDeath(), From: -1, Until: 30, Times: times},
		"batches":                {Network: zoo.BatchesOfFive(), From: -1, Until: 30},
		"dimerisation":           {Network: zoo.Dimerisation(), From: -1, Until: 200},
		"bursts":                 {Network: zoo.BurstExpression(1, 30, 0.1), From: -1, Until: 200, Times: times},
		"repression":             {Network: zoo.SymmetricRepression(3, 30), From: -1, Until: 200},
		"runaway":                {Network: zoo.BirthDeath(), From: -1, MaxCount: 130, Until: 40},
		"counts beyond the rows": {Network: pairLoss(), From: -1, Until: 6},
		"chain":                  {Network: zoo.Chain(7, 1, 50), From: -1, Until: 20},
		"long chain":             {Network: zoo.Chain(30, 1, 50), From: -1, Until: 20},
	}
	for n := 2; n <= maxRows; n++ {
		low, high := make([]int64, n), make([]int64, n)
		for i := range high {
			high[i] = 1
		}
		out[fmt.Sprint(n, " genes")] = Plan{Network: genes(n, ""), From: -1, Until: 30, Times: times, Cores: []model.Core{target("low", low, high)}}
		out[fmt.Sprint(n, " genes in bursts")] = Plan{Network: genes(n, "burst"), From: -1, MaxEvents: 3000}
	}
	for name, p := range out {
		p.Runs, p.Seed, p.Threads = 20, 3, 1
		out[name] = p
	}
	return out
}

func TestKernelsMakeTheSameRuns(t *testing.T) {
	for name, p := range shapes() {
		t.Run(name, func(t *testing.T) {
			var want Result
			var wantSeen samples
			for i, k := range []string{"direct", "careful", "plain", "rush"} {
				var seen samples
				p.Sample = seen.add
				if (k == "careful" || k == "plain") && newKernelIsDirect(p) {
					continue
				}
				got := runWith(t, p, kernels[k])
				if i == 0 {
					want, wantSeen.seen = got, seen.seen
				}
				same(t, k, got, want)
				if !reflect.DeepEqual(seen.seen, wantSeen.seen) {
					t.Errorf("%s gives other samples", k)
				}
			}
		})
	}
}

// genes are n genes that keep themselves on, each with a row of its own; the first may
// be made in bursts.
func genes(n int, first string) *model.Network {
	var text strings.Builder
	text.WriteString("title = \"genes\"\ntime = \"min\"\ncopies = 1\n")
	for i := range n {
		made := "1"
		if i == 0 && first != "" {
			made = "{ burst = 2.5 }"
		}
		text.WriteString(fmt.Sprintf("[species.x%d]\nstart = %d\n", i, 3*i))
		text.WriteString(fmt.Sprintf("[[reaction]]\nname = \"making %d\"\nmakes = { x%d = %s }\nrate = \"0.5 + 3*hill(x%d, 10, 2)\"\n", i, i, made, i))
		text.WriteString(fmt.Sprintf("[[reaction]]\nname = \"loss %d\"\nuses = { x%d = 1 }\nmass_action = 0.1\n", i, i))
		text.WriteString(fmt.Sprintf("[[reaction]]\nname = \"loss in pairs %d\"\nuses = { x%d = 2 }\nmass_action = 0.004\n", i, i))
	}
	d, err := model.Parse("genes.toml", []byte(text.String()))
	if err != nil {
		panic(err)
	}
	net, err := d.Bind(0, nil)
	if err != nil {
		panic(err)
	}
	return net
}

// Between them the shapes have every number of rows, one to eight, with and without bursts.
func TestShapesHaveAllRows(t *testing.T) {
	seen := map[[2]int]bool{}
	for name, p := range shapes() {
		p.Times = nil
		p, err := p.normal()
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		if k := newLookup(newWorker(newJob(newSystem(p)), 1)); k != nil {
			seen[[2]int{len(k.rows), min(int(k.bursty), 1)}] = true
		}
	}
	for n := 1; n <= maxRows; n++ {
		if !seen[[2]int{n, 0}] || !seen[[2]int{n, 1}] {
			t.Errorf("%d rows are missing, without bursts or with: %v", n, seen)
		}
	}
}

// pairLoss makes two species that are lost in pairs, and grow to more counts than
// a row of both holds.
func pairLoss() *model.Network {
	made := func(s int) model.DraftReaction {
		return model.DraftReaction{MassAction: model.Number(150), Makes: []model.Term{{Species: s, Count: 1}}}
	}
	lost := []model.Term{{Species: 0, Count: 1}, {Species: 1, Count: 1}}
	d := model.Draft{
		Copies: 1, Species: []model.Species{{Name: "x"}, {Name: "y"}},
		Reactions: []model.DraftReaction{made(0), made(1), {MassAction: model.Number(1e-4), Uses: lost}},
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		panic(err)
	}
	return n
}

func newKernelIsDirect(p Plan) bool {
	p, _ = p.normal()
	j := newJob(newSystem(p))
	return newLookup(&worker{job: j}) == nil
}

// same fails the test where two results differ, in any bit.
func same(t *testing.T, what string, got, want Result) {
	t.Helper()
	if got.Events != want.Events {
		t.Errorf("%s: %d events, want %d", what, got.Events, want.Events)
	}
	for i := range want.Outcomes {
		g, w := fmt.Sprintf("%+v", plain(got.Outcomes[i])), fmt.Sprintf("%+v", plain(want.Outcomes[i]))
		if g != w {
			t.Fatalf("%s, run %d:\n%s\nwant\n%s", what, i, g, w)
		}
	}
}

// plain is an outcome whose time is shown to the last bit.
func plain(o Outcome) any {
	return struct {
		Outcome
		bits uint64
		err  string
	}{o, math.Float64bits(o.Time), fmt.Sprint(o.Err())}
}

// The lanes, threads and shards that runs are spread over change nothing.
func TestSpreadChangesNothing(t *testing.T) {
	for name, p := range shapes() {
		for _, m := range []Method{Dense, Sparse} {
			t.Run(name+"/"+m.String(), func(t *testing.T) {
				p.Method, p.Sample = m, func(int, int, float64, []int64) {}
				want := runWith(t, p, newKernel)
				for _, spread := range spreads() {
					p.Threads, p.Lanes = spread[0], spread[1]
					same(t, fmt.Sprintf("%d threads, %d lanes", spread[0], spread[1]), runWith(t, p, newKernel), want)
				}
				shards(t, p, want)
			})
		}
	}
}

// spreads are threads and lanes; those of many threads come first.
func spreads() [][2]int {
	all := [][2]int{{7, 8}, {2, 5}, {7, 1}, {1, 1}, {1, 3}, {1, 64}}
	if race.Enabled {
		return all[:2]
	}
	return all
}

func shards(t *testing.T, p Plan, want Result) {
	t.Helper()
	var joined Result
	p.Runs = 5
	for first := 0; first < 20; first += 5 {
		p.FirstReplicate = uint64(first)
		res := runWith(t, p, newKernel)
		joined.Outcomes = append(joined.Outcomes, res.Outcomes...)
		joined.Events += res.Events
	}
	same(t, "shards", joined, want)
}
