package levers

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
)

// change gives the change of a hold time's logarithm for a change of a constant by one
// per cent up (+1) or down (−1), taking the slope to hold over it.
func change(slope, direction float64) float64 { return slope * math.Log1p(direction/100) }

// first says what to change first for block i's hold time to be longer.
func (j *job) first(i int) string {
	b := &j.report.Blocks[i]
	best := slices.IndexFunc(b.Levers, func(l Lever) bool { return !l.PerUnit && l.certain() }) // they are sorted
	if best < 0 {
		return ""
	}
	l := &b.Levers[best]
	slope := float64(l.Slope().Value)
	direction := math.Copysign(1, slope)
	text := fmt.Sprintf("change first: %s%s; %s of it makes ", l.Name, b.alike(best), percentStep(direction))
	if !j.leads(i) {
		return text + fmt.Sprintf("the time between flips from %s to %s %s", b.From, b.To, longer(change(slope, direction)))
	}
	return text + fmt.Sprintf("%s hold %s", b.From, longer(change(slope, direction))) + j.others(b, l.Name, direction)
}

// alike lists the levers that may be as strong as the first, their intervals being wide.
func (b *Block) alike(best int) string {
	var names []string
	least := b.Levers[best].weakest()
	for i := range b.Levers {
		l := &b.Levers[i]
		if s := l.Slope(); i != best && !l.PerUnit && math.Max(float64(s.High), -float64(s.Low)) > least {
			names = append(names, l.Name)
		}
	}
	if len(names) == 0 {
		return ""
	}
	return " (or " + strings.Join(names, ", ") + ", which may be as strong)"
}

// weakest is the smallest size that a slope may have.
func (l *Lever) weakest() float64 {
	s := l.Slope()
	return math.Max(math.Max(float64(s.Low), -float64(s.High)), 0)
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
	if name == "" && !known(states) {
		return ""
	}
	if name == "" {
		return "no constant by itself makes every state hold longer"
	}
	return fmt.Sprintf("for all states at once: %s; %s of it makes each hold at least %s", name, percentStep(direction), longer(least))
}

// known tells that no slope is missing.
func known(states []*Block) bool {
	missing := func(l Lever) bool { return math.IsNaN(float64(l.Slope().Value)) }
	return !slices.ContainsFunc(states, func(b *Block) bool { return slices.ContainsFunc(b.Levers, missing) })
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
	return short(math.Pow(10, part)) + "e" + strconv.FormatFloat(whole, 'f', 0, 64)
}

// short writes a number with two digits.
func short(v float64) string {
	rounded, _ := strconv.ParseFloat(strconv.FormatFloat(v, 'g', 2, 64), 64)
	return strconv.FormatFloat(rounded, 'f', -1, 64)
}
