package ssa

// care does a lane's event of a step of a block with all tests there are. It
// tells whether the lanes can go on with these rows; if not, unspent says whether
// the event is still to be done.
func (k *blocks) care(l *lane, step int) (ok, unspent bool) {
	if l.run < 0 {
		return true, false
	}
	l.left -= int64(step)
	k.leave(l)
	if k.rest(l, step) && k.spilled {
		l.left += int64(step)
		return false, true
	}
	if l.run >= 0 {
		k.event(l, step)
	}
	l.left += int64(step) + 1
	return !k.spilled, false
}

// rest puts a lane in its place, and another run in it, with draws from a step on,
// where its own does not go on. It tells whether the lane has a run.
func (k *blocks) rest(l *lane, step int) bool {
	for l.run >= 0 && !k.place(l) {
		k.replace(l, step)
	}
	return l.run >= 0
}

// replace gives a lane the next run, with draws from a step on, if there is one.
func (k *blocks) replace(l *lane, step int) {
	if k.begin(l); l.run < 0 {
		l.at = position{}
		return
	}
	l.redraw(step)
}

func (k *blocks) event(l *lane, step int) {
	total := k.total(l)
	t := l.time + l.draws.Exp[step]/total
	if t > l.next && !k.late(l, t) {
		k.replace(l, step+1)
	} else {
		l.time = t
		k.fire(l, k.choose(l, l.draws.Unit[step]*total))
		l.left--
	}
	k.rest(l, step+1)
}
