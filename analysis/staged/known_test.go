package staged_test

import (
	"fmt"
	"math"
	"testing"

	"holdfast/analysis/staged"
	"holdfast/internal/race"
	"holdfast/internal/zoo"
	"holdfast/model"
)

// Passage times of one-species chains, up to 1e21 min, against the closed double sum,
// both ways: a self-activator with a leak at more and more copies, and the chain of
// Schlögl in a larger volume. The statistic is the distance of the logarithm of the rate
// in its own standard errors, Student's t; a false alarm in a million for each.
func TestChainsUpTo1e21(t *testing.T) {
	if race.Enabled {
		t.Skip("left to the plain run")
	}
	for _, c := range []struct {
		network *model.Network
		from    int
	}{
		{zoo.LeakyActivator(0.4, 0.01, 30), 0},
		{zoo.LeakyActivator(0.4, 0.01, 30), 1},
		{zoo.LeakyActivator(0.4, 0.01, 80), 0},
		{zoo.LeakyActivator(0.4, 0.01, 80), 1},
		{zoo.LeakyActivator(0.4, 0.01, 160), 0},
		{zoo.LeakyActivator(0.3, 0.01, 54), 1},
		{zoo.SchloglIn(2), 0},
	} {
		m := survey(t, c.network)
		p := plan(m, c.from, 1-c.from)
		p.Precision = 0.5
		truth := dwell(m, c.from)
		r := estimate(t, p)
		if z := apart(r, 1/truth); !(math.Abs(z) < wide(len(r.Repeats))) {
			t.Errorf("%s from %d: %.4g, want %.4g: z = %.1f", c.network.Title, c.from, 1/r.Rate, truth, z)
		}
		t.Logf("%s, %v copies, from %d: %.4g [%.4g, %.4g], closed sum %.4g; %d stages, %d repeats, %.3g events, disagreement %.2f",
			c.network.Title, c.network.Copies, c.from, 1/r.Rate, 1/r.High, 1/r.Low, truth, len(r.Stages), len(r.Repeats), float64(r.Events), r.Disagreement)
	}
}

// latchDwells are mean dwells of zoo.Latch in minutes, low to high and back (computed:
// the master equation on its lattice, elimination without subtraction).
func latchDwells() map[float64][2]float64 {
	return map[float64][2]float64{20: {566.3464, 151.775}, 60: {16309.46, 3435.534}, 100: {441370.8, 80908.79}}
}

// The estimate does not depend on the coordinate: the latch along the straight line,
// along each species' count, and along a path that goes well out of its way.
func TestCoordinatesAgree(t *testing.T) {
	for _, copies := range []float64{20, 60} {
		m := survey(t, zoo.Latch(copies))
		for from := range 2 {
			a, b := m.States[from].Molecules, m.States[1-from].Molecules
			protein, err := staged.Count(a, b, 1, "protein")
			if err != nil {
				t.Fatal(err)
			}
			transcript, err := staged.Count(a, b, 0, "mrna")
			if err != nil {
				t.Fatal(err)
			}
			aside := []float64{a[0] + 0.8*(b[0]-a[0]), a[1] + 0.2*(b[1]-a[1])}
			bent := staged.Path("a bent line", [][]float64{a, aside, b}, [][]float64{{aside[0] - a[0], aside[1] - a[1]}, {b[0] - a[0], b[1] - a[1]}, {0, 0}})
			for _, c := range []staged.Coordinate{staged.Line(a, b, m.States[from].Covariance), protein, transcript, bent} {
				p := plan(m, from, 1-from)
				p.Along, p.Precision = c, 0.3
				r, truth := estimate(t, p), latchDwells()[copies][from]
				if z := apart(r, 1/truth); !(z < wide(len(r.Repeats)) && z > -wide(len(r.Repeats))) {
					t.Errorf("%v copies from %d along %s: %.4g, want %.4g: z = %.1f", copies, from, c.Name, 1/r.Rate, truth, z)
				}
				t.Logf("%v copies from %d along %s: ratio %.3f, z %.1f, %.3g events", copies, from, c.Name, r.Rate*truth, apart(r, 1/truth), float64(r.Events))
			}
		}
	}
}

// The same numbers come out, bit for bit, whatever the number of threads.
func TestThreadsChangeNothing(t *testing.T) {
	m := survey(t, zoo.Latch(30))
	var first string
	for _, threads := range []int{1, 2, 7} {
		p := plan(m, 1, 0)
		p.Precision, p.Threads = 0.5, threads
		r := estimate(t, p)
		if all := fmt.Sprintf("%+v", *r); first == "" {
			first = all
		} else if all != first {
			t.Errorf("%d threads give %s, one gives %s", threads, all, first)
		}
	}
}
