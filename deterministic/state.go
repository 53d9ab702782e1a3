package deterministic

import (
	"fmt"
	"math"
)

// Kind is the type of a resting state on its stoichiometric compatibility class.
type Kind uint8

// The kinds of resting states.
const (
	// StableNode and StableFocus attract from every side: all eigenvalues have
	// negative real parts; those of a focus nearest 0 are a complex pair.
	StableNode Kind = iota
	StableFocus
	// Saddle has some unstable directions and some stable ones.
	Saddle
	// Unstable repels in every direction.
	Unstable
	// Degenerate has an eigenvalue that is 0 to within rounding: a fold, or a
	// point where branches cross. Linear analysis does not tell its stability.
	Degenerate
	// Declared is no resting state but a core that the design declares itself.
	Declared
)

// String names the kind in words.
func (k Kind) String() string {
	switch k {
	case StableNode:
		return "stable node"
	case StableFocus:
		return "stable focus"
	case Saddle:
		return "saddle"
	case Unstable:
		return "unstable"
	case Degenerate:
		return "degenerate"
	case Declared:
		return "declared"
	}
	return fmt.Sprintf("Kind(%d)", uint8(k))
}

// Stable tells whether k attracts from every side.
func (k Kind) Stable() bool { return k == StableNode || k == StableFocus }

// A State is one resting state of the rate equations, or a declared core.
// Slices by species are in the order of Network.Species.
type State struct {
	Name string
	Kind Kind
	// Amounts is the state in amounts, Molecules the same in molecules.
	Amounts, Molecules []float64
	// Eigenvalues of the Jacobian on the compatibility class, 1/time, by real
	// part descending; complex pairs side by side, the positive one first. Empty
	// where totals leave one point only.
	Eigenvalues []complex128
	// UnstableDirections counts the eigenvalues with positive real part.
	UnstableDirections int
	// Covariance is the linear-noise covariance in molecules², species by species
	// in row-major order; nil unless stable (van Kampen, Stochastic Processes in
	// Physics and Chemistry, ch. X).
	Covariance []float64
	// SlowRate is the slowest rate of return, 1/time: the smallest |Re λ|. It is 0
	// for a degenerate state and +Inf where the totals leave one point only.
	SlowRate float64
	// Absorbing tells that no reaction can fire any more at the lattice point
	// nearest to the state: what gets there stays.
	Absorbing bool
	// Quality says how well the state is known.
	Quality Quality
}

// SD gives the predicted standard deviation of species i in molecules; NaN where
// there is no covariance.
func (s *State) SD(i int) float64 {
	n := len(s.Molecules)
	if s.Covariance == nil {
		return math.NaN()
	}
	return math.Sqrt(max(s.Covariance[i*n+i], 0))
}

// CV gives the predicted coefficient of variation of species i, standard
// deviation over mean; NaN where there is no covariance or the mean is 0.
func (s *State) CV(i int) float64 {
	if s.Molecules[i] == 0 {
		return math.NaN()
	}
	return s.SD(i) / s.Molecules[i]
}

// Fano gives the predicted Fano factor of species i, variance over mean in
// molecules; NaN where there is no covariance or the mean is 0.
func (s *State) Fano(i int) float64 {
	if s.Molecules[i] == 0 {
		return math.NaN()
	}
	sd := s.SD(i)
	return sd * sd / s.Molecules[i]
}

// CorrelationTime gives the longest correlation time of the fluctuations about
// the state in the design's unit, 1/SlowRate: +Inf for a degenerate state.
func (s *State) CorrelationTime() float64 { return 1 / s.SlowRate }
