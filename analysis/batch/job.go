package batch

import (
	"context"
	"fmt"
	"time"

	"holdfast/analysis/hold"
	"holdfast/model"
)

// A Job is a batch to make.
type Job struct {
	Draft  *model.Draft
	Points *Points
	// Hold are the options of the hold jobs. Seed and Command are the batch's; Threads,
	// Point, Folder, Progress and Notice are not looked at.
	Hold hold.Options
	// Size, if not nil, makes each point a search for a size instead of a hold job.
	Size *Size
	// Folder is the folder of the batch, which goes on from what is there.
	Folder string
	Shard  Shard
	// Threads is the number of goroutines; 0: one a processor. Points are made side by
	// side; where fewer points are left, each has several threads.
	Threads int
	// Progress, if not nil, is told how far the batch is, never twice at once.
	Progress func(Progress)
}

// Progress tells how far a batch, or a shard of it, is.
type Progress struct {
	Points, Done, Failed int // those done before this process began count as well
	// Left is the time that the rest may take, at the pace so far; 0: not known yet.
	Left time.Duration
	// Damaged counts the parts that were found damaged, and are made anew.
	Damaged int
}

// A Result says what a batch, or a shard of it, has come to.
type Result struct {
	Progress
	Folder string
	Shard  Shard
	// Tables tells that the tables are in place, Already that they were before.
	Tables, Already bool
	// Notes are for the reader, a sentence each.
	Notes []string
}

// Run makes the batch, or goes on with it. Of a shard it makes the parts, of the whole
// batch the tables too.
//
// Errors are those of a folder that cannot be used (*DifferentError, *NoBatchError,
// *LockedError) or written (*WriteError), an *hold.OptionError, and the cause of ctx,
// with a Result that says how far it came. A point that failed is no error.
func Run(ctx context.Context, j Job) (*Result, error) {
	if err := j.Hold.Check(); err != nil {
		return nil, err
	}
	if err := j.Size.check(j.Points); err != nil {
		return nil, err
	}
	id := newIdentity(&j)
	r := &Result{Folder: j.Folder, Shard: j.Shard}
	if whole, err := tidy(j.Folder, &id, j.Shard); whole || err != nil {
		r.Tables, r.Already, r.Points = whole, whole, id.Points
		return r, err
	}
	s, err := openStore(j.Folder, id, j.Shard)
	if err != nil {
		return nil, err
	}
	defer s.close()
	finished, note, err := s.finished()
	if finished || err != nil {
		r.Tables, r.Already, r.Points = finished, finished, id.Points
		return r, err
	}
	if note != "" {
		r.Notes = append(r.Notes, note)
	}
	w := &worker{Job: j, store: s}
	r.Progress, err = w.run(ctx)
	if r.Damaged > 0 {
		r.Notes = append(r.Notes, fmt.Sprintf("%d parts were damaged and were made anew", r.Damaged))
	}
	if err != nil || !j.Shard.Whole() {
		return r, err
	}
	r.Tables = true
	return r, s.assemble(ctx, s.get)
}
