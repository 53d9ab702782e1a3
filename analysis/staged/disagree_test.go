package staged

import "testing"

// Forty repeats, each good to a relative variance of 0.04 by its own families. Where they spread
// as that says there is no warning; where one in twenty found another way, ten times as
// wide as the first, there is: the chance of that by spread alone is far below 1e-4.
func TestRepeatsThatDisagree(t *testing.T) {
	for _, c := range []struct {
		name   string
		second float64 // rate of the other way, seen by every twentieth repeat
		want   bool
	}{{"one way", 0, false}, {"another way, now and then", 10, true}} {
		r := &Result{within: 0.04}
		for k := range 40 {
			rate := 1 + 0.2*float64(2*(k%2)-1) // standard deviation 0.2
			if k%20 == 7 {
				rate += c.second
			}
			r.Repeats = append(r.Repeats, rate)
		}
		r.interval()
		r.disagree()
		if r.Missed != c.want {
			t.Errorf("%s: disagreement %.3g, missed %v, want %v", c.name, r.Disagreement, r.Missed, c.want)
		}
	}
}
