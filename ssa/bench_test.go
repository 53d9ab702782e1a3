package ssa_test

import (
	"fmt"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
	"holdfast/ssa"
)

// speed makes runs of 16 times as many events as the benchmark asks for, each
// with its share, and reports the time of one event.
func speed(b *testing.B, p ssa.Plan) {
	p.Runs, p.Seed = 16, 1
	p.MaxEvents = int64(b.N)
	b.ResetTimer()
	res := run(b, p)
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(res.Events), "ns/event")
	b.ReportMetric(0, "ns/op")
}

// latch is the latch at 100 copies from its high state, with boxes about both
// states as cores, so that the runs do all that a dwell needs.
func latch() ssa.Plan {
	return ssa.Plan{
		Network: zoo.Latch(100), Start: []int64{76, 169}, From: 1, Threads: 1,
		Cores: []model.Core{
			{State: "low", Low: []int64{0, 0}, High: []int64{2, 2}},
			{State: "high", Low: []int64{50, 140}, High: []int64{110, 220}},
		},
	}
}

// The cases latch and operator have the same reactions and rates as the loops by
// hand that the engine is held against.
func BenchmarkLatch(b *testing.B) { speed(b, latch()) }

// BenchmarkVaried is the latch with constants that vary, beside the same without: a
// dilution in time and a drive from cell to cell; and with a half that does.
func BenchmarkVaried(b *testing.B) {
	for _, c := range []struct {
		name            string
		dilution, drive float64
		half            float64
	}{{"none", 0, 0, 0}, {"frozen", 0, 0.1, 0}, {"in time", 0.05, 0.1, 0}, {"half too", 0.05, 0.1, 0.1}} {
		b.Run(c.name, func(b *testing.B) {
			p := latch()
			p.Network = variedLatch(b, c.dilution, c.drive, c.half)
			speed(b, p)
		})
	}
}

func variedLatch(b *testing.B, dilution, drive, half float64) *model.Network {
	d, err := model.Load("../testdata/designs/latch.toml")
	if err != nil {
		b.Fatal(err)
	}
	for i := range d.Constants {
		switch c := &d.Constants[i]; c.Name {
		case "a":
			if c.Spread = dilution; dilution > 0 {
				c.Memory = 45
			}
		case "drive":
			c.Spread = drive
		case "half":
			c.Spread = half
		}
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		b.Fatal(err)
	}
	return n
}

func BenchmarkOperator(b *testing.B) { speed(b, operatorPlan()) }

func operatorPlan() ssa.Plan {
	return ssa.Plan{
		Network: operatorSwitch(), Start: []int64{10, 5, 0, 0, 1, 0, 0}, From: 0, Threads: 1,
		Cores: []model.Core{
			{State: "a", Low: []int64{6, 4, 0, 0, 0, 0, 0}, High: []int64{12, 10, 1, 1, 1, 1, 1}},
			// Out of reach, so that no run ends early; it is looked for all the same.
			{State: "b", Low: []int64{0, 0, 6, 40, 0, 0, 0}, High: []int64{1, 1, 12, 60, 1, 1, 1}},
		},
	}
}

// operatorSwitch is two genes with dimers that share one operator, 14 reactions.
func operatorSwitch() *model.Network {
	names := []string{"A", "A2", "B", "B2", "O", "OA2", "OB2"}
	const a, a2, bb, b2, o, oa2, ob2 = 0, 1, 2, 3, 4, 5, 6
	d := model.Draft{Title: "operator", TimeUnit: "min", Copies: 1}
	for _, n := range names {
		d.Species = append(d.Species, model.Species{Name: n})
	}
	term := func(s ...int) (out []model.Term) {
		for _, x := range s {
			out = append(out, model.Term{Species: x, Count: 1})
		}
		return out
	}
	add := func(k float64, uses, needs, makes []model.Term) {
		d.Reactions = append(d.Reactions, model.DraftReaction{
			Name: fmt.Sprint("r", len(d.Reactions)), MassAction: model.Number(k), Uses: uses, Needs: needs, Makes: makes,
		})
	}
	two := func(s int) []model.Term { return []model.Term{{Species: s, Count: 2}} }
	add(1, two(a), nil, term(a2))
	add(5, term(a2), nil, two(a))
	add(1, two(bb), nil, term(b2))
	add(5, term(b2), nil, two(bb))
	add(1, term(o, a2), nil, term(oa2))
	add(0.2, term(oa2), nil, term(o, a2))
	add(1, term(o, b2), nil, term(ob2))
	add(0.2, term(ob2), nil, term(o, b2))
	add(0.2, nil, term(o), term(a))
	add(0.2, nil, term(oa2), term(a))
	add(0.2, nil, term(o), term(bb))
	add(0.2, nil, term(ob2), term(bb))
	add(0.05, term(a), nil, nil)
	add(0.05, term(bb), nil, nil)
	n, err := d.Bind(0, nil)
	if err != nil {
		panic(err)
	}
	return n
}

func BenchmarkSchlogl(b *testing.B) {
	speed(b, ssa.Plan{
		Network: zoo.Schlogl(), Start: []int64{100}, From: 0, Threads: 1,
		Cores: []model.Core{zoo.Interval("low", 60, 140, 100), zoo.Interval("high", 5000, 6000, 5500)},
	})
}

func BenchmarkTwoGenes(b *testing.B) {
	speed(b, ssa.Plan{Network: zoo.SymmetricRepression(6, 100), From: -1, Threads: 1})
}

func BenchmarkBursts(b *testing.B) {
	speed(b, ssa.Plan{Network: zoo.BurstExpression(1, 30, 0.1), From: -1, Threads: 1})
}

// BenchmarkChain is the cost of an event as the number of reactions grows: rings
// of one-way conversions with ten molecules of each species, in both methods.
func BenchmarkChain(b *testing.B) {
	for _, n := range []int{16, 64, 256, 1024, 4096} {
		for _, m := range methods {
			if m == ssa.Dense && n > 256 {
				continue
			}
			b.Run(fmt.Sprintf("%d/%v", n, m), func(b *testing.B) {
				speed(b, ssa.Plan{Network: ring(n), From: -1, Threads: 1, Method: m})
			})
		}
	}
}

// ring is x1→x2→…→xn→x1 from ten molecules of each: a chain that does not run dry.
func ring(n int) *model.Network {
	d := model.Draft{Copies: 1}
	for i := range n {
		d.Species = append(d.Species, model.Species{Name: fmt.Sprint("x", i+1), Start: 10})
		d.Reactions = append(d.Reactions, model.DraftReaction{
			Name: fmt.Sprint("step ", i+1), MassAction: model.Number(1),
			Uses: []model.Term{{Species: i, Count: 1}}, Makes: []model.Term{{Species: (i + 1) % n, Count: 1}},
		})
	}
	net, err := d.Bind(0, nil)
	if err != nil {
		panic(err)
	}
	return net
}

// BenchmarkThreads is the latch on one goroutine and on two, over all events.
func BenchmarkThreads(b *testing.B) {
	for _, n := range []int{1, 2} {
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			p := latch()
			p.Threads = n
			speed(b, p)
		})
	}
}
