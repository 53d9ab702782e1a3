package ssa

import "holdfast/internal/stream"

// blockSteps is the number of events that each lane has in a block.
const blockSteps = stream.Block

// A rush advances lanes[i], lanes[i+1], … by their event of a step, and then all
// lanes by those of the later steps of a block, up to the first event that is out
// of the ordinary, and gives its step and lane. It calls nothing, so what it needs
// stays in registers.
type rush func(k *lookup, lanes []lane, step, i int) (int, int)

// blocks is the loop of Dense with tables. Ordinary events are done in a rush, lane
// by lane, so that the latencies of one lane's event are spent on the others'; all
// other events are done with care.
type blocks struct {
	*lookup
	rush rush
}

func newBlocks(k *lookup, r rush) *blocks { return &blocks{k, r} }

// advance gives each lane a block of events. Within the block, the events that a
// lane has left do not tell of those done in it.
func (k *blocks) advance(lanes []lane) {
	near := k.MaxEvents > 0 && k.MaxEvents <= blockSteps
	for i := range lanes {
		lanes[i].redraw(0)
		near = near || lanes[i].left <= blockSteps
	}
	for step, i := 0, 0; ; {
		if !near {
			step, i = k.rush(k.lookup, lanes, step, i)
		}
		if step == blockSteps {
			break
		}
		ok, unspent := k.care(&lanes[i], step)
		if i++; !ok {
			if unspent {
				i--
			}
			k.spill(lanes, step, i)
			return
		}
		if i == len(lanes) {
			step, i = step+1, 0
		}
		if step == blockSteps {
			break
		}
	}
	for i := range lanes {
		lanes[i].left -= blockSteps
	}
}
