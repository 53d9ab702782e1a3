package batch_test

import (
	"fmt"
	"math"
	"slices"
	"testing"

	"holdfast/analysis/batch"
	"holdfast/model"
)

func TestAxes(t *testing.T) {
	for _, c := range []struct {
		text string
		want []float64
	}{
		{"a=0.40:0.46:7", []float64{0.40, 0.41, 0.42, 0.43, 0.44, 0.45, 0.46}},
		{"copies=20,50,100", []float64{20, 50, 100}},
		{" copies = 2.5 ", []float64{2.5}},
		{"copies=10:1000:3log", []float64{10, 100, 1000}},
		{"copies=20:400:4log", []float64{20, 54, 147, 400}},                               // 54.288, 147.361
		{"copies=2:4:5log", []float64{2, 2.37841423001, 2.82842712475, 3.36358566101, 4}}, // whole ones would fall together
		{"copies=0.5:2:3log", []float64{0.5, 1, 2}},
		{"copies=10:20:4", []float64{10, 13.3333333333, 16.6666666667, 20}},
		{"k=0:1:3", []float64{0, 0.5, 1}},
		{"k=0.001:1000:7log", []float64{0.001, 0.01, 0.1, 1, 10, 100, 1000}},
	} {
		if got := axis(t, c.text).Values; !slices.Equal(got, c.want) {
			t.Errorf("%s: %v, want %v", c.text, got, c.want)
		}
	}
}

// Every row of the file meets every value of the axes, the last axis turning fastest,
// and each is made as often as there are draws.
func TestProduct(t *testing.T) {
	file := writeFile(t, "points.csv", "\ufeffcopies, a\n10,0.4\n20,0.5\n")
	points := pointsOf(t, &file, []batch.Axis{axis(t, "b=1,2"), axis(t, "k=3,4")}, 2)
	want := [][5]float64{
		{10, 0.4, 1, 3, 1},
		{10, 0.4, 1, 3, 2},
		{10, 0.4, 1, 4, 1},
		{10, 0.4, 1, 4, 2},
		{10, 0.4, 2, 3, 1},
		{10, 0.4, 2, 3, 2},
		{10, 0.4, 2, 4, 1},
		{10, 0.4, 2, 4, 2},
		{20, 0.5, 1, 3, 1},
	}
	if points.Len() != 16 || fmt.Sprint(points.Names) != "[copies a b k drive]" {
		t.Fatalf("%d points of %v", points.Len(), points.Names)
	}
	for i, w := range want {
		p := points.At(i)
		if p.Number != int64(i)+1 || p.Copies != w[0] || !slices.Equal(p.Values[:4], w[:4]) || p.Draw != int(w[4]) {
			t.Errorf("point %d: %+v, want %v", i+1, p, w)
		}
	}
	if points.At(0).Values[4] != points.At(14).Values[4] || points.At(0).Values[4] == points.At(1).Values[4] {
		t.Error("a draw is not the same at every point, or the same as another")
	}
	n, err := points.Bind(points.At(15))
	if err != nil {
		t.Fatal(err)
	}
	if n.Copies != 20 || n.Constants[n.ConstantIndex("k")].Value != 4 || n.Constants[n.ConstantIndex("drive")].Value != points.At(15).Values[4] {
		t.Errorf("bound to %v, %v", n.Copies, n.Constants)
	}
}

// uncertain is the latch with an uncertainty of 0.2 on drive and 0.1 on a.
func uncertain(t *testing.T) *model.Draft {
	t.Helper()
	draft, err := latch()
	if err != nil {
		t.Fatal(err)
	}
	for i := range draft.Constants {
		switch c := &draft.Constants[i]; c.Name {
		case "drive":
			c.Uncertainty = 0.2
		case "a":
			c.Uncertainty = 0.1
		}
	}
	return draft
}

func pointsOf(t *testing.T, file *batch.File, axes []batch.Axis, draws int) *batch.Points {
	t.Helper()
	p, err := batch.NewPoints(uncertain(t), batch.Base{Seed: 5}, file, axes, draws)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// Of 20,000 draws the logarithm over the uncertainty is standard normal: its mean lies
// within 4.9/√n of 0 and its variance within 4.9·√(2/n) of 1, and so does the correlation
// of two constants of 0 (five statistics, a false alarm in a million each; common practice
// for normal deviates).
func TestDrawsAreLogNormal(t *testing.T) {
	const n = 20_000
	p := pointsOf(t, nil, nil, n)
	median, sd := [2]float64{1, 0.45}, [2]float64{0.2, 0.1}
	var sum, square [2]float64
	cross := 0.0
	for i := range n {
		var z [2]float64
		for k, v := range p.At(i).Values {
			z[k] = math.Log(v/median[k]) / sd[k]
			sum[k] += z[k] / n
			square[k] += z[k] * z[k] / n
		}
		cross += z[0] * z[1] / n
	}
	for k := range 2 {
		if math.Abs(sum[k])*math.Sqrt(n) > 4.9 || math.Abs(square[k]-1)*math.Sqrt(n/2) > 4.9 {
			t.Errorf("%s: mean %v, variance %v", p.Names[k], sum[k], square[k])
		}
	}
	if math.Abs(cross)*math.Sqrt(n) > 4.9 {
		t.Errorf("correlation %v", cross)
	}
}

// A constant that is varied is not drawn, and the draws of the others do not change by that.
func TestVariedIsNotDrawn(t *testing.T) {
	all := pointsOf(t, nil, nil, 3)
	some := pointsOf(t, nil, []batch.Axis{axis(t, "drive=1,2")}, 3)
	if fmt.Sprint(all.Names, some.Names) != "[drive a] [drive a]" {
		t.Fatal(all.Names, some.Names)
	}
	for i := range 3 {
		if all.At(i).Values[1] != some.At(i).Values[1] || some.At(i).Values[0] != 1 {
			t.Errorf("draw %d: %v and %v", i+1, all.At(i).Values, some.At(i).Values)
		}
	}
}
