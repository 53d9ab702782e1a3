package hold

import (
	"math"
	"strings"

	"holdfast/analysis/action"
	"holdfast/analysis/records"
)

// largestLog is the logarithm of the largest number of double precision.
const largestLog = 709.78

// A Logs is a value with its limits by their logarithms to the base of 10: for what is
// too large, or too small, for a number of double precision.
type Logs struct {
	Mean Value `json:"mean"`
	Low  Value `json:"low"`
	High Value `json:"high"`
}

func newLogs(log, half float64) *Logs {
	return &Logs{Value(log / math.Ln10), Value((log - half) / math.Ln10), Value((log + half) / math.Ln10)}
}

// addAction adds one row: a mean time whose logarithm is known, with the half-width of
// its interval. only tells that the chance of holding stands with it.
func (j *job) addAction(from, to int, w way, only bool) {
	mean, low, high := math.Exp(w.log), math.Exp(w.log-w.half), math.Exp(w.log+w.half)
	deviation := mean * w.half / 1.96
	nan := Value(math.NaN())
	row := DwellReport{
		From: j.survey.Stable()[from].Name, To: j.recordName(to), Route: Action, Sampled: true,
		Mean: Value(mean), Low: Value(low), High: Value(high), StandardError: Value(deviation), Flips: nan, Exposure: nan,
		PerGeneration: nan, PerGenerationLow: nan, PerGenerationHigh: nan,
	}
	rate := records.Rate{
		From: from, To: to, Route: Action, Interval: "extrapolation of the prefactor", Mean: mean, Low: math.Min(low, math.MaxFloat64), High: high,
		StandardError: deviation, Flips: -1, Dwells: -1, Exposure: math.NaN(), PerGeneration: records.Absent(),
	}
	if w.log+w.half > largestLog {
		row.Logs = newLogs(w.log, w.half)
		rate.StandardError = math.NaN()
	}
	if g := j.network.Generation; g > 0 {
		row.PerGeneration, row.PerGenerationLow, row.PerGenerationHigh = Value(g/mean), Value(g/high), Value(g/low)
		rate.PerGeneration = records.Range{Value: g / mean, Low: g / high, High: g / low}
		if row.Logs != nil {
			row.LogGenerations, row.LogPerGeneration = newLogs(w.log-math.Log(g), w.half), newLogs(math.Log(g)-w.log, w.half)
		}
		if only {
			row.Holds = j.constantHolds(w)
		}
	}
	rate.Hold = j.holdRecords(row.Holds, "constant rate")
	j.rates = append(j.rates, rate)
	j.add(row)
}

// constantHolds gives the chances of holding at a constant rate: a dwell is longer than
// t with the chance exp(−t/mean), but for the time that it takes to forget its start.
func (j *job) constantHolds(w way) []HoldChance {
	var out []HoldChance
	for _, n := range j.options.Holds {
		t := math.Log(n * j.network.Generation)
		loss := func(log float64) float64 { return -math.Expm1(-math.Exp(t - log)) }
		out = append(out, newHoldChance(n, loss(w.log), loss(w.log-w.half), loss(w.log+w.half)))
	}
	return out
}

// addNever adds a pair that does not occur.
func (j *job) addNever(from, to int, p *action.Pair) {
	inf, nan := Value(math.Inf(1)), Value(math.NaN())
	row := DwellReport{
		From: p.From, To: p.To, Route: Action, Never: true, Note: "never goes there", Mean: inf, Low: inf, High: inf, Flips: nan, Exposure: nan,
	}
	if j.network.Generation == 0 {
		row.PerGeneration, row.PerGenerationLow, row.PerGenerationHigh = nan, nan, nan
	}
	j.add(row)
	rate := j.neverRate(from, to, row)
	rate.Route, rate.Interval = Action, "no path"
	j.rates = append(j.rates, rate)
}

// describeWay adds a way to the report.
func (j *job) describeWay(w *way) {
	log := w.log - j.network.Copies*w.pair.S
	row := ActionPath{
		From: w.pair.From, To: w.pair.To, Saddle: w.pair.Paths[0].Saddle, Exponent: Value(w.pair.S), Error: Value(w.pair.Error),
		Others: len(w.pair.Paths) - 1, Source: w.source,
		Prefactor: Value(math.Exp(log)), PrefactorLow: Value(math.Exp(log - w.half)), PrefactorHigh: Value(math.Exp(log + w.half)),
	}
	for _, c := range w.prefactor.Copies {
		row.Copies = append(row.Copies, Value(c))
	}
	j.report.Action.Paths = append(j.report.Action.Paths, row)
}

func listed(names []string) string { return strings.Join(names, ", then ") }
