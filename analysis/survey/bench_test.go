package survey

import (
	"testing"

	"holdfast/analysis/survey/resting"
	"holdfast/internal/zoo"
	"holdfast/model"
)

// BenchmarkMapOneKnob is the whole map of the one-gene latch with one knob.
func BenchmarkMapOneKnob(b *testing.B) {
	n := zoo.Latch(100)
	points := 0
	for b.Loop() {
		r, err := Run(b.Context(), n, Options{Knobs: []Knob{{"a", 0.2, 0.8}}})
		if err != nil {
			b.Fatal(err)
		}
		points += len(r.Diagram.Branches[0].Points)
	}
	b.ReportMetric(float64(points)/b.Elapsed().Seconds(), "points/s")
}

// pairText is two genes that shut each other off, in transcripts and proteins.
const pairText = `time = "min"
copies = 100
species = { m = { start = 1 }, p = { start = 1 }, n = { start = 0 }, q = { start = 0 } }
[[reaction]]
name = "transcribe m"
makes = { m = 1 }
rate = "0.01 + 3*hill_fall(q, 1, 2)"
[[reaction]]
name = "transcribe n"
makes = { n = 1 }
rate = "0.01 + 3*hill_fall(p, 1, 2)"
[[reaction]]
name = "translate m"
needs = { m = 1 }
makes = { p = 1 }
mass_action = 0.5
[[reaction]]
name = "translate n"
needs = { n = 1 }
makes = { q = 1 }
mass_action = 0.5
[[reaction]]
name = "lose m"
uses = { m = 1 }
mass_action = 1
[[reaction]]
name = "lose n"
uses = { n = 1 }
mass_action = 1
[[reaction]]
name = "lose p"
uses = { p = 1 }
mass_action = 0.3
[[reaction]]
name = "lose q"
uses = { q = 1 }
mass_action = 0.3
`

// BenchmarkProvedList is the list of states of a four-species network with its proof.
func BenchmarkProvedList(b *testing.B) {
	d, err := model.Parse("pair.toml", []byte(pairText))
	if err != nil {
		b.Fatal(err)
	}
	n, err := d.Bind(0, nil)
	if err != nil {
		b.Fatal(err)
	}
	boxes := 0
	for b.Loop() {
		l, err := resting.States(b.Context(), n)
		if err != nil {
			b.Fatal(err)
		}
		if !l.Complete() {
			b.Fatal(l)
		}
		boxes += l.Proof.Boxes
	}
	b.ReportMetric(float64(boxes)/b.Elapsed().Seconds(), "boxes/s")
}
