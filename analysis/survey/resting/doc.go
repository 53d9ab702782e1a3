// Package resting gives the list of a network's resting states together with what
// is proved about it: the multi-start survey of package deterministic and the
// interval proof of package proof, held against each other. Each proved state is one
// of the survey's and the reverse; a state that the survey missed is surveyed from
// the proof's.
package resting
