package model

import (
	"strconv"
	"strings"

	"github.com/pelletier/go-toml/v2/unstable"
)

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
