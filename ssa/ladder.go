package ssa

import (
	"errors"
	"fmt"

	"holdfast/model"
)

// A Rung is a half-space of counts, those with Weights·n ≥ Level, one weight a
// species. Whole numbers keep the sum exact however it is come by; a direction
// given to a millionth is as good as any, since where a rung lies costs time only,
// never truth.
type Rung struct {
	Weights []int64
	Level   int64
}

// At gives Weights·n.
func (r *Rung) At(counts []int64) int64 {
	sum := int64(0)
	for i, n := range counts {
		sum += r.Weights[i] * n
	}
	return sum
}

// A Ladder says where staged runs happen: a network, the core From that they set
// out from, and the cores that end them.
type Ladder struct {
	// Network is the network to run; it must not be nil.
	Network *model.Network
	// Cores are the regions that end a run on entering them; where they overlap, the
	// first one counts. From is the index of the one that staged runs leave.
	Cores []model.Core
	From  int
	// MaxCount is the largest count of any species; 0: ten million, or 16 times the
	// largest count of the core's start if that is more.
	MaxCount int64
}

// system prepares the ladder, or says what is wrong with it.
func (l *Ladder) system() (*system, error) {
	if l.From < 0 || l.From >= len(l.Cores) {
		return nil, fmt.Errorf("from is core %d; there are %d cores", l.From, len(l.Cores))
	}
	p, err := Plan{Network: l.Network, Start: l.Cores[l.From].Start, Cores: l.Cores, From: l.From, MaxCount: l.MaxCount}.normal()
	if err != nil {
		return nil, err
	}
	if len(l.Network.Species) == 0 {
		return nil, errors.New("network has no species")
	}
	if len(l.Network.Varying()) > 0 {
		return nil, errors.New("network has constants that vary: runs by stages know them at their medians only")
	}
	return newSystem(p), nil
}

// checkRungs tells what is wrong with rungs, if anything is.
func (s *system) checkRungs(rungs []Rung) error {
	for k, r := range rungs {
		if len(r.Weights) != len(s.Network.Species) {
			return fmt.Errorf("rung %d has %d weights; the network has %d species", k, len(r.Weights), len(s.Network.Species))
		}
	}
	return nil
}

// A Perch is a state on a ladder.
type Perch struct {
	Counts []int64
	// Weight is the number of runs that it stands for.
	Weight float64
	// Family numbers the stretch of the first stage that it descends from.
	Family int
}

// A ClimbEnding says how one run of a stage ended.
type ClimbEnding uint8

const (
	// Fell: the run came back into the core From.
	Fell ClimbEnding = iota
	// Climbed: the run reached the last rung.
	Climbed
	// Arrived: the run entered another core.
	Arrived
	// Dropped: the run fell below a floor and was not kept.
	Dropped
	// Emptied: no event can happen any more.
	Emptied
)

// String gives the ending in words.
func (e ClimbEnding) String() string {
	switch e {
	case Fell:
		return "fell back"
	case Climbed:
		return "climbed"
	case Arrived:
		return "arrived"
	case Dropped:
		return "dropped"
	case Emptied:
		return "emptied"
	}
	return fmt.Sprintf("ending %d", uint8(e))
}

// A Climb is what became of one run of a stage.
type Climb struct {
	Ending ClimbEnding
	// Core is the index of the core entered; −1 unless Arrived.
	Core int
	// Weight is the number of runs that it stands for: that of its start, times
	// 1/Stage.Keep for each floor that it fell below and was kept at.
	Weight float64
	// Family is that of its start.
	Family int
	// Hits are the counts at which it first met each rung, in order, as far as it came.
	Hits [][]int64
}
