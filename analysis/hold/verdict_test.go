package hold

import (
	"math"
	"testing"
)

func TestCompare(t *testing.T) {
	sampled := func(mean, low, high, se, flips Value) DwellReport {
		return DwellReport{From: "low", To: "high", Route: Runs, Sampled: true, Mean: mean, Low: low, High: high, StandardError: se, Flips: flips}
	}
	exact := func(mean Value) DwellReport {
		return DwellReport{From: "low", To: "high", Route: Lattice, Mean: mean, Low: mean * (1 - 1e-9), High: mean * (1 + 1e-9)}
	}
	never := DwellReport{From: "low", To: "high", Route: Lattice, Never: true, Mean: Value(math.Inf(1)), Low: Value(math.Inf(1)), High: Value(math.Inf(1))}
	none := sampled(Value(math.NaN()), 500, Value(math.Inf(1)), Value(math.NaN()), 0)
	for _, c := range []struct {
		name  string
		a, b  DwellReport
		agree bool
		text  string
	}{
		{"inside the interval", exact(100), sampled(104, 94, 115, 5, 400), true, "agree within errors"},
		{"three standard errors off", exact(100), sampled(116.18, 105, 128, 5.809, 400), false, "3.0 standard errors apart; chance alone gives as much once in 370 times"},
		{"no flip seen, and none expected", exact(1e6), none, true, "agree within errors"},
		{"no flip seen where many were due", exact(10), none, false, "disagree: one sees what the other excludes"},
		{"never, and flips seen", never, sampled(104, 94, 115, 5, 400), false, "disagree: one sees what the other excludes"},
		{"never, and none seen", never, none, true, "agree within errors"},
	} {
		v := compare(&c.a, &c.b)
		if v.Agree != c.agree || v.Text != c.text {
			t.Errorf("%s: %v, %q; want %v, %q", c.name, v.Agree, v.Text, c.agree, c.text)
		}
	}
}

func TestCompareApproximation(t *testing.T) {
	exact := func(mean Value) DwellReport {
		return DwellReport{Route: Lattice, Mean: mean, Low: mean * (1 - 1e-9), High: mean * (1 + 1e-9)}
	}
	rough := func(mean, se, flips Value) DwellReport {
		return DwellReport{Route: Langevin, Sampled: true, Mean: mean, Low: 0.9 * mean, High: 1.1 * mean, StandardError: se, Flips: flips}
	}
	none := DwellReport{Route: Langevin, Sampled: true, Mean: Value(math.NaN()), Low: 500, High: Value(math.Inf(1))}
	never := DwellReport{Route: Lattice, Never: true, Mean: Value(math.Inf(1))}
	for _, c := range []struct {
		a, b DwellReport
		text string
	}{
		{exact(100), rough(88, 1.347, 4000), "approximation off by −12 % ± 2.6 %"}, // 88·1.96·1.347/88
		{rough(88, 1.347, 4000), exact(100), "approximation off by −12 % ± 2.6 %"},
		{exact(100), rough(104, 1, 4000), "approximation off by +4 % ± 2 %"},
		{exact(100), rough(1200, 12, 4000), "approximation off by a factor of 12 [11.8, 12.2]"},
		{exact(100), none, "the approximation saw no flip: its mean is above 500"},
		{never, rough(88, 1, 4000), "the approximation flips; lattice does not"},
	} {
		if v := compare(&c.a, &c.b); v.Text != c.text {
			t.Errorf("%q, want %q", v.Text, c.text)
		}
	}
}
