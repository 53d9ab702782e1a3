package hold

import (
	"math"

	"holdfast/analysis/records"
)

// A logRow is an estimate of a mean dwell whose interval was made on its logarithm.
type logRow struct {
	// From and To are indices of states; To may also be records.Any or Elsewhere.
	from, to int
	route    string
	interval string // how the interval was made
	// mean dwell with its 95 % limits and its standard error, in the design's unit.
	// Where nothing was seen the mean is NaN and low a limit.
	mean, low, high, standardError float64
	// flips that would tell the mean as well; NaN: not known. 0: nothing was seen.
	flips float64
	note  string
	// holds tells that the chances of holding are those of this row.
	holds bool
}

// addLog adds the row to the report and to the records. Chances of holding are
// those of a constant rate.
func (j *job) addLog(r logRow) {
	row := DwellReport{
		From: j.survey.Stable()[r.from].Name, To: j.recordName(r.to), Route: r.route, Sampled: true, Note: r.note,
		Mean: Value(r.mean), Low: Value(r.low), High: Value(r.high), StandardError: Value(r.standardError),
		Flips: Value(math.Round(r.flips)), Exposure: Value(math.NaN()),
		PerGeneration: Value(math.NaN()), PerGenerationLow: Value(math.NaN()), PerGenerationHigh: Value(math.NaN()),
	}
	rate := records.Rate{
		From: r.from, To: r.to, Route: r.route, Interval: r.interval, Mean: r.mean, Low: r.low, High: r.high,
		StandardError: r.standardError, Flips: -1, Dwells: -1, Exposure: math.NaN(), PerGeneration: records.Absent(),
	}
	if r.flips >= 0 {
		rate.Flips = int64(math.Round(r.flips))
	}
	if g := j.network.Generation; g > 0 {
		row.PerGeneration, row.PerGenerationLow, row.PerGenerationHigh = Value(g/r.mean), Value(g/r.high), Value(g/r.low)
		rate.PerGeneration = records.Range{Value: g / r.mean, Low: g / r.high, High: g / r.low}
		if r.holds {
			row.Holds = j.constantRateHolds(r)
		}
		rate.Hold = j.holdRecords(row.Holds, "constant rate")
	}
	j.rates = append(j.rates, rate)
	j.add(row)
}

// constantRateHolds gives the chances of holding of a row whose rate is constant.
func (j *job) constantRateHolds(r logRow) []HoldChance {
	var out []HoldChance
	for _, n := range j.options.Holds {
		t := n * j.network.Generation
		loss := func(mean float64) float64 { return -math.Expm1(-t / mean) }
		out = append(out, newHoldChance(n, loss(r.mean), loss(r.low), loss(r.high)))
	}
	return out
}
