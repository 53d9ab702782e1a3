package branch

import "math"

// A Point is a resting state on a branch. Slices by species are in the order of
// Network.Species.
type Point struct {
	Knob    float64
	Amounts []float64
	// Stable tells that the state attracts from every side; Unstable counts the
	// directions in which it repels. Neither is told exactly at a mark where an
	// eigenvalue is 0: there Stable is false.
	Stable   bool
	Unstable int
	// Eigenvalues of the Jacobian on the compatibility class, 1/time, by real part
	// descending; complex pairs side by side, the positive one first.
	Eigenvalues []complex128
	// SlowRate is the slowest rate of return, 1/time: the smallest |Re λ|; 0 at a
	// fold, +Inf where the totals leave one point only.
	SlowRate float64
	// Covariance is the linear-noise covariance in molecules², species by species in
	// row-major order (van Kampen, Stochastic Processes in Physics and Chemistry, ch.
	// X); nil unless stable.
	Covariance []float64
}

// CorrelationTime gives the longest correlation time of the fluctuations about the
// state, in the design's unit: 1/SlowRate, +Inf at a fold.
func (p *Point) CorrelationTime() float64 { return 1 / p.SlowRate }

// SD gives the predicted standard deviation of species i in molecules; NaN where
// there is no covariance.
func (p *Point) SD(i int) float64 {
	if p.Covariance == nil {
		return math.NaN()
	}
	return math.Sqrt(max(p.Covariance[i*len(p.Amounts)+i], 0))
}

// A Branch is a curve of resting states, in the order in which it runs: the knob
// need not be monotone along it.
type Branch struct {
	Points []Point
	// Marks are the special points and the two ends, by Index ascending. A closed
	// branch has its first point again as the last.
	Marks []Mark
}

// Closed tells that the branch is an isola: a loop without ends.
func (b *Branch) Closed() bool { return len(b.Marks) > 0 && b.Marks[0].Kind == Closed }

// An End is one side of a window.
type End struct {
	// Mark is what the state meets there.
	Mark Mark
	// Knob is the value of the knob there, Distance how far it is from today's
	// value, in per cent of that; NaN where today's value is 0.
	Knob, Distance float64
}

// A Window is the interval of the knob in which a stable state of today exists and
// is stable.
type Window struct {
	// State is the state's name and Amounts its amounts today.
	State   string
	Amounts []float64
	// Branch is the index of its branch in Diagram.Branches; −1 where the state could
	// not be followed, the ends then being Lost, at NaN.
	Branch    int
	Low, High End
}

// A Diagram is all branches of resting states over a knob's range.
type Diagram struct {
	Knob     Knob
	Today    float64
	Branches []Branch
	// Windows has one entry for each stable state at today's setting, by name in the
	// order of the survey.
	Windows []Window
	// High is the upper edge of the box of amounts that branches were followed in.
	High []float64
	// Warnings are for the reader, one sentence each.
	Warnings []string
}

// Folds lists the folds of all branches, by the knob ascending.
func (d *Diagram) Folds() []Mark { return d.Marks(Fold) }

// Marks lists the marks of one kind of all branches, by the knob ascending; where
// branches meet, one for both.
func (d *Diagram) Marks(kind Kind) []Mark {
	var out []Mark
	for _, b := range d.Branches {
		for _, m := range b.Marks {
			if m.Kind == kind {
				out = insertMark(out, m)
			}
		}
	}
	return out
}

// insertMark keeps the list sorted and leaves out a mark that is there already.
func insertMark(list []Mark, m Mark) []Mark {
	at := len(list)
	for i, o := range list {
		if sameMark(o, m) {
			return list
		}
		if o.Knob > m.Knob {
			at = min(at, i)
		}
	}
	list = append(list, Mark{})
	copy(list[at+1:], list[at:])
	list[at] = m
	return list
}

// sameMark tells whether two marks are one point, to 1e-6 of the amounts.
func sameMark(a, b Mark) bool {
	if math.Abs(a.Knob-b.Knob) > 1e-6*math.Abs(a.Knob) {
		return false
	}
	for i, x := range a.Amounts {
		if math.Abs(x-b.Amounts[i]) > 1e-6*(math.Abs(x)+math.Abs(b.Amounts[i])) {
			return false
		}
	}
	return true
}
