package hold

import (
	"encoding/json"
	"math"
	"path/filepath"

	"holdfast/analysis/records"
)

// A Value is a number that may be absent: NaN (not known) and infinities are
// written to JSON as null.
type Value float64

// MarshalJSON writes the number, or null where there is none.
func (v Value) MarshalJSON() ([]byte, error) {
	if f := float64(v); !math.IsNaN(f) && !math.IsInf(f, 0) {
		return json.Marshal(f)
	}
	return []byte("null"), nil
}

// A Report is the answer of one hold job. Times are in TimeUnit.
type Report struct {
	Design     string        `json:"design"` // the design's title, or its file's name
	Digest     string        `json:"sha256"` // of the design file's bytes
	Seed       uint64        `json:"seed"`
	TimeUnit   string        `json:"time_unit"`
	Generation Value         `json:"generation"` // NaN if the design gives none
	Copies     float64       `json:"copies"`
	States     []StateReport `json:"states"`
	Dwells     []DwellReport `json:"dwells"`
	Work       Work          `json:"work"`
	Warnings   []string      `json:"warnings"`
	// Verdicts hold the two routes of a job with a second one against each other.
	Verdicts []Verdict `json:"verdicts,omitempty"`
	// Lattice describes the lattice route, where it was taken.
	Lattice *LatticeReport `json:"lattice,omitempty"`
	// Langevin describes the Langevin route, where it was taken.
	Langevin *LangevinReport `json:"langevin,omitempty"`
	// Action describes the route action, where it was taken.
	Action *ActionReport `json:"action,omitempty"`

	// Rates are the rows of the table rates, as they are recorded; states are
	// counted as in States without saddles.
	Rates []records.Rate `json:"-"`

	// Staged tells how staged runs went, where they were made, pair by pair.
	Staged []StagedReport `json:"staged,omitempty"`

	// Variation tells how constants vary, where some do.
	Variation *VariationReport `json:"variation,omitempty"`

	// Species are the names of the species, in the design's order.
	Species []string `json:"-"`
	// List says how far the list of states can be trusted: "complete (proved)", or
	// what is not proved.
	List string `json:"-"`
	// Route says which route was taken and why, in a line.
	Route string `json:"-"`
	// Interrupted tells that the job was stopped before it was done; what had
	// been seen by then is in the report.
	Interrupted bool `json:"-"`
}

// A StateReport is one resting state or saddle.
type StateReport struct {
	Name      string           `json:"name"`
	Kind      string           `json:"type"`
	Amounts   map[string]Value `json:"amounts"`
	Molecules map[string]Value `json:"molecules"`
	// Stable tells that it can be held: a stable state or a declared one.
	Stable bool `json:"-"`
}

// A DwellReport is the hold time of one ordered pair of states, or, where To is
// "any", of one state whatever it leaves for.
type DwellReport struct {
	From  string `json:"from"`
	To    string `json:"to"`
	Route string `json:"route"`
	// Mean dwell time with its 95 % interval. The mean is NaN where no flip was
	// seen and +Inf where the state is never left; High is +Inf where the runs
	// give no upper limit.
	Mean     Value `json:"mean"`
	Low      Value `json:"low"`
	High     Value `json:"high"`
	Flips    Value `json:"flips"`    // flips seen; NaN where the route sees none
	Exposure Value `json:"exposure"` // total time watched in From
	// PerGeneration is the expected number of flips in one generation; NaN if
	// the design gives no generation.
	PerGeneration Value `json:"per_generation"`
	// Note says in plain words what the numbers cannot: "never returns", say.
	Note string `json:"note,omitempty"`

	// Logs are the mean and its limits by their logarithms to the base of 10, where
	// they are too large for a number of double precision; nil otherwise.
	Logs *Logs `json:"log10,omitempty"`
	// LogGenerations and LogPerGeneration are the same for Generations and
	// PerGeneration.
	LogGenerations   *Logs `json:"-"`
	LogPerGeneration *Logs `json:"log10_per_generation,omitempty"`

	// Never tells that the state is never left; Sampled that the numbers have an
	// interval, from sampled flips or from carrying a prefactor on.
	Never, Sampled bool `json:"-"`
	// StandardError of Mean, for sampled rows; Bound on the relative error of Mean,
	// for the others.
	StandardError, Bound Value `json:"-"`
	// The same mean and limits in generations, and the limits of PerGeneration.
	Generations, GenerationsLow, GenerationsHigh Value `json:"-"`
	PerGenerationLow, PerGenerationHigh          Value `json:"-"`
	// Holds are the chances of holding for the numbers of generations asked, as
	// Options.Holds lists them.
	Holds []HoldChance `json:"-"`
}

// A HoldChance is the chance that a state still holds after some generations,
// with its 95 % limits.
type HoldChance struct {
	Generations       float64
	Chance, Low, High Value
	// Loss is 1 minus each of the three, which keeps its digits where they are near 1.
	Loss [3]Value
}

// A LatticeReport tells how the master equation was solved.
type LatticeReport struct {
	States     int     `json:"states"`
	Box        string  `json:"box"`        // of counts
	Truncation Value   `json:"truncation"` // bound on the relative error of the means
	Relaxation Value   `json:"relaxation"` // slowest relaxation time of the whole network
	Weights    []Value `json:"weights"`    // stationary probability of each state
	// Escape is the rate at which the quasi-stationary law of each state is left,
	// in 1/TimeUnit; 0 for a state that is never left.
	Escape  []StateRate `json:"escape"`
	Seconds float64     `json:"seconds"`
	Bytes   int64       `json:"bytes"`
}

// A StateRate is a rate of one state.
type StateRate struct {
	State string `json:"state"`
	Rate  Value  `json:"rate"`
}

// Work is what the answer cost.
type Work struct {
	Events  int64   `json:"events"`
	Steps   int64   `json:"steps,omitempty"` // of Langevin paths
	Seconds float64 `json:"seconds"`
	Threads int     `json:"threads"`
}

// newReport starts the report with what the survey tells.
func (j *job) newReport() {
	n := j.network
	r := &Report{
		Design: n.Title, Digest: n.Digest, Seed: j.options.Seed, TimeUnit: n.TimeUnit, Generation: Value(n.Generation),
		Copies: n.Copies, Species: speciesNames(n), Dwells: []DwellReport{},
		Work: Work{Threads: j.options.Threads}, Warnings: append([]string{}, j.survey.Warnings...),
	}
	if r.Design == "" {
		r.Design = filepath.Base(n.File)
	}
	if n.Generation == 0 {
		r.Generation = Value(math.NaN())
	}
	for i := range j.survey.States {
		s := &j.survey.States[i]
		state := StateReport{s.Name, s.Kind.String(), map[string]Value{}, map[string]Value{}, i < len(j.survey.Stable())}
		for k, name := range r.Species {
			state.Amounts[name], state.Molecules[name] = Value(s.Amounts[k]), Value(s.Molecules[k])
		}
		r.States = append(r.States, state)
	}
	j.report = r
}
