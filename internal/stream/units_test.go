package stream_test

import (
	"math"
	"testing"

	"holdfast/internal/stream"
)

// A block of uniform numbers is made of the numbers of the source, in their order, and
// the next block goes on from there.
func TestUnitsAreTheNumbersOfTheStream(t *testing.T) {
	a, b := stream.New(1, 2, 3), stream.New(1, 2, 3)
	var units stream.Units
	for block := range 3 {
		a.FillUnits(&units)
		for i, u := range units {
			want := math.Float64frombits(b.Uint64()>>12|1023<<52) - 1
			if u != want || u < 0 || u >= 1 {
				t.Fatalf("block %d, number %d is %v, want %v", block, i, u, want)
			}
		}
	}
}
