package branch

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"holdfast/model"
)

// knobKind is what a knob turns.
type knobKind uint8

const (
	constantKnob knobKind = iota // a constant, or a product of several
	copiesKnob
	totalKnob
)

// A Knob is a quantity of a network with the range it is turned over.
//
// A product of constants is turned by scaling each of them by the same factor.
// Copies are turned with amounts at the start held, a total by itself with the
// other totals held; a total is in molecules.
type Knob struct {
	Name      string
	Low, High float64

	kind      knobKind
	constants []int
	total     int
}

// copiesName and totalName are what the knobs that are no constants are called;
// where there are several totals a number follows, from 1 in the order of
// Network.Conserved. A constant of the same name goes before.
const (
	copiesName = "copies"
	totalName  = "total"
)

// NewKnob gives the knob of that name on the network: a constant ("leak"), a
// product of constants ("a*b"), "copies", or a conserved total ("total", or
// "total1", "total2", … where there are several, in the order of
// Network.Conserved). Low and High bound its range, both included.
//
// Errors are *UnknownKnobError, *RangeError, *ProductError.
func NewKnob(n *model.Network, name string, low, high float64) (Knob, error) {
	k, err := namedKnob(n, name)
	if err != nil {
		return Knob{}, err
	}
	k.Low, k.High = low, high
	return k, k.check(n)
}

func namedKnob(n *model.Network, name string) (Knob, error) {
	k := Knob{Name: name}
	if i := n.ConstantIndex(name); i >= 0 {
		k.constants = []int{i}
		return k, nil
	}
	if name == copiesName {
		k.kind = copiesKnob
		return k, nil
	}
	if i := slices.Index(totalNames(n), name); i >= 0 {
		k.kind, k.total = totalKnob, i
		return k, nil
	}
	for part := range strings.SplitSeq(name, "*") {
		i := n.ConstantIndex(strings.TrimSpace(part))
		if i < 0 {
			return Knob{}, &UnknownKnobError{strings.TrimSpace(part), knobNames(n)}
		}
		if slices.Contains(k.constants, i) {
			return Knob{}, &ProductError{name, fmt.Sprintf("%s stands in it twice", n.Constants[i].Name)}
		}
		k.constants = append(k.constants, i)
	}
	return k, nil
}

// totalNames gives the names of the knobs that turn conserved totals.
func totalNames(n *model.Network) []string {
	count := len(n.Conserved())
	if count == 1 {
		return []string{totalName}
	}
	out := make([]string, count)
	for i := range out {
		out[i] = fmt.Sprintf("%s%d", totalName, i+1)
	}
	return out
}

// knobNames lists what can be turned, products left out.
func knobNames(n *model.Network) []string {
	var out []string
	for _, c := range n.Constants {
		out = append(out, c.Name)
	}
	return append(append(out, copiesName), totalNames(n)...)
}

// check sees that the range is one that the knob can be turned over.
func (k Knob) check(n *model.Network) error {
	problem := ""
	switch {
	case math.IsNaN(k.Low) || math.IsInf(k.Low, 0) || math.IsNaN(k.High) || math.IsInf(k.High, 0):
		problem = "both ends must be finite numbers"
	case k.Low > k.High:
		problem = fmt.Sprintf("the range is the wrong way round; write %g:%g", k.High, k.Low)
	case k.Low == k.High:
		problem = "the range is empty; give two different ends"
	case k.Low < 0:
		problem = "the range must not go below 0"
	case k.Low == 0 && k.kind == copiesKnob:
		problem = "copies must stay above 0"
	case k.Low == 0 && len(k.constants) > 1:
		problem = "the range of a product must stay above 0"
	}
	if problem != "" {
		return &RangeError{k.Name, k.Low, k.High, problem}
	}
	if len(k.constants) < 2 {
		return nil
	}
	for _, c := range k.constants {
		if n.Constants[c].Value == 0 {
			return &ProductError{k.Name, fmt.Sprintf("%s is 0 today, and a product is turned by scaling each of its constants", n.Constants[c].Name)}
		}
	}
	return nil
}

// Today gives the knob's value on the network as it is bound.
func (k Knob) Today(n *model.Network) float64 {
	switch k.kind {
	case copiesKnob:
		return n.Copies
	case totalKnob:
		return float64(n.Conserved()[k.total].Value)
	}
	product := 1.0
	for _, c := range k.constants {
		product *= n.Constants[c].Value
	}
	return product
}

// shares tells whether two knobs turn the same thing.
func (k Knob) shares(o Knob) bool {
	if k.kind != o.kind {
		return false
	}
	switch k.kind {
	case copiesKnob:
		return true
	case totalKnob:
		return k.total == o.total
	}
	return slices.ContainsFunc(k.constants, func(c int) bool { return slices.Contains(o.constants, c) })
}
