package hold

import "testing"

func TestPlan(t *testing.T) {
	for _, c := range []struct {
		name       string
		flips      int
		events     int64
		seen       int
		seenEvents int64
		runs       int
		perRun     int64
	}{
		{"flips are cheap: as many as the precision takes", 400, 1_000_000_000, 32, 32_000, 400, 30_000},
		{"flips are dear: as many as the budget pays", 400, 100_000_000, 10, 10_000_000, 95, 30_000_000},
		{"hardly any flip: long runs share the budget", 400, 100_000_000, 3, 5_000_000, 32, 2_968_750},
		{"no flip and a small budget: few long runs", 400, 3_000_000, 0, 150_000, 2, 1_425_000},
		{"next to nothing to spend", 400, 1, 0, 1, 1, 1},
	} {
		got := plan(c.flips, c.events, c.seen, c.seenEvents)
		if got.runs != c.runs || got.work != c.perRun {
			t.Errorf("%s: %d runs of %d events, want %d of %d", c.name, got.runs, got.work, c.runs, c.perRun)
		}
	}
}

// A plan never spends more than its budget but by the chance of its dwells: runs
// times the pilot's mean, or runs times the cut-off where none was seen.
func TestPlanKeepsTheBudget(t *testing.T) {
	for events := int64(1); events < 1e12; events = events*7 + 3 {
		for _, seen := range []int{0, 7, 8, 32} {
			pilot := pilotAllowance(events)
			spent := int64(pilot.runs) * pilot.work
			got := plan(1_000_000, events, seen, spent)
			cost := float64(got.runs) * float64(got.work)
			if seen >= pilotFlips {
				cost = float64(got.runs) * float64(spent) / float64(seen)
			}
			if got.runs > 1 && cost > float64(events) || got.runs < 1 || got.work < 1 {
				t.Errorf("budget %d, %d seen: %d runs of %d events", events, seen, got.runs, got.work)
			}
		}
	}
}

func TestRemaining(t *testing.T) {
	for _, c := range [][3]int64{{0, 100, 0}, {100, 30, 70}, {100, 100, 1}, {100, 200, 1}} {
		if got := remaining(c[0], c[1]); got != c[2] {
			t.Errorf("remaining(%d, %d) = %d, want %d", c[0], c[1], got, c[2])
		}
	}
}
