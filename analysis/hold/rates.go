package hold

import (
	"math"

	"holdfast/analysis/dwell"
	"holdfast/analysis/records"
)

// rateOf is the row of the table rates for one estimate from sampled runs.
func (j *job) rateOf(route string, s *dwell.Summary, e dwell.Estimate) records.Rate {
	row := records.Rate{
		From: s.From, To: recordTarget(e.To), Route: route, Interval: e.Method.String(),
		Mean: e.Mean, Low: e.Low, High: e.High, StandardError: e.StandardError,
		Flips: int64(e.Flips), Dwells: int64(s.Dwells), Exposure: e.Exposure, PerGeneration: records.Range(e.PerGeneration),
	}
	if e.Hold == nil && !math.IsNaN(e.PerGeneration.Value) {
		row.Hold = j.holdRecords(nil, "")
	}
	for _, h := range e.Hold {
		row.Hold = append(row.Hold, records.HoldChance{Generations: h.Generations, Range: records.Range(h.Range), Source: h.Source.String()})
	}
	return row
}

// recordTarget gives the records' index of a target of package dwell.
func recordTarget(to int) int {
	switch to {
	case dwell.Any:
		return records.Any
	case dwell.Elsewhere:
		return records.Elsewhere
	}
	return to
}

// neverRate is the row of the table rates for a state that is never left.
func (j *job) neverRate(from, to int, report DwellReport) records.Rate {
	row := records.Rate{
		From: from, To: to, Route: absorbing, Interval: "no reaction leads out", Never: true,
		Mean: math.Inf(1), Low: math.Inf(1), High: math.Inf(1), StandardError: math.NaN(),
		Flips: -1, Dwells: -1, Exposure: math.NaN(), PerGeneration: records.Range{},
	}
	row.Hold = j.holdRecords(report.Holds, "no reaction leads out")
	return row
}

// holdRecords are the chances of holding for the records; absent ones for a pair of
// several, whose chances stand with the state's.
func (j *job) holdRecords(holds []HoldChance, source string) []records.HoldChance {
	var out []records.HoldChance
	for i, n := range j.options.Holds {
		h := records.HoldChance{Generations: n, Range: records.Absent(), Source: "not given for a pair"}
		if i < len(holds) {
			h.Range = records.Range{Value: float64(holds[i].Chance), Low: float64(holds[i].Low), High: float64(holds[i].High)}
			h.Source = source
		}
		out = append(out, h)
	}
	return out
}
