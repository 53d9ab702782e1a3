package survey

import (
	"context"

	"holdfast/analysis/hold"
	"holdfast/deterministic/separatrix"
)

// Basins is the share of the box's volume, from 0 to the upper ends of Report.Box,
// that each stable state draws in.
type Basins struct {
	Method string  `json:"method"`
	Shares []Share `json:"shares"`
	// Unlabelled is the share, in per cent, from which the flow comes to rest at no
	// stable state. Labels is the number of points whose flow was followed.
	Unlabelled hold.Value `json:"unlabelled_percent"`
	Labels     int        `json:"labels"`
}

// A Share is one basin's, in per cent, with its error: of the cut into lines, or the
// half width of the 95 % interval of a sample.
type Share struct {
	State string     `json:"state"`
	Share hold.Value `json:"share_percent"`
	Error hold.Value `json:"error_percent"`
}

// A Separatrix is the stable manifold of a saddle, which parts two basins.
type Separatrix struct {
	Saddle string         `json:"saddle"`
	Points [][]hold.Value `json:"points"` // amounts by species, from end to end
	At     int            `json:"at"`     // the saddle's place among them
	Ends   [2]string      `json:"ends"`
}

// Numbers of points that basins are sampled with where they are not cut by curves. In
// one dimension a flow is cheap; in others it is what a map takes its time for.
const (
	lineSamples  = 2000
	spaceSamples = 200
)

// addBasins measures the basins and traces what parts them.
func (j *job) addBasins(ctx context.Context) {
	m := j.survey
	free := len(j.network.Species) - len(m.Totals)
	if len(m.Stable()) < 2 || free == 0 {
		return
	}
	o := separatrix.Options{Samples: spaceSamples}
	if free == 1 {
		o.Samples = lineSamples
	}
	if free == 2 {
		j.addSeparatrices(ctx, o)
	}
	b, err := separatrix.Measure(ctx, m, o)
	if err != nil {
		j.warn("the basins could not be measured: %v", err)
		return
	}
	out := &Basins{Method: b.Method.String(), Unlabelled: hold.Value(100 * b.Unlabelled), Labels: b.Labels}
	for i, s := range m.Stable() {
		out.Shares = append(out.Shares, Share{s.Name, hold.Value(100 * b.Shares[i]), hold.Value(100 * b.Errors[i])})
	}
	j.report.Basins = out
}

func (j *job) addSeparatrices(ctx context.Context, o separatrix.Options) {
	curves, err := separatrix.Trace(ctx, j.survey, o)
	if err != nil {
		j.warn("no separatrix: %v", err)
		return
	}
	for _, c := range curves {
		s := Separatrix{Saddle: c.Saddle, At: c.At}
		for _, p := range c.Points {
			s.Points = append(s.Points, values(p))
		}
		for k, e := range c.Ends {
			s.Ends[k] = e.Ending.String()
			if e.Species != "" {
				s.Ends[k] += " in " + e.Species
			}
		}
		j.report.Separatrices = append(j.report.Separatrices, s)
	}
}
