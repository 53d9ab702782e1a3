package main

import (
	"errors"
	"fmt"
	"maps"
	"math"
	"slices"
	"strconv"
	"strings"

	"github.com/spf13/pflag"
)

// A positive is a flag that takes a finite number above 0.
type positive struct{ value *float64 }

func (p positive) String() string {
	if p.value == nil || *p.value == 0 {
		return ""
	}
	return strconv.FormatFloat(*p.value, 'g', -1, 64)
}

// Set reads the number.
func (p positive) Set(s string) error {
	v, err := strconv.ParseFloat(s, 64)
	if err != nil || !(v > 0) || math.IsInf(v, 0) {
		return fmt.Errorf("%q is not a number above 0", s)
	}
	*p.value = v
	return nil
}

// Type names the value in help texts.
func (p positive) Type() string { return "number" }

// A count is a flag that takes a whole number from 1, also written like 2e9.
type count struct{ value *int64 }

func (c count) String() string {
	if c.value == nil || *c.value == 0 {
		return ""
	}
	return strconv.FormatInt(*c.value, 10)
}

// Set reads the number.
func (c count) Set(s string) error {
	v, err := strconv.ParseFloat(s, 64)
	if err != nil || !(v >= 1) || v > 1e18 || v != math.Trunc(v) {
		return fmt.Errorf("%q is not a whole number from 1 to 1e18", s)
	}
	*c.value = int64(v)
	return nil
}

// Type names the value in help texts.
func (c count) Type() string { return "number" }

// A settings flag collects name=value pairs of constants.
type settings struct{ values map[string]float64 }

func (s settings) String() string { return "" }

// Set reads one pair.
func (s settings) Set(text string) error {
	name, value, found := strings.Cut(text, "=")
	name = strings.TrimSpace(name)
	if !found || name == "" {
		return fmt.Errorf("%q is not name=value", text)
	}
	if name == "copies" {
		return errors.New("copies has an option of its own: --copies N")
	}
	v, err := strconv.ParseFloat(strings.TrimSpace(value), 64)
	if err != nil || v < 0 || math.IsNaN(v) || math.IsInf(v, 0) {
		return fmt.Errorf("%s: %q is not a finite number from 0", name, value)
	}
	if _, twice := s.values[name]; twice {
		return fmt.Errorf("%s is set twice", name)
	}
	s.values[name] = v
	return nil
}

// Type names the value in help texts.
func (s settings) Type() string { return "name=value" }

func positiveFlag(f *pflag.FlagSet, to *float64, name, usage string) {
	f.Var(positive{to}, name, usage)
}

func countFlag(f *pflag.FlagSet, to *int64, name, usage string) { f.Var(count{to}, name, usage) }

// words writes the pairs as they would be typed, by name.
func (s settings) words() []string {
	var out []string
	for _, name := range slices.Sorted(maps.Keys(s.values)) {
		out = append(out, "--with", name+"="+strconv.FormatFloat(s.values[name], 'g', -1, 64))
	}
	return out
}

// bytesOf turns a number of GiB into bytes.
func bytesOf(gib float64) int64 { return int64(gib * (1 << 30)) }
