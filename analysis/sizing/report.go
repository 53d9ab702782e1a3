package sizing

import (
	"fmt"
	"math"
	"path/filepath"

	"holdfast/analysis/hold"
	"holdfast/model"
)

// An Outcome says in a word how a search ended.
type Outcome string

// The outcomes.
const (
	// Met: there is an answer, and settings short of it fail.
	Met Outcome = "met"
	// MetAlready: the lower end of the range of copies, or today's setting of a
	// constant, meets the specifications already.
	MetAlready Outcome = "met already"
	// NotMet: no setting that was evaluated meets them.
	NotMet Outcome = "not met"
	// Undecided: none surely meets them, but for some the limits leave it open.
	Undecided Outcome = "undecided"
)

// A Report is the answer of a search.
type Report struct {
	Design     string     `json:"design"`
	Digest     string     `json:"sha256"`
	Seed       uint64     `json:"seed"`
	TimeUnit   string     `json:"time_unit"`
	Generation hold.Value `json:"generation"` // NaN if the design gives none
	// Knob is what was turned, from RangeLow to RangeHigh; Today is its setting in
	// the design.
	Knob      string     `json:"knob"`
	RangeLow  hold.Value `json:"range_low"`
	RangeHigh hold.Value `json:"range_high"`
	Today     hold.Value `json:"today"`
	Specs     []string   `json:"specs"`
	// Asked are the same, parsed.
	Asked   []Spec  `json:"-"`
	Outcome Outcome `json:"outcome"`
	// Answer is the setting found; nil where none was.
	Answer *Answer `json:"answer"`
	// Window is the range of a constant about the answer in which every setting that
	// was evaluated meets the specifications.
	Window *Window `json:"window,omitempty"`
	// Best is the evaluation of the largest margin.
	Best Evaluation `json:"best"`
	// Evaluations are all that was evaluated, by setting.
	Evaluations []Evaluation `json:"evaluations"`
	Warnings    []string     `json:"warnings"`
}

// An Answer is the setting that was looked for.
type Answer struct {
	// Setting meets the specifications by the best estimate; Short is its neighbour
	// that does not, NaN where the range has none: one copy fewer, or a constant
	// within the tolerance.
	Setting hold.Value `json:"setting"`
	Short   hold.Value `json:"short"`
	// May is the first setting, from the failing side, that the limits allow to meet
	// the specifications, Surely the first at which the lower limit does: together
	// the interval of the answer. Surely is NaN where none in the range does.
	May    hold.Value `json:"may"`
	Surely hold.Value `json:"surely"`
	// Steady is, for copies, the number from which on all that was evaluated meets the
	// specifications: above Setting where the dwell time falls again in between, NaN
	// where there is none.
	Steady hold.Value `json:"steady"`
}

// A Window is a range of settings with what ends it.
type Window struct {
	Low  End `json:"low"`
	High End `json:"high"`
}

// What can end a window.
const (
	BySpec   = "spec"   // the specification is not met beyond
	ByRange  = "range"  // the range that was looked at ends
	ByVanish = "vanish" // the switch vanishes beyond
)

// An End is one side of a window.
type End struct {
	// Setting is the last that meets the specifications by the best estimate; Surely
	// and May bound it where dwell times are sampled.
	Setting hold.Value `json:"setting"`
	Surely  hold.Value `json:"surely"`
	May     hold.Value `json:"may"`
	By      string     `json:"by"`
	// Text says more: the specification that fails beyond, or how the switch
	// vanishes, with the exact place of a fold.
	Text string `json:"text,omitempty"`
}

func newReport(n *model.Network, o Options, today float64) *Report {
	r := &Report{
		Design: n.Title, Digest: n.Digest, Seed: o.Hold.Seed, TimeUnit: n.TimeUnit, Generation: hold.Value(n.Generation),
		Knob: o.Knob.Name, RangeLow: hold.Value(o.Knob.Low), RangeHigh: hold.Value(o.Knob.High), Today: hold.Value(today),
		Warnings: []string{},
	}
	r.Asked = o.Specs
	if r.Design == "" {
		r.Design = filepath.Base(n.File)
	}
	if n.Generation == 0 {
		r.Generation = hold.Value(math.NaN())
	}
	for _, s := range o.Specs {
		r.Specs = append(r.Specs, s.String())
	}
	return r
}

func (s *searcher) warn(format string, a ...any) {
	s.report.Warnings = append(s.report.Warnings, fmt.Sprintf(format, a...))
}

// At gives the evaluation of a setting, nil if there is none.
func (r *Report) At(setting hold.Value) *Evaluation {
	for i := range r.Evaluations {
		if hold.Value(r.Evaluations[i].Setting) == setting {
			return &r.Evaluations[i]
		}
	}
	return nil
}

// Binding gives the check of an evaluation that has the least margin: what decides it.
func (e *Evaluation) Binding() *Check {
	var least *Check
	for i := range e.Checks {
		if c := &e.Checks[i]; least == nil || c.margin[0] < least.margin[0] {
			least = c
		}
	}
	return least
}
