package dwell

import "fmt"

// fewestTested is the number of flips below which the test is not made: it could
// not tell anything.
const fewestTested = 8

// A Memory is the outcome of a test that dwells are memoryless, that is, that
// they flip at a constant rate from their start on.
type Memory struct {
	Flips int     // flips seen
	Level float64 // the share of memoryless samples that the test rejects
	// Statistic is that of Anderson and Darling, PValue the chance that memoryless
	// dwells give it or more. Both are 0 where Tested is false.
	Statistic, PValue float64
	// Shift is the mean place of the flips on the clock of the total time on test,
	// less ½: positive where flips come late (a waiting time first), negative where
	// they come early (short and long dwells mixed).
	Shift    float64
	Tested   bool // there were enough flips
	Rejected bool // PValue < Level
}

// TestMemory tests at the given level (0.01 rejects one memoryless sample in a
// hundred) that the dwells are memoryless. Dwells cut off are used as such.
//
// The clock is the total time on test: at each moment it runs at the number of
// dwells still watched (Epstein and Sobel, J. Am. Stat. Assoc. 48 (1953) 486;
// Barlow and Campo, in Reliability and Fault Tree Analysis, SIAM 1975, 451). On it,
// memoryless flips are a Poisson process whatever was cut off, so that up to its
// end their places are uniform: exactly so for complete dwells, closely so for many
// dwells some of which were cut off. Uniformity is tested by the statistic of
// Anderson and Darling (J. Am. Stat. Assoc. 49 (1954) 765), which sees rates that
// rise, fall, or do both.
func TestMemory(obs []Observation, level float64) Memory {
	return testSorted(byTime(obs), level)
}

// testSorted is TestMemory for dwells sorted by time.
func testSorted(sorted []Observation, level float64) Memory {
	places := testTimes(sorted)
	m := Memory{Level: level, Flips: countFlips(sorted, Any)}
	if m.Flips < fewestTested || len(places) == 0 {
		return m
	}
	m.Tested = true
	m.Statistic = andersonDarling(places)
	m.PValue = andersonDarlingTail(len(places), m.Statistic)
	m.Rejected = m.PValue < level
	for _, u := range places {
		m.Shift += (u - 0.5) / float64(len(places))
	}
	return m
}

// testTimes gives the places of the flips on the clock of the total time on test,
// as shares of its end, ascending. A flip that is the end itself is left out.
func testTimes(sorted []Observation) []float64 {
	clock, before := 0.0, 0.0
	var places []float64
	for i, o := range sorted {
		clock += float64(len(sorted)-i) * (o.Time - before)
		before = o.Time
		if o.To != Censored && i < len(sorted)-1 {
			places = append(places, clock)
		}
	}
	if !(clock > 0) {
		return nil
	}
	for i := range places {
		places[i] /= clock
	}
	return places
}

func countFlips(obs []Observation, target int) (n int) {
	for i := range obs {
		if obs[i].flipped(target) {
			n++
		}
	}
	return n
}

// String says what the test found.
func (m Memory) String() string {
	switch {
	case !m.Tested:
		return fmt.Sprintf("not tested for memory: %d flips are too few", m.Flips)
	case !m.Rejected:
		return fmt.Sprintf("consistent with memoryless dwells (p = %.2g, %d flips)", m.PValue, m.Flips)
	case m.Shift > 0:
		return fmt.Sprintf("not memoryless (p = %.2g, %d flips): flips are rarer at first and come later than chance", m.PValue, m.Flips)
	}
	return fmt.Sprintf("not memoryless (p = %.2g, %d flips): flips are most frequent at first, short and long dwells are mixed", m.PValue, m.Flips)
}
