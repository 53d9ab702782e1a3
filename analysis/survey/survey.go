// Package survey reports the deterministic map of a design: its resting states and
// saddles, their stability, linear noise, cores and basins.
package survey

import (
	"context"
	"errors"
	"fmt"
	"math"
	"path/filepath"

	"holdfast/analysis/hold"
	"holdfast/analysis/records"
	"holdfast/deterministic"
	"holdfast/model"
)

// A Report is the map of a design. Times are in TimeUnit.
type Report struct {
	Design     string     `json:"design"`
	Digest     string     `json:"sha256"`
	TimeUnit   string     `json:"time_unit"`
	Generation hold.Value `json:"generation"`
	Copies     float64    `json:"copies"`
	Species    []string   `json:"species"`
	Box        []Interval `json:"box"` // of amounts, one a species
	States     []State    `json:"states"`
	// Start says which state the design's own start belongs to.
	Start    string   `json:"start"`
	Search   string   `json:"search"` // how the states were found, in a sentence
	Warnings []string `json:"warnings"`
}

// An Interval is a range of amounts.
type Interval struct {
	Low   hold.Value `json:"low"`
	High  hold.Value `json:"high"`
	Basis string     `json:"basis"` // why no resting state lies beyond
}

// A State is one resting state or saddle, values by species in the order of
// Report.Species. Deviation, CV and Fano are those of linear noise.
type State struct {
	Name            string       `json:"name"`
	Kind            string       `json:"type"`
	Absorbing       bool         `json:"absorbing"`
	Amounts         []hold.Value `json:"amounts"`
	Molecules       []hold.Value `json:"molecules"`
	Deviation       []hold.Value `json:"sd_molecules"`
	CV              []hold.Value `json:"cv"`
	Fano            []hold.Value `json:"fano"`
	Eigenvalues     [][2]float64 `json:"eigenvalues"` // real and imaginary part, in 1/TimeUnit
	CorrelationTime hold.Value   `json:"correlation_time"`
	Core            *Core        `json:"core,omitempty"`
}

// A Core is the region that a path must enter to count as having reached a state.
type Core struct {
	Start    []int64 `json:"start"` // where a dwell begins
	Low      []int64 `json:"low"`
	High     []int64 `json:"high"` // both in molecules, one a species
	Declared bool    `json:"declared"`
}

// Options say where a map is written to.
type Options struct {
	// Folder receives the table states; empty: nothing is written. Command is what
	// the records carry as the command that made them.
	Folder, Command string
}

// Run surveys the network. With one stable state only the report comes together with a
// *deterministic.OneStateError; other errors are those of deterministic.Survey and
// of the records.
func Run(ctx context.Context, network *model.Network, o Options) (*Report, error) {
	m, err := deterministic.Survey(ctx, network, deterministic.Options{})
	if m == nil {
		return nil, err
	}
	report := newReport(ctx, m)
	return report, errors.Join(err, write(m, report, o))
}

func newReport(ctx context.Context, m *deterministic.Map) *Report {
	n := m.Network
	r := &Report{
		Design: n.Title, Digest: n.Digest, TimeUnit: n.TimeUnit, Generation: hold.Value(n.Generation), Copies: n.Copies,
		Start: startState(ctx, m), Search: searchText(m), Warnings: append([]string{}, m.Warnings...),
	}
	if r.Design == "" {
		r.Design = filepath.Base(n.File)
	}
	if n.Generation == 0 {
		r.Generation = hold.Value(math.NaN())
	}
	for i, s := range n.Species {
		r.Species = append(r.Species, s.Name)
		r.Box = append(r.Box, Interval{hold.Value(m.Low[i]), hold.Value(m.High[i]), m.Basis[i].String()})
	}
	for i := range m.States {
		s := newState(&m.States[i])
		if i < len(m.Cores) {
			s.Core = newCore(n, &m.Cores[i])
		}
		r.States = append(r.States, s)
	}
	return r
}

func newState(s *deterministic.State) State {
	out := State{Name: s.Name, Kind: s.Kind.String(), Absorbing: s.Absorbing, CorrelationTime: hold.Value(s.CorrelationTime())}
	for i := range s.Molecules {
		out.Amounts = append(out.Amounts, hold.Value(s.Amounts[i]))
		out.Molecules = append(out.Molecules, hold.Value(s.Molecules[i]))
		out.Deviation = append(out.Deviation, hold.Value(s.SD(i)))
		out.CV = append(out.CV, hold.Value(s.CV(i)))
		out.Fano = append(out.Fano, hold.Value(s.Fano(i)))
	}
	for _, e := range s.Eigenvalues {
		out.Eigenvalues = append(out.Eigenvalues, [2]float64{real(e), imag(e)})
	}
	return out
}

func newCore(n *model.Network, c *model.Core) *Core {
	out := &Core{Start: c.Start, Low: c.Low, High: c.High}
	for _, d := range n.Declared {
		out.Declared = out.Declared || d.State == c.State
	}
	return out
}

// startState names the state that the flow from the design's start leads to.
func startState(ctx context.Context, m *deterministic.Map) string {
	label, err := m.BasinContext(ctx, m.Network.Amounts(nil, m.Network.StartCounts()))
	if err != nil {
		return err.Error()
	}
	return m.States[label].Name
}

func searchText(m *deterministic.Map) string {
	text := fmt.Sprintf("multi-start Newton, %d starts and %d flows", m.Search.Starts, m.Search.Flows)
	switch {
	case m.Search.Scanned:
		text += ", and a scan along the one free direction"
	case m.Search.Balanced:
		text += "; the indices of the states balance"
	}
	return text + "; that none is missing is not proved"
}

func write(m *deterministic.Map, r *Report, o Options) error {
	if o.Folder == "" {
		return nil
	}
	folder, err := records.Create(o.Folder, hold.Provenance(m.Network, 0, o.Command))
	if err != nil {
		return err
	}
	defer folder.Abandon()
	if err := hold.WriteStates(folder, m); err != nil {
		return err
	}
	return folder.Finish(records.Outcome{Warnings: r.Warnings})
}
