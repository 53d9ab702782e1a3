package survey

import (
	"context"
	"math"
	"path/filepath"

	"holdfast/analysis/hold"
	"holdfast/analysis/survey/resting"
	"holdfast/deterministic"
	"holdfast/model"
)

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

// newReport starts a report with what the design says.
func newReport(n *model.Network) *Report {
	r := &Report{
		Design: n.Title, Digest: n.Digest, TimeUnit: n.TimeUnit, Generation: hold.Value(n.Generation), Copies: n.Copies,
		Readout: n.Species[n.Readout].Name, Box: []Interval{}, States: []State{}, Warnings: []string{},
	}
	if r.Design == "" {
		r.Design = filepath.Base(n.File)
	}
	if n.Generation == 0 {
		r.Generation = hold.Value(math.NaN())
	}
	for _, s := range n.Species {
		r.Species = append(r.Species, s.Name)
	}
	return r
}

// addStates takes in the states.
func (r *Report) addStates(ctx context.Context, l *resting.List) {
	m := l.Map
	r.List = List{l.Complete(), l.String()}
	r.Start, r.Search = startState(ctx, m), m.Search.String()
	r.Warnings = append(append(r.Warnings, l.Warnings...), m.Warnings...)
	for i := range r.Species {
		r.Box = append(r.Box, Interval{hold.Value(m.Low[i]), hold.Value(m.High[i]), m.Basis[i].String()})
	}
	for i := range m.States {
		s := newState(&m.States[i])
		if i < len(m.Cores) {
			s.Core = newCore(m.Network, &m.Cores[i])
		}
		r.States = append(r.States, s)
	}
}

func newState(s *deterministic.State) State {
	out := State{
		Name: s.Name, Kind: s.Kind.String(), Absorbing: s.Absorbing, CorrelationTime: hold.Value(s.CorrelationTime()),
		Amounts: values(s.Amounts), Molecules: values(s.Molecules), Eigenvalues: parts(s.Eigenvalues),
	}
	for i := range s.Molecules {
		out.Deviation = append(out.Deviation, hold.Value(s.SD(i)))
		out.CV = append(out.CV, hold.Value(s.CV(i)))
		out.Fano = append(out.Fano, hold.Value(s.Fano(i)))
	}
	return out
}

// parts gives real and imaginary parts.
func parts(values []complex128) [][2]float64 {
	out := make([][2]float64, len(values))
	for i, e := range values {
		out[i] = [2]float64{real(e), imag(e)}
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
