package lattice

import (
	"fmt"
	"runtime"

	"holdfast/model"
)

// A Noise is a resting state as the linear noise approximation sees it.
type Noise struct {
	// Center is the state in molecules, one value per species.
	Center []float64
	// Covariance is in molecules², species by species in row-major order; nil
	// where it is not known.
	Covariance []float64
}

// A Problem states what Solve is to solve.
type Problem struct {
	Network *model.Network
	// Cores are the regions between which dwells are counted, one per resting
	// state. A dwell starts at a core's Start and ends with the first entry into
	// another core. Cores must not meet.
	Cores []model.Core
	// States are the resting states that the first box is drawn around; without
	// them it is drawn around the cores' starts with the variance of a Poisson
	// law. Either way the box then grows as far as Truncation asks.
	States []Noise
	// Low and High, where they have one value per species, are the first box
	// instead.
	Low, High []int64
	// Fixed keeps the first box as it is, whatever its truncation error.
	Fixed bool
	// Truncation is the largest relative error that cutting the lattice off may
	// cause in a mean dwell time; 0 stands for 1e-10.
	Truncation float64
	// MaxMemory is in bytes; 0 stands for 4 GiB. A larger problem is refused
	// before it starts.
	MaxMemory int64
	// Threads is how many threads work; 0 stands for all processors. Results do
	// not depend on it.
	Threads int
	// MeansOnly leaves out what is not needed for dwell times: quasi-stationary
	// laws, committors, weights and relaxation.
	MeansOnly bool
	// Sensitivities asks for the derivatives of the mean dwell times in the constants.
	Sensitivities bool
	// Progress, if set, is told from time to time what is being done and which
	// part of it, 0 to 1, is done. It is called from one goroutine at a time.
	Progress func(stage string, done float64)
}

const (
	defaultTruncation = 1e-10
	defaultMemory     = 4 << 30
)

func (p *Problem) truncation() float64 {
	if p.Truncation > 0 {
		return p.Truncation
	}
	return defaultTruncation
}

func (p *Problem) memory() int64 {
	if p.MaxMemory > 0 {
		return p.MaxMemory
	}
	return defaultMemory
}

func (p *Problem) threads() int {
	if p.Threads > 0 {
		return p.Threads
	}
	return runtime.GOMAXPROCS(0)
}

func (p *Problem) report(stage string, done float64) {
	if p.Progress != nil {
		p.Progress(stage, done)
	}
}

// starts gives the points that the lattice is explored from.
func (p *Problem) starts() [][]int64 {
	if len(p.Cores) == 0 {
		return [][]int64{p.Network.StartCounts()}
	}
	out := make([][]int64, len(p.Cores))
	for i := range p.Cores {
		out[i] = p.Cores[i].Start
	}
	return out
}

// check refuses what cannot be a problem.
func (p *Problem) check() error {
	n := len(p.Network.Species)
	if len(p.Low) != 0 && len(p.Low) != n || len(p.High) != 0 && len(p.High) != n {
		return fmt.Errorf("the box has %d lower and %d upper bounds for %d species", len(p.Low), len(p.High), n)
	}
	for i := range p.Cores {
		if err := checkCore(&p.Cores[i], n); err != nil {
			return err
		}
		for j := range i {
			if p.Cores[j].Contains(p.Cores[i].Start) || p.Cores[i].Contains(p.Cores[j].Start) {
				return &CoreError{p.Cores[i].State, fmt.Sprintf("meets the core of state %q", p.Cores[j].State)}
			}
		}
	}
	for _, s := range p.States {
		if len(s.Center) != n {
			return fmt.Errorf("a state has %d values for %d species", len(s.Center), n)
		}
	}
	return nil
}

func checkCore(c *model.Core, n int) error {
	if len(c.Start) != n || len(c.Low) != n || len(c.High) != n {
		return &CoreError{c.State, fmt.Sprintf("has bounds or a start for another number of species than %d", n)}
	}
	for _, k := range c.Start {
		if k < 0 {
			return &CoreError{c.State, "starts at a count below 0"}
		}
	}
	if !c.Contains(c.Start) {
		return &CoreError{c.State, "does not hold its own start"}
	}
	return nil
}
