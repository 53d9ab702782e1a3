package hold

import (
	"fmt"
	"math"
)

// approximate states how far the Langevin row is off the other one: that the two
// differ is no accident of sampling, so chance is not what to judge it by.
func (v *Verdict) approximate(a, b *DwellReport) {
	rough, exact := a, b
	if b.Route == Langevin {
		rough, exact = b, a
	}
	switch {
	case rough.unseen() && exact.unseen():
		v.Text = "neither saw a flip"
	case rough.unseen():
		v.Text = fmt.Sprintf("the approximation saw no flip: its mean is above %.4g", float64(rough.Low))
	case exact.Never || exact.unseen():
		v.Text = "the approximation flips; " + exact.Route + " does not"
	case rough.Never:
		v.Text = "the approximation never flips; " + exact.Route + " does"
	default:
		v.Off = offsetOf(rough, exact)
		v.Text = v.Off.words()
	}
}

// offsetOf gives the limits on the logarithm of the ratio.
func offsetOf(rough, exact *DwellReport) *Offset {
	ratio := float64(rough.Mean / exact.Mean)
	spread := math.Exp(1.96 * math.Hypot(rough.logError(), exact.logError()))
	return &Offset{Value(ratio - 1), Value(ratio/spread - 1), Value(ratio*spread - 1)}
}

// words gives per cent, or, beyond a factor of two, the factor.
func (o *Offset) words() string {
	ratio := float64(o.Value) + 1
	if ratio > 2 || ratio < 0.5 {
		return fmt.Sprintf("approximation off by a factor of %.3g [%.3g, %.3g]", ratio, float64(o.Low)+1, float64(o.High)+1)
	}
	sign, size := "+", float64(o.Value)
	if size < 0 {
		sign, size = "−", -size
	}
	return fmt.Sprintf("approximation off by %s%.2g %% ± %.2g %%", sign, 100*size, 50*float64(o.High-o.Low))
}
