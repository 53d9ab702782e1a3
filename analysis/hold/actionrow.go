package hold

import (
	"math"
	"strings"

	"holdfast/analysis/action"
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
	row := logRow{
		from: from, to: to, route: Action, interval: "prefactor carried on from fewer copies", holds: only, flips: math.NaN(),
		mean: math.Exp(w.log), low: math.Min(math.Exp(w.log-w.half), math.MaxFloat64), high: math.Exp(w.log + w.half),
		standardError: math.Exp(w.log) * w.half / 1.96,
	}
	j.addLog(row)
	if w.log+w.half <= largestLog {
		return
	}
	last := &j.report.Dwells[len(j.report.Dwells)-1]
	last.Logs = newLogs(w.log, w.half)
	if g := j.network.Generation; g > 0 {
		last.LogGenerations, last.LogPerGeneration = newLogs(w.log-math.Log(g), w.half), newLogs(math.Log(g)-w.log, w.half)
	}
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
