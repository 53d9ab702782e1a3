package model

import (
	"math"
	"strconv"
	"strings"

	"github.com/pelletier/go-toml/v2/unstable"
)

// span is what a number may be. None may be infinite or no number at all.
type span uint8

const (
	positive span = iota
	notNegative
	wholeCount
	coefficient
	logDeviation
)

// largestDeviation is the largest standard deviation of a constant's logarithm: at
// 3, one cell in three has more than 20 times the median or less than a 20th.
const largestDeviation = 3

// largestCoefficient is the largest whole-number coefficient of a reaction;
// largestWhole is the largest count that a float64 still tells from the next one.
const (
	largestCoefficient = 1_000_000
	largestWhole       = 1 << 53
)

// String says what is allowed.
func (s span) String() string {
	return [...]string{
		positive:    "a finite number above 0",
		notNegative: "a finite number, not below 0",
		wholeCount:  "a whole number, not below 0",
		coefficient: "a whole number from 1 to 1000000",

		logDeviation: "a number from 0 to 3, the standard deviation of its natural logarithm",
	}[s]
}

// holds tells whether v lies in the span; whether it is whole is not looked at.
func (s span) holds(v float64) bool {
	switch {
	case math.IsNaN(v) || math.IsInf(v, 0):
		return false
	case s == positive:
		return v > 0
	case s == coefficient:
		return v >= 1 && v <= largestCoefficient
	case s == logDeviation:
		return v >= 0 && v <= largestDeviation
	}
	return v >= 0
}

// parseNumber gives the value of a TOML number; a float beyond the largest is an
// error, inf and nan are not.
func parseNumber(v *tomlValue) (float64, error) {
	text := strings.ReplaceAll(v.text, "_", "")
	if v.kind == unstable.Float {
		return strconv.ParseFloat(text, 64)
	}
	i, err := strconv.ParseInt(text, 0, 64)
	return float64(i), err
}

func looksNumeric(text string) bool {
	_, err := strconv.ParseFloat(strings.TrimSpace(text), 64)
	return err == nil
}
