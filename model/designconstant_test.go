package model

import (
	"errors"
	"slices"
	"strings"
	"testing"
)

// varied is the good design with constants that vary.
func varied(t *testing.T) *Draft {
	t.Helper()
	text := strings.Replace(good, "k = 2.0", "k = { value = 2.0, spread = 0.2, memory = 30.0, uncertainty = 0.1 }", 1)
	text = strings.Replace(text, "h = 1.5", "h.value = 1.5\nh.spread = 0.5", 1)
	d, err := Parse("t.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func TestVaryingConstants(t *testing.T) {
	d := varied(t)
	want := []Constant{
		{Name: "k", Value: 2, Spread: 0.2, Memory: 30, Uncertainty: 0.1},
		{Name: "h", Value: 1.5, Spread: 0.5},
	}
	if !slices.Equal(d.Constants, want) {
		t.Errorf("constants %+v", d.Constants)
	}
	n, err := d.Bind(0, map[string]float64{"k": 3})
	if err != nil {
		t.Fatal(err)
	}
	want[0].Value = 3
	if !slices.Equal(n.Constants, want) || !slices.Equal(n.ConstantValues(), []float64{3, 1.5}) {
		t.Errorf("k set to 3: constants %+v, values %v", n.Constants, n.ConstantValues())
	}
	if !slices.Equal(n.Varying(), []int{0, 1}) {
		t.Errorf("varying %v", n.Varying())
	}
}

// TestDescribeVarying looks for the constants' lines in what check prints.
func TestDescribeVarying(t *testing.T) {
	n, err := varied(t).Bind(0, nil)
	if err != nil {
		t.Fatal(err)
	}
	var b strings.Builder
	if err := n.Describe(&b); err != nil {
		t.Fatal(err)
	}
	want := `Constants
  k  = 2    varies in time: spread 0.2, memory 30 min  uncertainty 0.1
  h  = 1.5  varies from cell to cell: spread 0.5
  Spread and uncertainty are standard deviations of the natural logarithm; the value is the median.
`
	if !strings.Contains(b.String(), want) {
		t.Errorf("no\n%sin\n%s", want, b.String())
	}
}

// TestBadVariation makes one mistake at a time in a constant's table.
func TestBadVariation(t *testing.T) {
	for _, c := range []struct{ new, message string }{
		{"k = ‸{ spread = 0.2 }", "k has no value"},
		{"k = { value = 2, ‸spred = 0.2 }", `unknown key "spred"`},
		{"k = { ‸valu = 2, spread = 0.2 }", `unknown key "valu"`},
		{"k = { value = 2, spread = ‸3.01 }", "not allowed"},
		{"k = { value = 2, spread = ‸-0.1 }", "not allowed"},
		{"k = { value = 2, spread = ‸inf }", "not allowed"},
		{"k = { value = 2, uncertainty = ‸4 }", "not allowed"},
		{"k = { value = 2, spread = 0.1, memory = ‸0 }", "not allowed"},
		{"k = { value = 2, ‸memory = 3 }", "no spread"},
		{"k = { value = 2, spread = 0.0, ‸memory = 3 }", "no spread"},
		{"k = { value = ‸0, spread = 0.1 }", "cannot vary by a factor"},
		{"k = { value = ‸0, uncertainty = 0.1 }", "cannot vary by a factor"},
		{"k = { value = 2, ‸value = 3 }", "given twice"},
		{"k = { value = ‸{ value = 2 } }", "must be a number"},
	} {
		text, line, column := changed(t, "k = 2.0", c.new)
		_, err := Parse("t.toml", []byte(text))
		var problems Problems
		if !errors.As(err, &problems) {
			t.Errorf("%q: accepted (%v)", c.new, err)
			continue
		}
		p := problems[0]
		if len(problems) != 1 || !strings.Contains(p.Message, c.message) || p.Line != line || p.Column != column || p.Hint == "" {
			t.Errorf("%q, want %q at %d:%d:\n%v", c.new, c.message, line, column, err)
		}
	}
}

// TestBindVariation checks what Bind refuses of drafts made in code, and of values set.
func TestBindVariation(t *testing.T) {
	for _, c := range []struct {
		constant Constant
		message  string
	}{
		{Constant{Value: 1, Spread: 4}, "spread"},
		{Constant{Value: 1, Uncertainty: -1}, "uncertainty"},
		{Constant{Value: 1, Memory: 2}, "no spread"},
		{Constant{Value: 1, Spread: 0.1, Memory: -2}, "memory"},
		{Constant{Spread: 0.1}, "above 0"},
	} {
		d := varied(t)
		c.constant.Name = "k"
		d.Constants[0] = c.constant
		if _, err := d.Bind(0, nil); err == nil || !strings.Contains(err.Error(), c.message) {
			t.Errorf("%+v: %v", c.constant, err)
		}
	}
	if _, err := varied(t).Bind(0, map[string]float64{"k": 0}); err == nil || !strings.Contains(err.Error(), "above 0") {
		t.Errorf("k set to 0: %v", err)
	}
}
