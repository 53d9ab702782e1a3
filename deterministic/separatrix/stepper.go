package separatrix

import "math"

// The method of order 5 with an embedded estimate of order 4 of Dormand and Prince,
// J. Comput. Appl. Math. 6 (1980) 19. Rows are the stages' coefficients; the last
// one is the result's.
func dormandPrince() (stages [6][6]float64, estimate [7]float64) {
	stages = [6][6]float64{
		{1.0 / 5},
		{3.0 / 40, 9.0 / 40},
		{44.0 / 45, -56.0 / 15, 32.0 / 9},
		{19372.0 / 6561, -25360.0 / 2187, 64448.0 / 6561, -212.0 / 729},
		{9017.0 / 3168, -355.0 / 33, 46732.0 / 5247, 49.0 / 176, -5103.0 / 18656},
		{35.0 / 384, 0, 500.0 / 1113, 125.0 / 192, -2187.0 / 6784, 11.0 / 84},
	}
	estimate = [7]float64{
		71.0 / 57600, 0, -71.0 / 16695, 71.0 / 1920, -17253.0 / 339200, 22.0 / 525, -1.0 / 40,
	}
	return stages, estimate
}

// stepper follows the reversed flow by length.
type stepper struct {
	f         *flow
	tolerance float64
	stages    [6][6]float64
	estimate  [7]float64
	k         [7][]float64
	next      []float64
}

func newStepper(f *flow, tolerance float64) *stepper {
	s := &stepper{f: f, tolerance: tolerance, next: make([]float64, len(f.floor))}
	s.stages, s.estimate = dormandPrince()
	for i := range s.k {
		s.k[i] = make([]float64, len(f.floor))
	}
	return s
}

// try makes a step of length h from x into s.next and gives its estimated error
// over the tolerance; not above 1 is good.
func (s *stepper) try(x []float64, h float64) float64 {
	s.f.backward(x, s.k[0])
	for i, row := range s.stages {
		for j, v := range x {
			for l := range i + 1 {
				v += h * row[l] * s.k[l][j]
			}
			s.next[j] = v
		}
		s.f.backward(s.next, s.k[i+1])
	}
	worst := 0.0
	for j, v := range x {
		sum := 0.0
		for l, w := range s.estimate {
			sum += w * s.k[l][j]
		}
		e := math.Abs(h*sum) / s.f.unit(j, v)
		if !(e <= math.MaxFloat64) {
			return math.Inf(1)
		}
		worst = max(worst, e)
	}
	return worst / s.tolerance
}

// shortestStep is the length below which the flow is not followed any further.
const shortestStep = 1e-13

// advance makes one step from x of length h or less: it gives the length made,
// with the point in s.next, and the length to try next; made 0 says that none
// short enough succeeds.
func (s *stepper) advance(x []float64, h float64) (made, next float64) {
	for h > shortestStep {
		e := s.try(x, h)
		factor := min(max(0.9*math.Pow(e, -0.2), 0.2), 5)
		if math.IsInf(e, 1) {
			factor = 0.1
		}
		if e <= 1 {
			return h, h * factor
		}
		h *= min(factor, 0.8)
	}
	return 0, 0
}

// turnsBack tells whether the direction at the end of the last step is against that
// at its start: the step has gone over a resting state.
func (s *stepper) turnsBack() bool {
	sum := 0.0
	for j, v := range s.k[0] {
		unit := s.f.unit(j, s.next[j])
		sum += v / unit * s.k[6][j] / unit
	}
	return sum < 0
}
