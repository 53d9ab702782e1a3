package resting

import (
	"context"
	"errors"
	"fmt"
	"strings"

	"holdfast/deterministic"
	"holdfast/deterministic/proof"
	"holdfast/model"
)

// MostFree is the most free amounts, species less conserved totals, for which a
// proof is tried.
const MostFree = 6

// mostBoxes over the number of free amounts limits the boxes of a proof, so that it
// takes a few seconds at most: a box of six free amounts costs up to half a
// millisecond, one of two a tenth of that.
const mostBoxes = 60_000

// A List is the resting states of a network.
type List struct {
	// Map is the survey; where a proof found states that it had missed, the survey
	// made again from these.
	Map *deterministic.Map
	// Proof is what the proof gave; nil where none could be tried, and Untried then
	// says why.
	Proof   *proof.Result
	Untried string
	// Warnings say where the two lists differ, a sentence each.
	Warnings []string
}

// States surveys the network and, up to MostFree free amounts, tries to prove that
// the list of states is complete. Errors are those of deterministic.Survey; a List
// comes with them where a Map does.
func States(ctx context.Context, n *model.Network) (*List, error) {
	m, err := deterministic.Survey(ctx, n, deterministic.Options{})
	if m == nil {
		return nil, err
	}
	l := &List{Map: m}
	if problem := l.prove(ctx); problem != nil {
		return nil, problem
	}
	if l.Proof == nil {
		return l, err
	}
	if missed := l.missed(); len(missed) > 0 {
		if err = l.again(ctx, missed); l.Map == nil {
			return nil, err
		}
	}
	l.compare()
	return l, err
}

// again surveys from all states that are known by now.
func (l *List) again(ctx context.Context, missed []proof.Root) (err error) {
	before := l.Map.Search
	o := deterministic.Options{Starts: 1, Seeds: append(seeds(missed), points(l.Map)...)}
	l.Map, err = deterministic.Survey(ctx, l.Map.Network, o)
	if l.Map != nil {
		l.Map.Search.Starts += before.Starts
		l.Map.Search.Flows += before.Flows
		l.reportMissed(missed)
	}
	return err
}

// prove tries the proof; only a context that is done is an error.
func (l *List) prove(ctx context.Context) error {
	n := l.Map.Network
	free := len(n.Species) - len(l.Map.Totals)
	if free > MostFree {
		l.Untried = fmt.Sprintf("%d amounts are free, and a proof is tried up to %d", free, MostFree)
		return nil
	}
	p := proof.Problem{Network: n, MaxBoxes: mostBoxes / max(free, 1)}
	r, err := proof.Prove(ctx, p)
	if errors.Is(err, proof.ErrUnbounded) {
		p.Low, p.High = l.Map.Low, l.Map.High
		r, err = proof.Prove(ctx, p)
	}
	if ctx.Err() != nil {
		return ctx.Err()
	}
	if err != nil {
		l.Untried = err.Error()
		return nil
	}
	l.Proof = r
	return nil
}

// Complete tells that the list is proved to hold every resting state.
func (l *List) Complete() bool { return l.Proof != nil && l.Proof.Complete }

// String says 'complete (proved)', 'not proved' with the box that resisted and why,
// or 'multi-start, not proved'.
func (l *List) String() string {
	switch {
	case l.Proof == nil:
		return fmt.Sprintf("multi-start, not proved: %s", l.Untried)
	case l.Proof.Complete:
		return l.Proof.String()
	}
	text := "not proved"
	if l.Proof.Ending.Early() {
		text += fmt.Sprintf(": %v, %d boxes", l.Proof.Ending, l.Proof.Boxes)
	}
	for i, u := range l.Proof.Unresolved {
		if i == mostShown {
			return text + fmt.Sprintf("; and %d more", len(l.Proof.Unresolved)-i)
		}
		text += fmt.Sprintf("; what resisted: %s", l.box(u))
	}
	if !l.Proof.Ending.Early() {
		text += "; near a fold, a degenerate state or a kink of a law no box can be told to hold one state or none"
	}
	return text
}

// mostShown is the most boxes that are written out.
const mostShown = 3

// box writes the bounds of a box by species.
func (l *List) box(u proof.Unresolved) string {
	parts := make([]string, len(u.Box))
	for i, a := range u.Box {
		parts[i] = fmt.Sprintf("%s %.9g to %.9g", l.Map.Network.Species[i].Name, a.Lo, a.Hi)
	}
	return strings.Join(parts, ", ")
}
