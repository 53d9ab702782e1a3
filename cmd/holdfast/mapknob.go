package main

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"holdfast/analysis/survey"
)

// A knobs flag collects one or two knobs with their ranges.
type knobs struct{ list *[]survey.Knob }

func (k knobs) String() string { return "" }

// mostKnobs is how many can be turned at once.
const mostKnobs = 2

// Set reads one knob.
func (k knobs) Set(text string) error {
	knob, err := readKnob(text)
	if err != nil {
		return err
	}
	if len(*k.list) == mostKnobs {
		return fmt.Errorf("%s would be the third knob; turn one, or two for the fold curve", knob.Name)
	}
	*k.list = append(*k.list, knob)
	return nil
}

// readKnob reads a name with the range to turn it over.
func readKnob(text string) (survey.Knob, error) {
	name, ends, found := strings.Cut(text, "=")
	low, high, two := strings.Cut(ends, ":")
	name = strings.ReplaceAll(name, " ", "")
	knob := survey.Knob{Name: name}
	if !found || !two || name == "" {
		return knob, fmt.Errorf("%q is not name=low:high, as in b=0.2:0.8", text)
	}
	for _, end := range []struct {
		text  string
		value *float64
	}{{low, &knob.Low}, {high, &knob.High}} {
		v, err := strconv.ParseFloat(strings.TrimSpace(end.text), 64)
		if err != nil || v < 0 || math.IsNaN(v) || math.IsInf(v, 0) {
			return knob, fmt.Errorf("%s: %q is not a finite number from 0", name, end.text)
		}
		*end.value = v
	}
	switch {
	case knob.Low > knob.High:
		return knob, fmt.Errorf("the range of %s is the wrong way round; write %s=%s:%s", name, name, high, low)
	case knob.Low == knob.High:
		return knob, fmt.Errorf("the range of %s is empty: both ends are %s", name, low)
	}
	return knob, nil
}

// Type names the value in help texts.
func (k knobs) Type() string { return "name=low:high" }

// words writes the knobs as they would be typed.
func (k knobs) words() []string {
	var out []string
	for _, o := range *k.list {
		out = append(out, "--knob", o.Name+"="+strconv.FormatFloat(o.Low, 'g', -1, 64)+":"+strconv.FormatFloat(o.High, 'g', -1, 64))
	}
	return out
}
