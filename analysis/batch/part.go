package batch

import (
	"bytes"
	"crypto/sha256"
	"encoding/gob"
	"errors"
	"fmt"

	"holdfast/analysis/records"
)

// What came of a point.
const (
	// Switch is a point with two stable states or more, and their hold times.
	Switch = "switch"
	// OneState is a point where the switch has vanished: one stable state is left.
	OneState = "one state"
	// NoState is a point without a stable state.
	NoState = "no state"
	// RunsAway is a point where amounts or counts grow without bound.
	RunsAway = "runs away"
	// Indistinct is a point with so few copies that two states are one lattice point.
	Indistinct = "indistinct"
	// Failed is a point without an answer; its message says why.
	Failed = "failed"
)

// Statuses lists what can come of a point.
func Statuses() []string { return []string{Switch, OneState, NoState, RunsAway, Indistinct, Failed} }

// An answer is what came of one point.
type answer struct {
	Point    Point
	Status   string
	Message  string // why it is no switch
	Complete bool   // the list of states is proved complete
	Stable   int    // stable states
	States   []records.State
	Rates    []rate
	Route    string // the first route's name
	Sized    *Sized // of a batch that looks for sizes
	Events   int64
	Warnings []string
}

// A rate is a row of the table rates with the names of its states. To is empty where
// the row's To is no state.
type rate struct {
	From, To string
	Row      records.Rate
}

// partHead begins every part; the digests of the batch and of the body follow, then
// the body.
const partHead = "holdfast part 1\n"

var errDamaged = errors.New("damaged")

// encodePart gives the bytes of a part of the batch with that digest.
func encodePart(batch string, a *answer) ([]byte, error) {
	var body bytes.Buffer
	if err := gob.NewEncoder(&body).Encode(a); err != nil {
		return nil, fmt.Errorf("point %d cannot be kept: %w", a.Point.Number, err)
	}
	sum := sha256.Sum256(body.Bytes())
	return []byte(partHead + batch + fmt.Sprintf("%x", sum) + body.String()), nil
}

// digestLength is that of a SHA-256 in hex.
const digestLength = 64

// decodePart reads a part of the batch with that digest. Bytes that are no such part,
// or not whole, are errDamaged.
func decodePart(batch string, data []byte) (*answer, error) {
	rest, found := bytes.CutPrefix(data, []byte(partHead+batch))
	if !found || len(rest) < digestLength {
		return nil, errDamaged
	}
	sum, body := rest[:digestLength], rest[digestLength:]
	if fmt.Sprintf("%x", sha256.Sum256(body)) != string(sum) {
		return nil, errDamaged
	}
	a := &answer{}
	if err := gob.NewDecoder(bytes.NewReader(body)).Decode(a); err != nil {
		return nil, errDamaged
	}
	return a, nil
}

// same tells whether two answers are the same in every bit of every number.
func (a *answer) same(b *answer) bool {
	one, errOne := encodePart("", a)
	two, errTwo := encodePart("", b)
	return errOne == nil && errTwo == nil && bytes.Equal(one, two)
}
