package batch

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
)

// Copies is the name of the copy number among the names of what is varied.
const Copies = "copies"

// MostPoints is the largest number of points of a batch.
const MostPoints = 1_000_000

// An Axis is what one name takes in turn: copies or a constant.
type Axis struct {
	Name   string
	Values []float64
	// Text is the axis as it was written.
	Text string
}

// ParseAxis reads name=low:high:count, evenly spaced; name=low:high:countlog, evenly
// spaced in the logarithm; or a list, name=20,50,100.
//
// Numbers between the ends are rounded to twelve digits, so that they can be read. A
// range of copies that is spaced in the logarithm, from a whole number to a whole
// number, takes whole numbers, if no two of them are then the same.
func ParseAxis(text string) (Axis, error) {
	name, values, found := strings.Cut(text, "=")
	a := Axis{Name: strings.TrimSpace(name), Text: strings.ReplaceAll(text, " ", "")}
	if !found || a.Name == "" || strings.TrimSpace(values) == "" {
		return a, fmt.Errorf("%q is not name=low:high:count or a list: copies=20:400:12log, a=0.4:0.46:7, copies=20,50,100", text)
	}
	var err error
	if strings.Contains(values, ":") {
		a.Values, err = parseRange(a.Name, values)
	} else {
		a.Values, err = parseList(a.Name, values)
	}
	return a, err
}

func parseList(name, text string) (out []float64, err error) {
	for word := range strings.SplitSeq(text, ",") {
		v, err := parseValue(name, word)
		if err != nil {
			return nil, err
		}
		if slices.Contains(out, v) {
			return nil, fmt.Errorf("%s: %s stands twice", name, strings.TrimSpace(word))
		}
		out = append(out, v)
	}
	return out, nil
}

// parseValue reads a value that the name may take.
func parseValue(name, word string) (float64, error) {
	word = strings.TrimSpace(word)
	v, err := strconv.ParseFloat(word, 64)
	if err != nil {
		return 0, fmt.Errorf("%s: %q is not a number", name, word)
	}
	return v, checkValue(name, v)
}

func checkValue(name string, v float64) error {
	switch {
	case name == Copies && !(v > 0 && v <= 1e12):
		return fmt.Errorf("%s = %v: it must be above 0 and at most 1e12", name, v)
	case !(v >= 0) || math.IsInf(v, 0):
		return fmt.Errorf("%s = %v: a constant must be a finite number, not below 0", name, v)
	}
	return nil
}

func parseRange(name, text string) ([]float64, error) {
	parts := strings.Split(text, ":")
	if len(parts) != 3 {
		return nil, fmt.Errorf("%s: %q is not low:high:count, as in 20:400:12 or 20:400:12log", name, text)
	}
	low, err := parseValue(name, parts[0])
	if err != nil {
		return nil, err
	}
	high, err := parseValue(name, parts[1])
	if err != nil {
		return nil, err
	}
	word, logarithmic := strings.CutSuffix(strings.TrimSpace(parts[2]), "log")
	count, err := strconv.Atoi(word)
	switch {
	case err != nil || count < 2:
		return nil, fmt.Errorf("%s: %q is not a count of points, a whole number from 2, with log behind it for even steps in the logarithm", name, parts[2])
	case count > MostPoints:
		return nil, fmt.Errorf("%s: %d points are too many; a batch has at most %d", name, count, MostPoints)
	case low > high:
		return nil, fmt.Errorf("the range of %s is the wrong way round; write %s=%s:%s:%s", name, name, parts[1], parts[0], parts[2])
	case low == high:
		return nil, fmt.Errorf("the range of %s is empty: both ends are %s", name, parts[0])
	case logarithmic && low == 0:
		return nil, fmt.Errorf("%s cannot go in steps of the logarithm from 0; begin above it", name)
	}
	return spaced(name, low, high, count, logarithmic), nil
}

func spaced(name string, low, high float64, count int, logarithmic bool) []float64 {
	out := make([]float64, count)
	for i := range out {
		t := float64(i) / float64(count-1)
		if logarithmic {
			out[i] = readable(math.Exp(math.Log(low) + t*(math.Log(high)-math.Log(low))))
		} else {
			out[i] = readable(low + t*(high-low))
		}
	}
	out[0], out[count-1] = low, high
	if name == Copies && logarithmic {
		return wholeIfDistinct(out)
	}
	return out
}

// readable rounds to twelve significant digits.
func readable(v float64) float64 {
	r, _ := strconv.ParseFloat(strconv.FormatFloat(v, 'g', 12, 64), 64)
	return r
}

// wholeIfDistinct rounds ascending values to whole numbers, if the ends are whole and no
// two become the same.
func wholeIfDistinct(v []float64) []float64 {
	if v[0] != math.Trunc(v[0]) || v[len(v)-1] != math.Trunc(v[len(v)-1]) {
		return v
	}
	out := make([]float64, len(v))
	for i := range v {
		out[i] = math.Round(v[i])
		if i > 0 && out[i] == out[i-1] {
			return v
		}
	}
	return out
}
