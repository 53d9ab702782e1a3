package sizing

import "math"

// A bracket holds a root of a function of the coordinate between two evaluations: at
// fails it is below 0, at meets it is not.
type bracket struct {
	fails, meets *Evaluation
}

// A measure picks what is compared with 0: the margin or one of its limits.
type measure func(*Evaluation) float64

func margin(e *Evaluation) float64     { return float64(e.Margin) }
func lowerLimit(e *Evaluation) float64 { return float64(e.Low) }
func upperLimit(e *Evaluation) float64 { return float64(e.High) }

const (
	// itpTruncation is the method's κ₁ in units of 1/width, its κ₂ being 2, and
	// itpSlack its n₀: how many steps more than bisection it may take.
	itpTruncation = 0.2
	itpSlack      = 1
)

// narrow closes a bracket to the tolerance, or to two neighbouring whole numbers, by
// the ITP method (Oliveira and Takahashi, ACM Trans. Math. Softw. 47 (2021) 5): it
// takes the step of the secant, drawn towards the middle, but never more than
// itpSlack steps more than bisection.
func (s *searcher) narrow(b bracket, m measure) (bracket, error) {
	width := s.width(b)
	tolerance := s.scale.tolerance(math.Min(math.Abs(s.at(b.fails)), math.Abs(s.at(b.meets))))
	most := math.Ceil(math.Log2(math.Max(width/tolerance, 1))) + itpSlack
	for step := 0.0; s.width(b) > tolerance; step++ {
		radius := tolerance/2*math.Exp2(most-step) - s.width(b)/2
		x := s.scale.setting(s.itp(b, m, itpTruncation/width, radius))
		if x == b.fails.Setting || x == b.meets.Setting {
			x = s.scale.setting((s.at(b.fails) + s.at(b.meets)) / 2)
		}
		if x == b.fails.Setting || x == b.meets.Setting {
			return b, nil
		}
		e, err := s.evaluate(x)
		if err != nil {
			return b, err
		}
		if m(e) >= 0 {
			b.meets = e
		} else {
			b.fails = e
		}
	}
	return b, nil
}

// itp gives the next coordinate: that of the secant where both ends are finite, drawn
// to the middle by truncation·width², and kept within radius of it.
func (s *searcher) itp(b bracket, m measure, truncation, radius float64) float64 {
	low, high, atLow, atHigh := s.at(b.fails), s.at(b.meets), m(b.fails), m(b.meets)
	half := (low + high) / 2
	if math.IsInf(atLow, 0) || math.IsInf(atHigh, 0) || atLow == atHigh {
		return half
	}
	secant := (atHigh*low - atLow*high) / (atHigh - atLow)
	side := math.Copysign(1, half-secant)
	drawn := secant + side*math.Min(truncation*(high-low)*(high-low), math.Abs(half-secant))
	if math.Abs(drawn-half) <= math.Max(radius, 0) {
		return drawn
	}
	return half - side*math.Max(radius, 0)
}

func (s *searcher) width(b bracket) float64 { return math.Abs(s.at(b.meets) - s.at(b.fails)) }

// at gives the coordinate of an evaluation.
func (s *searcher) at(e *Evaluation) float64 { return s.scale.coordinate(e.Setting) }
