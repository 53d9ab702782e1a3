package hold

import (
	"fmt"
	"math"
)

// A Verdict holds two routes' estimates of one hold time against each other.
type Verdict struct {
	From   string    `json:"from"`
	To     string    `json:"to"`
	Routes [2]string `json:"routes"`
	// Ratio is the first route's mean over the second's.
	Ratio Value `json:"ratio"`
	// StandardErrors is how many standard errors apart the two are, on the
	// logarithm of the mean; NaN where neither has one.
	StandardErrors Value `json:"standard_errors"`
	Agree          bool  `json:"agree"`
	// Off is, where one of the routes is an approximation, how far its mean is off
	// the other's, relative to that, with its 95 % limits; nil where none is.
	Off  *Offset `json:"off,omitempty"`
	Text string  `json:"text"`
}

// An Offset is a relative difference with its 95 % limits.
type Offset struct {
	Value Value `json:"value"`
	Low   Value `json:"low"`
	High  Value `json:"high"`
}

// verdicts compares the rows of two routes, pair by pair.
func verdicts(rows []DwellReport, first, second string) []Verdict {
	var out []Verdict
	for i := range rows {
		for k := range rows {
			a, b := &rows[i], &rows[k]
			if a.Route == first && b.Route == second && a.From == b.From && a.To == b.To {
				out = append(out, compare(a, b))
			}
		}
	}
	return out
}

// compare gives the verdict on two estimates of one mean. They agree if the
// intervals at 95 % allow it: the means differ by no more than 1.96 standard errors
// of their ratio, or one lies in the other's interval.
func compare(a, b *DwellReport) Verdict {
	v := Verdict{From: a.From, To: a.To, Routes: [2]string{a.Route, b.Route}, Ratio: a.Mean / b.Mean, StandardErrors: Value(math.NaN())}
	switch {
	case a.Never || b.Never:
		v.Agree = a.Never && b.Never || a.unseen() || b.unseen()
	case a.unseen() || b.unseen():
		v.Ratio = Value(math.NaN())
		v.Agree = a.allows(b) || b.allows(a)
	default:
		spread := math.Hypot(a.logError(), b.logError())
		v.StandardErrors = Value(math.Abs(math.Log(float64(v.Ratio))) / spread)
		v.Agree = v.StandardErrors <= 1.96 || a.allows(b) || b.allows(a)
	}
	v.Text = v.words()
	if a.Route == Langevin || b.Route == Langevin {
		v.approximate(a, b)
	}
	return v
}

// unseen tells that a sampled route saw no flip.
func (d *DwellReport) unseen() bool { return d.Sampled && d.Flips == 0 }

// allows tells whether the other's mean lies in d's interval.
func (d *DwellReport) allows(o *DwellReport) bool { return o.Mean >= d.Low && o.Mean <= d.High }

// logError is the standard error of the logarithm of the mean.
func (d *DwellReport) logError() float64 {
	if d.Sampled {
		return float64(d.StandardError / d.Mean)
	}
	return float64((d.High-d.Low)/d.Mean) / (2 * 1.96)
}

func (v *Verdict) words() string {
	switch {
	case v.Agree:
		return "agree within errors"
	case math.IsNaN(float64(v.StandardErrors)):
		return "disagree: one sees what the other excludes"
	}
	z := float64(v.StandardErrors)
	return fmt.Sprintf("%.1f standard errors apart; chance alone gives as much once in %.3g times", z, 1/math.Erfc(z/math.Sqrt2))
}
