package deterministic

import (
	"context"
	"fmt"
)

// flowEnd says how a followed flow ended.
type flowEnd uint8

const (
	flowSettled   flowEnd = iota // at rest
	flowUnsettled                // still moving when the steps were spent
	flowRanAway                  // an amount passed the limit
	flowStopped                  // no step could be taken, or cancelled
)

func (e flowEnd) String() string {
	switch e {
	case flowSettled:
		return "settled"
	case flowUnsettled:
		return "still moving"
	case flowRanAway:
		return "ran away"
	case flowStopped:
		return "stopped"
	}
	return fmt.Sprintf("flowEnd(%d)", uint8(e))
}

// flowSteps is the most steps that a flow is followed for.
const flowSteps = 20000

// follow integrates from x, in place, until done says so, an amount passes its
// limit (the species is given), or the steps are spent. done is called after
// each step with the largest relative change in it.
func (g *integrator) follow(ctx context.Context, x, limit []float64, steps int, done func(moved float64) bool) (flowEnd, int) {
	g.start(x)
	for k := range steps {
		if k%64 == 0 && ctx.Err() != nil {
			return flowStopped, -1
		}
		moved, ok := g.advance(x)
		if !ok {
			return flowStopped, -1
		}
		if i := beyond(x, limit); i >= 0 {
			return flowRanAway, i
		}
		if done(moved) {
			return flowSettled, -1
		}
	}
	return flowUnsettled, -1
}

// beyond gives the species that is furthest over its limit, or -1.
func beyond(x, limit []float64) int {
	worst, most := -1, 1.0
	for i, v := range x {
		if v/limit[i] > most {
			worst, most = i, v/limit[i]
		}
	}
	return worst
}
