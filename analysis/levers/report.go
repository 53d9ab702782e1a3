package levers

import (
	"math"
	"path/filepath"
	"slices"

	"holdfast/analysis/hold"
	"holdfast/model"
)

// A Report is the answer of one levers job.
type Report struct {
	Design   string  `json:"design"` // the design's title, or its file's name
	Digest   string  `json:"sha256"` // of the design file's bytes
	TimeUnit string  `json:"time_unit"`
	Copies   float64 `json:"copies"`
	Seed     uint64  `json:"seed"`
	// Route says which route was taken and why, in a line.
	Route string `json:"route"`
	// Action says what slopes by action hold, or why there are none; empty where they
	// were not tried.
	Action string `json:"action,omitempty"`
	// Blocks has one entry for each hold time: for each state, or, where a dwell can end
	// in several ways, for leaving it at all and then for each other state.
	Blocks []Block `json:"blocks"`
	// Together says which change makes every state hold longer; empty where none does.
	Together string   `json:"together,omitempty"`
	Warnings []string `json:"warnings"`
	Seconds  float64  `json:"seconds"`
	// Interrupted tells that the job was stopped before it was done.
	Interrupted bool `json:"interrupted"`
}

// A Block is how one hold time answers.
type Block struct {
	From string `json:"from"`
	To   string `json:"to"` // "any": whatever state is entered
	// Mean is today's mean dwell time with its interval or bounds, by HoldRoute, in
	// TimeUnit.
	Mean      hold.Value `json:"mean"`
	Low       hold.Value `json:"low"`
	High      hold.Value `json:"high"`
	HoldRoute string     `json:"hold_route"`
	// Levers are sorted by the size of their slopes, largest first.
	Levers []Lever `json:"levers"`
	// First says what to change first, in a sentence.
	First string `json:"first,omitempty"`
	// Note says why there is no lever.
	Note string `json:"note,omitempty"`
}

// A Lever is a constant, or copies, and how a hold time answers to it.
type Lever struct {
	Name  string     `json:"name"`
	Value hold.Value `json:"value"` // today's
	// Slopes are the same slope by each route that was taken, the one to go by first.
	Slopes []Slope `json:"slopes"`
	// PerUnit tells that the value is 0 today, which has no per cent: the slope is then
	// the per cent change of the hold time for each 0.01 that is added to the constant.
	PerUnit bool `json:"per_unit"`
	// Below and Above are where, turning the constant from today's value, the first of
	// the stable states is lost; nil where none is in reach.
	Below *Loss `json:"below"`
	Above *Loss `json:"above"`
	// Agreement holds the first two slopes against each other: "agree", or how far they
	// are apart; empty where there are not two.
	Agreement string `json:"agreement,omitempty"`
	Note      string `json:"note,omitempty"`
}

// A Slope is d ln(hold time)/d ln(constant) by one route: the per cent change of the
// hold time for one per cent more of the constant, + longer, − shorter.
type Slope struct {
	Route string     `json:"route"`
	Value hold.Value `json:"slope"` // NaN: not known, and Lever.Note says why
	Low   hold.Value `json:"low"`   // error bounds, or a 95 % interval
	High  hold.Value `json:"high"`
	// Leading is the part of a slope by action that grows with copies; NaN for other routes.
	Leading hold.Value `json:"leading_order"`
}

// A Loss is where a stable state of today is lost.
type Loss struct {
	State string     `json:"state"`
	Kind  string     `json:"type"` // fold, pitchfork, …
	At    hold.Value `json:"at"`   // value of the constant
	// Percent is the way there in per cent of today's value, negative below.
	Percent hold.Value `json:"percent"`
}

// Slope gives the slope to go by.
func (l *Lever) Slope() Slope {
	if len(l.Slopes) == 0 {
		return noSlope("")
	}
	return l.Slopes[0]
}

// By gives the slope by one route; one that is not known where that was not taken.
func (l *Lever) By(route string) Slope {
	for _, s := range l.Slopes {
		if s.Route == route {
			return s
		}
	}
	return noSlope(route)
}

func noSlope(route string) Slope { return newSlope(route, math.NaN(), math.NaN()) }

// newSlope gives a slope with an error to either side.
func newSlope(route string, value, off float64) Slope {
	return Slope{route, hold.Value(value), hold.Value(value - off), hold.Value(value + off), hold.Value(math.NaN())}
}

// Routes lists the routes to the block's slopes, that to go by first.
func (b *Block) Routes() []string {
	var out []string
	for i := range b.Levers {
		for _, s := range b.Levers[i].Slopes {
			if !slices.Contains(out, s.Route) {
				out = append(out, s.Route)
			}
		}
	}
	return out
}

// newReport starts the report with what the design says.
func newReport(n *model.Network, o Options) *Report {
	r := &Report{
		Design: n.Title, Digest: n.Digest, TimeUnit: n.TimeUnit, Copies: n.Copies, Seed: o.Hold.Seed,
		Blocks: []Block{}, Warnings: []string{},
	}
	if r.Design == "" {
		r.Design = filepath.Base(n.File)
	}
	return r
}
