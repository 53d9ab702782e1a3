package trace

import (
	"context"
	"errors"

	"holdfast/analysis/hold"
	"holdfast/analysis/records"
	"holdfast/deterministic"
	"holdfast/model"
)

// Output says where paths are written to.
type Output struct {
	// Folder receives the records; empty: nothing is written. Command is what they
	// carry as the command that made them.
	Folder, Command string
}

// A Summary is what Run gives back beside the records.
type Summary struct {
	Paths    *Paths
	Sketch   *Sketch // of the first path
	Rows     int64
	Warnings []string
	// Interrupted tells that the context was done before the last path was; what is
	// here and in the records are whole paths, or, of paths too long for memory, whole
	// segments.
	Interrupted bool
}

// ErrNothingDone is returned when the context was done before any path was.
var ErrNothingDone = errors.New("stopped before the first path was done: nothing is kept")

// Run makes sample paths of the network and writes them to the table paths, beside
// the table states. A design with one resting state or none is traced too; that
// it is no switch is then a warning.
func Run(ctx context.Context, network *model.Network, o Options, out Output) (*Summary, error) {
	survey, err := deterministic.Survey(ctx, network, deterministic.Options{})
	s := &Summary{}
	if err != nil {
		if ctx.Err() != nil {
			return nil, ErrNothingDone
		}
		s.Warnings = append(s.Warnings, err.Error())
	}
	if survey == nil {
		survey = &deterministic.Map{Network: network}
	}
	if len(network.Varying()) > 0 {
		s.Warnings = append(s.Warnings, "constants vary: each path is of a cell with its own; states and cores are those at the medians")
	}
	if s.Paths, err = New(network, survey, o); err != nil {
		return nil, err
	}
	s.Sketch = NewSketch(s.Paths)
	w, err := newWriter(s.Paths, out)
	if err != nil {
		return nil, err
	}
	defer w.abandon()
	err = s.Paths.Make(ctx, func(r Row) error {
		s.Rows++
		if r.Run == 0 {
			s.Sketch.Add(r)
		}
		return w.add(r)
	})
	switch {
	case err != nil && ctx.Err() == nil:
		return nil, hold.Explain(network, err)
	case err != nil && s.Rows == 0:
		return nil, ErrNothingDone
	}
	s.Interrupted = err != nil
	return s, w.finish(s)
}

// A writer puts rows into the records; a nil one keeps nothing.
type writer struct {
	folder *records.Folder
	paths  *records.Paths
}

func newWriter(p *Paths, out Output) (*writer, error) {
	if out.Folder == "" {
		return nil, nil
	}
	folder, err := records.Create(out.Folder, hold.Provenance(p.Network, p.options.Seed, out.Command))
	if err != nil {
		return nil, err
	}
	w := &writer{folder: folder}
	var species, states []string
	for _, s := range p.Network.Species {
		species = append(species, s.Name)
	}
	for _, s := range p.Survey.Stable() {
		states = append(states, s.Name)
	}
	if len(p.Survey.States) > 0 {
		err = hold.WriteStates(folder, p.Survey)
	}
	var failed error
	w.paths, failed = records.NewPaths(folder, species, states)
	if err = errors.Join(err, failed); err != nil {
		folder.Abandon()
		return nil, err
	}
	return w, nil
}

func (w *writer) add(r Row) error {
	if w == nil {
		return nil
	}
	return w.paths.Append(int64(r.Run), r.Time, r.State, r.Counts)
}

func (w *writer) finish(s *Summary) error {
	if w == nil {
		return nil
	}
	o := records.Outcome{Events: s.Paths.Events, Warnings: s.Warnings, CutShort: s.Interrupted}
	if o.CutShort {
		o.Reason = "interrupted"
	}
	return w.folder.Finish(o)
}

func (w *writer) abandon() {
	if w != nil {
		w.folder.Abandon()
	}
}
