package levers

import (
	"fmt"
	"math"
	"strconv"
	"strings"
)

// change gives the change of a hold time's logarithm for a change of a constant by one
// per cent up (+1) or down (−1), taking the slope to hold over it.
func change(slope, direction float64) float64 { return slope * math.Log1p(direction/100) }

// first says what to change first for a hold time to be longer.
func (j *job) first(b *Block) string {
	best := -1
	for i := range b.Levers {
		if l := &b.Levers[i]; !l.PerUnit && l.certain() {
			best = i
			break // they are sorted
		}
	}
	if best < 0 {
		return ""
	}
	l := &b.Levers[best]
	slope := float64(l.Slope().Value)
	direction := math.Copysign(1, slope)
	text := fmt.Sprintf("change first: %s; %s of it makes %s hold %s", l.Name, percentStep(direction), b.name(), longer(change(slope, direction)))
	return text + j.others(b, l.Name, direction)
}

// certain tells that the slope is known, and that it is not 0 within its error.
func (l *Lever) certain() bool {
	s := l.Slope()
	return s.Low > 0 || s.High < 0
}

// others says what the same change does to the other states.
func (j *job) others(b *Block, name string, direction float64) string {
	var parts []string
	for i := range j.report.Blocks {
		o := &j.report.Blocks[i]
		if o.From == b.From || !j.leads(i) {
			continue
		}
		if l := o.lever(name); l != nil && l.certain() {
			parts = append(parts, o.From+" "+longer(change(float64(l.Slope().Value), direction)))
		}
	}
	if len(parts) == 0 {
		return ""
	}
	return ", and " + strings.Join(parts, ", ")
}

// leads tells that block i is the first of its state.
func (j *job) leads(i int) bool {
	return i == 0 || j.report.Blocks[i-1].From != j.report.Blocks[i].From
}

// lever finds a lever by name.
func (b *Block) lever(name string) *Lever {
	for i := range b.Levers {
		if b.Levers[i].Name == name {
			return &b.Levers[i]
		}
	}
	return nil
}

// name names the hold time: the state, and where it leads if there are several ways.
func (b *Block) name() string { return b.From }

// together says which change of one per cent makes every state hold longer, and the
// least of them longest.
func (j *job) together() string {
	var states []*Block
	for i := range j.report.Blocks {
		if b := &j.report.Blocks[i]; j.leads(i) && len(b.Levers) > 0 {
			states = append(states, b)
		}
	}
	if len(states) < 2 {
		return ""
	}
	name, direction, least := "", 0.0, 0.0
	for k := range j.parameters() {
		p, _ := j.parameter(k)
		for _, d := range []float64{1, -1} {
			if worst := weakest(states, p, d); worst > least {
				name, direction, least = p, d, worst
			}
		}
	}
	if name == "" {
		return "no constant by itself makes every state hold longer"
	}
	return fmt.Sprintf("for all states at once: %s; %s of it makes each hold at least %s", name, percentStep(direction), longer(least))
}

// weakest is the smallest change of a hold time's logarithm that a change of one per cent
// makes; 0 where some state's is not known.
func weakest(states []*Block, name string, direction float64) float64 {
	least := math.Inf(1)
	for _, b := range states {
		l := b.lever(name)
		if l.PerUnit || !l.certain() {
			return 0
		}
		least = math.Min(least, change(float64(l.Slope().Value), direction))
	}
	return least
}

func percentStep(direction float64) string {
	if direction > 0 {
		return "+1 %"
	}
	return "−1 %"
}

// longer writes the change of a hold time, given by its logarithm, in per cent with two
// digits, or, beyond a factor of three, as a factor.
func longer(log float64) string {
	word := "longer"
	if log < 0 {
		word = "shorter"
	}
	if size := math.Abs(log); size > math.Log(3) {
		return factor(size) + " times " + word
	}
	return short(math.Abs(100*math.Expm1(log))) + " % " + word
}

// factor writes e to the power of log with two digits, however large.
func factor(log float64) string {
	if log < math.Log(1e4) {
		return short(math.Exp(log))
	}
	whole, part := math.Modf(log / math.Ln10)
	return short(math.Pow(10, part)) + "e" + short(whole)
}

// short writes a number with two digits.
func short(v float64) string {
	rounded, _ := strconv.ParseFloat(strconv.FormatFloat(v, 'g', 2, 64), 64)
	return strconv.FormatFloat(rounded, 'f', -1, 64)
}
