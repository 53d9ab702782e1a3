package deterministic_test

import (
	"testing"

	"holdfast/deterministic"
)

func TestIsStableName(t *testing.T) {
	for name, want := range map[string]bool{
		"only": true, "low": true, "middle": true, "high": true, "level1": true, "level12": true,
		"level0": false, "level": false, "level01": false, "level-1": false, "4": false, "saddle": false, "High": false, "": false,
	} {
		if got := deterministic.IsStableName(name); got != want {
			t.Errorf("%q: %v", name, got)
		}
	}
}
