package sizing

import (
	"math"
	"strconv"
)

// longRange is the ratio of a range's ends from which a constant is looked for on the
// logarithmic scale.
const longRange = 2

// A scale turns settings of the knob into coordinates to search in, and back.
type scale struct {
	whole       bool // copies
	logarithmic bool
	low, high   float64 // settings
	relative    float64 // tolerance of a constant
}

func newScale(k Knob, whole bool, tolerance float64) scale {
	s := scale{whole: whole, low: k.Low, high: k.High, relative: tolerance}
	s.logarithmic = !whole && k.Low > 0 && k.High/k.Low > longRange
	return s
}

// leastTolerance keeps a search near 0 from going on for ever: a share of the
// tolerance of the range.
const leastTolerance = 1e-3

// tolerance is how near to each other, as coordinates, the ends of a bracket about a
// coordinate are to come.
func (s scale) tolerance(coordinate float64) float64 {
	switch {
	case s.whole:
		return 1
	case s.logarithmic:
		return math.Log1p(s.relative)
	}
	return s.relative * math.Max(math.Abs(coordinate), leastTolerance*(s.high-s.low))
}

func (s scale) coordinate(setting float64) float64 {
	if s.logarithmic {
		return math.Log(setting)
	}
	return setting
}

// settingDigits is to how many digits constants are set: fewer than are printed would
// hide what was evaluated, and more are of no use.
const settingDigits = 6

// setting gives the setting nearest to a coordinate that can be made: a whole number of
// copies, or a constant of settingDigits digits; ends of the range stay as they are.
func (s scale) setting(coordinate float64) float64 {
	switch {
	case coordinate <= s.coordinate(s.low):
		return s.low
	case coordinate >= s.coordinate(s.high):
		return s.high
	case s.whole:
		return math.Round(coordinate)
	case s.logarithmic:
		coordinate = math.Exp(coordinate)
	}
	rounded, _ := strconv.ParseFloat(strconv.FormatFloat(coordinate, 'g', settingDigits, 64), 64)
	return min(max(rounded, s.low), s.high)
}

// clamp gives the setting within the range that is nearest to one.
func (s scale) clamp(setting float64) float64 {
	if s.whole {
		setting = math.Round(setting)
	}
	return min(max(setting, s.low), s.high)
}
