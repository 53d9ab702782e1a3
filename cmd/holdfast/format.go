package main

import (
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"
	"unicode/utf8"

	"holdfast/analysis/hold"
)

// number writes v with four significant digits, plainly from 0.001 to a million.
func number(v float64) string { return digits(v, 4) }

// digits writes v with so many significant digits, plainly from 0.001 to a million.
func digits(v float64, significant int) string {
	size := math.Abs(v)
	switch {
	case math.IsNaN(v):
		return "–"
	case math.IsInf(v, 1):
		return "∞"
	case v == 0:
		return "0"
	case size >= 0.001 && size < 999950:
		rounded, _ := strconv.ParseFloat(strconv.FormatFloat(v, 'g', significant, 64), 64)
		return strconv.FormatFloat(rounded, 'f', -1, 64)
	}
	mantissa, exponent, _ := strings.Cut(strconv.FormatFloat(v, 'e', significant-1, 64), "e")
	if strings.Contains(mantissa, ".") {
		mantissa = strings.TrimRight(strings.TrimRight(mantissa, "0"), ".")
	}
	sign := strings.TrimLeft(exponent[:1], "+")
	return mantissa + "e" + sign + strings.TrimLeft(exponent[1:], "0")
}

// withSign writes a number with its sign, even of what is above 0.
func withSign(v float64, significant int) string {
	sign := "+"
	if v < 0 {
		sign = "−"
	}
	return sign + digits(math.Abs(v), significant)
}

// chance writes a probability, by what it lacks to 1 where it is near 1.
func chance(p, loss hold.Value) string {
	if loss > 0 && loss < 0.0005 {
		return "1 − " + value(loss)
	}
	return value(p)
}

// A table is rows of cells under a heading, set in columns.
type table struct {
	rows [][]string
}

func (t *table) add(cells ...string) { t.rows = append(t.rows, cells) }

// write prints the rows two spaces in, the columns two spaces apart.
func (t *table) write(w io.Writer) error {
	var width []int
	for _, row := range t.rows {
		for i, c := range row {
			if i == len(width) {
				width = append(width, 0)
			}
			width[i] = max(width[i], utf8.RuneCountInString(c))
		}
	}
	for _, row := range t.rows {
		var b strings.Builder
		for i, c := range row {
			b.WriteString("  " + c + strings.Repeat(" ", width[i]-utf8.RuneCountInString(c)))
		}
		if _, err := fmt.Fprintln(w, strings.TrimRight(b.String(), " ")); err != nil {
			return err
		}
	}
	return nil
}
