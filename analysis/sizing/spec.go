package sizing

import (
	"fmt"
	"strings"

	"holdfast/model"
)

// Every stands in a specification for each state of the design.
const Every = "every"

// ChanceUnit is the unit of what is found for a specification that asks for a chance.
const ChanceUnit = "chance"

// A Spec is one demand on a state: a mean dwell of at least Time, or, where Chance is
// above 0, at least that chance of holding for Time.
type Spec struct {
	// Text is the specification as it was typed.
	Text string
	// State is the name of a state, or Every.
	State string
	// Amount and Unit are the time as typed, Time the same in the design's unit.
	Amount float64
	Unit   string
	Time   float64
	// Chance is between 0 and 1; 0 where the mean dwell is asked for.
	Chance float64

	column int // of the state, from 0
}

// ParseSpec reads a specification for a design:
//
//	STATE >= NUMBER UNIT                      mean dwell of at least so much
//	STATE holds NUMBER UNIT with chance P     that chance, or a greater one, to hold so long
//
// STATE is a name or "every"; UNIT is generations or the design's own unit of time.
// Errors are *SpecError.
func ParseSpec(text string, n *model.Network) (Spec, error) {
	p := &parser{text: text, network: n}
	spec := Spec{Text: strings.TrimSpace(text)}
	err := p.spec(&spec)
	return spec, err
}

// ParseSpecs reads several specifications, which must all hold.
func ParseSpecs(texts []string, n *model.Network) ([]Spec, error) {
	specs := make([]Spec, len(texts))
	for i, text := range texts {
		var err error
		if specs[i], err = ParseSpec(text, n); err != nil {
			return nil, err
		}
	}
	return specs, nil
}

// String writes the specification in its plain form.
func (s Spec) String() string {
	if s.Chance > 0 {
		return fmt.Sprintf("%s holds %s with chance %s", s.State, s.length(), short(s.Chance))
	}
	return fmt.Sprintf("%s >= %s", s.State, s.length())
}

// FoundUnit is the unit of what is found for the specification: generations, the
// design's unit of time, or ChanceUnit.
func (s Spec) FoundUnit() string {
	if s.Chance > 0 {
		return ChanceUnit
	}
	return s.Unit
}

func (s Spec) length() string { return short(s.Amount) + " " + s.Unit }

// of names the states that the specification is about, among those there are.
func (s Spec) of(names []string) []string {
	if s.State == Every {
		return names
	}
	return []string{s.State}
}

// A SpecError says what is wrong with a specification and where.
type SpecError struct {
	Text   string
	Column int // of the place, from 1, in characters
	// Message says what is wrong, Hint what to type.
	Message, Hint string
}

// Error gives the message, the specification with a caret under the place, and the hint.
func (e *SpecError) Error() string {
	text := "spec: " + e.Message
	if strings.TrimSpace(e.Text) != "" {
		text += fmt.Sprintf("\n    %s\n    %s^", e.Text, strings.Repeat(" ", e.Column-1))
	}
	if e.Hint != "" {
		text += "\n    " + e.Hint
	}
	return text
}

// unknownState is the error of a state that none of the settings evaluated has.
func (s Spec) unknownState(names []string) error {
	return &SpecError{s.Text, s.column + 1, fmt.Sprintf("there is no state %q", s.State), model.NameHint(s.State, append(names[:len(names):len(names)], Every))}
}
