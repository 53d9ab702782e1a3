package batch

import (
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"holdfast/analysis/records"
)

// tidy tells, without taking the folder, whether the tables of the batch are in place and
// whole and nothing is left to do, as a shard that comes late finds them.
func tidy(dir string, id *identity, shard Shard) (bool, error) {
	there, err := readIdentity(dir)
	if there == nil || err != nil || there.digest() != id.digest() {
		return false, err
	}
	if _, err := os.Stat(filepath.Join(dir, partsName)); err == nil && shard.Whole() {
		return false, nil
	}
	_, err = records.Open(dir)
	return err == nil, nil
}

// finished tells whether the tables of the batch are in place, and whole. Parts that are
// left over from then are removed. note says what is wrong with tables that are damaged.
func (s *store) finished() (done bool, note string, err error) {
	_, err = records.Open(s.dir)
	var damage *records.DamageError
	switch {
	case errors.Is(err, records.ErrUnfinished):
		return false, "", nil
	case errors.As(err, &damage):
		return false, damage.File + " is damaged: " + damage.Problem + "; it is made anew", nil
	case err != nil || !s.shard.Whole():
		return err == nil, "", err
	}
	return true, "", s.removeParts()
}

// labels are the names that stand in the tables, found in a first pass over the parts.
type labels struct {
	names  []string // of stable states
	routes []string // that were taken first
	states []records.State
	rates  []records.Rate
}

// take adds the names of an answer that are new.
func (l *labels) take(a *answer) {
	if a.Route != "" && !slices.Contains(l.routes, a.Route) {
		l.routes = append(l.routes, a.Route)
	}
	for i := range a.States {
		n := &a.States[i]
		if !slices.ContainsFunc(l.states, func(s records.State) bool { return s.Name == n.Name && s.Type == n.Type }) {
			l.states = append(l.states, records.State{Name: n.Name, Type: n.Type})
		}
	}
	for i := range a.Rates {
		r := &a.Rates[i]
		for _, name := range []string{r.From, r.To} {
			if name != "" && !slices.Contains(l.names, name) {
				l.names = append(l.names, name)
			}
		}
		if !slices.ContainsFunc(l.rates, func(k records.Rate) bool { return likeRate(&k, &r.Row) }) {
			l.rates = append(l.rates, r.Row)
		}
	}
}

// likeRate tells whether two rows have the same names in them.
func likeRate(a, b *records.Rate) bool {
	return a.Route == b.Route && a.Interval == b.Interval &&
		slices.EqualFunc(a.Hold, b.Hold, func(x, y records.HoldChance) bool { return x.Source == y.Source })
}

// A source gives the answer of a point by its number.
type source func(number int64) (*answer, error)

// assemble writes the tables from the parts, one at a time in the order of the points,
// and removes the parts.
func (s *store) assemble(ctx context.Context, get source) error {
	l := &labels{}
	err := s.each(ctx, get, func(a *answer) error {
		l.take(a)
		return nil
	})
	if err != nil {
		return err
	}
	l.names = orNone(l.names)
	if err := s.writeTables(ctx, get, l); err != nil {
		var full *records.WriteError
		if errors.As(err, &full) {
			return fmt.Errorf("%w, but every finished point is safe: make room and give the same command again", err)
		}
		return err
	}
	return s.removeParts()
}

// each gives all answers in order.
func (s *store) each(ctx context.Context, get source, take func(*answer) error) error {
	for number := int64(1); number <= int64(s.id.Points); number++ {
		if ctx.Err() != nil {
			return context.Cause(ctx)
		}
		a, err := get(number)
		if err == nil && a == nil {
			err = errors.New("it is missing")
		}
		if err != nil {
			return fmt.Errorf("part of point %d: %w; give the same command again", number, err)
		}
		if err := take(a); err != nil {
			return err
		}
	}
	return nil
}

func (s *store) writeTables(ctx context.Context, get source, l *labels) error {
	folder, err := records.CreateBeside(s.dir, s.id.provenance(), identityName, partsName)
	if err != nil {
		return err
	}
	defer folder.Abandon()
	t, err := newTables(folder, &s.id, l)
	if err != nil {
		return err
	}
	if err := s.each(ctx, get, t.append); err != nil {
		return err
	}
	return folder.Finish(records.Outcome{Events: t.events, Warnings: t.warnings()})
}

// tables are the tables of a batch being written.
type tables struct {
	points *pointTable
	states *records.PointStates
	rates  *records.PointRates
	sizes  *sizeTable // nil: none is asked for
	names  []string
	events int64
	failed []string
	ended  int // points that failed
}

func newTables(folder *records.Folder, id *identity, l *labels) (*tables, error) {
	t := &tables{names: l.names}
	var err error
	if t.points, err = newPointTable(folder, id, l); err != nil {
		return nil, err
	}
	if t.states, err = records.NewPointStates(folder, id.Species, l.states); err != nil {
		return nil, err
	}
	if t.rates, err = records.NewPointRates(folder, l.names, l.rates); err != nil || !id.Sized {
		return t, err
	}
	t.sizes, err = newSizeTable(folder)
	return t, err
}

// mostNamed is the most failing points that are named in the manifest.
const mostNamed = 20

// append adds the rows of one point.
func (t *tables) append(a *answer) error {
	t.events += a.Events
	if a.Status == Failed {
		if t.ended++; t.ended <= mostNamed {
			t.failed = append(t.failed, fmt.Sprint(a.Point.Number))
		}
	}
	if err := t.points.append(a); err != nil {
		return err
	}
	if err := t.sizes.append(a); err != nil {
		return err
	}
	for i := range a.States {
		if err := t.states.Append(a.Point.Number, &a.States[i]); err != nil {
			return err
		}
	}
	for i := range a.Rates {
		row := a.Rates[i].Row
		row.From = slices.Index(t.names, a.Rates[i].From)
		if row.To >= 0 {
			row.To = slices.Index(t.names, a.Rates[i].To)
		}
		if err := t.rates.Append(a.Point.Number, &row); err != nil {
			return err
		}
	}
	return nil
}

func (t *tables) warnings() []string {
	if t.ended == 0 {
		return nil
	}
	text := fmt.Sprintf("%d points failed, as their messages say: %s", t.ended, strings.Join(t.failed, ", "))
	if t.ended > mostNamed {
		text += ", …"
	}
	return []string{text}
}
