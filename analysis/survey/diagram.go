package survey

import (
	"holdfast/analysis/hold"
)

// A Diagram follows the resting states as one knob is turned.
type Diagram struct {
	Knob  string     `json:"knob"`
	Low   hold.Value `json:"low"`
	High  hold.Value `json:"high"`
	Today hold.Value `json:"today"`
	// Box has the upper edges of the amounts that states were followed in.
	Box []hold.Value `json:"box_high"`
	// Windows has one entry for each stable state of today.
	Windows []Window `json:"windows"`
	// Specials are the folds, Hopf points, pitchforks and the like, by the knob
	// ascending.
	Specials []Special `json:"special_points"`
	// Stretches tell how many stable states there are, from end to end of the range.
	Stretches []Stretch `json:"stretches"`
	// Noise is the linear noise on the way from today to each end of a window where a
	// state gives way.
	Noise    []Noise  `json:"noise"`
	Branches []Branch `json:"branches"`
}

// A Window is the range of the knob in which a stable state of today exists and is
// stable.
type Window struct {
	State string `json:"state"`
	Low   End    `json:"low"`
	High  End    `json:"high"`
}

// An End is one side of a window: what the state meets there, and how far today's
// setting is from it, in per cent of today's.
type End struct {
	Kind     string     `json:"type"`
	Knob     hold.Value `json:"knob"`
	Distance hold.Value `json:"distance_percent"`
}

// A Special is a point of the diagram at which something happens to a state.
type Special struct {
	Kind    string       `json:"type"`
	Knob    hold.Value   `json:"knob"`
	Amounts []hold.Value `json:"amounts"`
	// States says on which side of a fold its two states exist: above or below.
	States string `json:"states,omitempty"`
	// RateCoefficient is, for a fold, the c of the slow rate c·√|knob − fold| near it;
	// Frequency, for a Hopf point, that of the oscillation in radians per time.
	RateCoefficient hold.Value `json:"rate_coefficient"`
	Frequency       hold.Value `json:"frequency"`
	Text            string     `json:"text,omitempty"` // more of a kink
}

// A Stretch is a part of the knob's range with the number of stable states in it.
type Stretch struct {
	Low    hold.Value `json:"low"`
	High   hold.Value `json:"high"`
	Stable int        `json:"stable_states"`
}

// A Noise is the linear noise of a state from today's setting to where it gives way.
type Noise struct {
	State  string     `json:"state"`
	Toward string     `json:"toward"` // what it meets there
	End    hold.Value `json:"end"`    // the knob there
	Rows   []NoiseRow `json:"rows"`
}

// A NoiseRow is one setting: its distance from the end in per cent of today's value,
// the readout in amount and molecules, its predicted standard deviation, and the
// slow rate and correlation time of the state.
type NoiseRow struct {
	Knob            hold.Value `json:"knob"`
	Distance        hold.Value `json:"distance_percent"`
	Amount          hold.Value `json:"amount"`
	Molecules       hold.Value `json:"molecules"`
	Deviation       hold.Value `json:"sd_molecules"`
	SlowRate        hold.Value `json:"slow_rate"`
	CorrelationTime hold.Value `json:"correlation_time"`
}

// A Branch is a curve of resting states; the knob need not be monotone along it.
type Branch struct {
	Points []Point `json:"points"`
}

// A Point is a resting state on a branch, values by species. Mark says what the
// point is, where it is special or an end.
type Point struct {
	Knob            hold.Value   `json:"knob"`
	Mark            string       `json:"mark,omitempty"`
	Amounts         []hold.Value `json:"amounts"`
	Stable          bool         `json:"stable"`
	Unstable        int          `json:"unstable_directions"`
	Eigenvalues     [][2]float64 `json:"eigenvalues"`
	SlowRate        hold.Value   `json:"slow_rate"`
	CorrelationTime hold.Value   `json:"correlation_time"`
	Deviation       []hold.Value `json:"sd_molecules"`
}
