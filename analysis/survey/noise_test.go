package survey

import (
	"slices"
	"testing"

	"holdfast/deterministic/branch"
)

// A window that lies across the seam of a closed branch is walked round it.
func TestWalkRoundASeam(t *testing.T) {
	b := &branch.Branch{Marks: []branch.Mark{{Kind: branch.Closed}, {Kind: branch.Closed, Index: 6}}}
	for _, k := range []float64{3, 4, 3, 2, 1, 2, 3} { // the last is the first again
		b.Points = append(b.Points, branch.Point{Knob: k})
	}
	if got := walk(b, 4, 1, 1); !slices.Equal(got, []int{4, 5, 0, 1}) {
		t.Errorf("walked %v", got)
	}
	if got := walk(b, 4, 1, -1); !slices.Equal(got, []int{4, 3, 2, 1}) {
		t.Errorf("walked %v", got)
	}
	b.Marks = nil
	if got := walk(b, 4, 1, 1); got != nil {
		t.Errorf("walked %v off the end", got)
	}
}
