package staged_test

import (
	"context"
	"testing"

	"holdfast/analysis/staged"
	"holdfast/internal/race"
	"holdfast/internal/zoo"
)

// covered gives how many of so many seeds' intervals hold the rate.
func covered(t *testing.T, p staged.Plan, rate float64, seeds int) (held, missed int) {
	t.Helper()
	for seed := range uint64(seeds) {
		p.Seed = seed + firstSeed
		r, err := staged.Run(context.Background(), p)
		if err != nil {
			t.Fatal(err)
		}
		if r.Low <= rate && rate <= r.High {
			held++
		}
		if r.Missed {
			missed++
		}
	}
	return held, missed
}

// firstSeed is the first of the seeds; the tests were run by hand from others too.
const firstSeed = 1

// Calibration: of 1,000 seeds' 95 % intervals 93 to 97 % hold the rate of a chain that
// flips now and then, and of 200 seeds' 91 to 99 % that of one that flips once in a
// million minutes (closed double sum). The limits are the task's own: at 95 % a count of
// 1,000 lies within ±20 but for 0.3 %, so the seeds are fixed.
func TestIntervalsHoldTheTruth(t *testing.T) {
	if testing.Short() || race.Enabled {
		t.Skip("left to the plain run")
	}
	for _, c := range []struct {
		copies             float64
		seeds, least, most int
	}{{10, 1000, 930, 970}, {60, 200, 182, 198}} {
		m := survey(t, zoo.LeakyActivator(0.4, 0.01, c.copies))
		p := plan(m, 0, 1)
		p.Precision, p.Threads = 0.5, 2
		held, missed := covered(t, p, 1/dwell(m, 0), c.seeds)
		if held < c.least || held > c.most {
			t.Errorf("%v copies: %d of %d intervals hold the rate; want %d to %d", c.copies, held, c.seeds, c.least, c.most)
		}
		if missed > c.seeds/100 {
			t.Errorf("%v copies: %d of %d warn that repeats disagree", c.copies, missed, c.seeds)
		}
		t.Logf("%v copies: %d of %d intervals hold the rate; %d warnings", c.copies, held, c.seeds, missed)
	}
}
