package main

import (
	"context"
	"fmt"
	"path/filepath"
	"strings"

	"github.com/spf13/pflag"

	"holdfast/analysis/batch"
	"holdfast/analysis/hold"
	"holdfast/model"
)

const batchAbout = `Answers 'map' and 'hold' at many points: copy numbers, values of constants, points of a
file, draws of constants that are not known well.

--vary copies=20:400:12log takes 12 copy numbers from 20 to 400, evenly spaced in the
logarithm and rounded to whole numbers; a=0.40:0.46:7 takes 7 values, evenly spaced;
copies=20,50,100 is a list. Several --vary make every combination, the last one turning
fastest. --points takes them from a CSV or Arrow file with a column for copies or a
constant each; together with --vary every row meets every value. --draw 200 makes each
point 200 times, with the constants that have an uncertainty in the design drawn from
their log-normal laws, the same 200 draws at every point.

--out names the folder for the tables points, states and rates and manifest.json. Every
finished point is kept there at once: after a kill, a full disk or a power cut the same
command goes on, and ends with the same bytes in every table. --shard 2/4 makes the
second of four parts, on another machine say, in the same folder or one of its own;
--shard auto takes it from a job array's variables. 'holdfast batch --join DIR… --out
DIR' then makes the tables.

A point where the switch has vanished, or whose answer failed, is a row that says so. The
exit status is 1 if any point failed.

--spec "high >= 1000 generations" looks for the smallest copy number that meets it,
instead of a table; --size a=0.3:0.6 for the setting of a constant nearest to the
design's. The other form is --spec "high holds 200 generations with chance 0.999"; every
stands for each state, and times are in generations or the design's unit. Without
--vary, --points and --draw --out is not needed; it receives the table sizing, of all
that was evaluated. With them the search is made at each point: the table sizes.`

func batchCommand() command {
	return command{name: "batch", args: "FILE", summary: "map and hold times at many points; killable, in shards", about: batchAbout, setup: setupBatch}
}

// A batchChoice is what the command line says of a batch.
type batchChoice struct {
	design              *designChoice
	axes                []batch.Axis
	points              string // file
	draws, threads      int64
	memory              float64
	hold                hold.Options
	out, shard          string
	join, asJSON, quiet bool
	size                *sizeChoice
	flags               *pflag.FlagSet
}

func setupBatch(f *pflag.FlagSet) work {
	c := &batchChoice{design: designFlags(f), flags: f}
	f.Var(axes{&c.axes}, "vary", "values of copies or a constant: low:high:count, low:high:countlog,\nor a list; may be repeated")
	f.Var(pointsFile{&c.points}, "points", "CSV or Arrow `file` of points")
	countFlag(f, &c.draws, "draw", "make each point so many times, with uncertain constants drawn")
	effortFlags(f, &c.hold, &c.memory)
	countFlag(f, &c.threads, "threads", "goroutines (one a processor if not given)")
	f.StringVar(&c.out, "out", "", "`folder` of the batch")
	c.size = sizeFlags(f)
	f.StringVar(&c.shard, "shard", "", "make part `i/n` only; auto: as a job array says")
	f.BoolVar(&c.join, "join", false, "make the tables of the shards in the folders named")
	f.BoolVar(&c.asJSON, "json", false, "print one JSON object instead of tables")
	f.BoolVar(&c.quiet, "quiet", false, "no progress")
	return c.run
}

func (c *batchChoice) run(ctx context.Context, t terminal, args []string) error {
	if sizing, err := c.sizes(); sizing || err != nil {
		if err != nil {
			return err
		}
		return c.runSize(ctx, t, args)
	}
	if c.out == "" {
		return misusef("batch: --out FOLDER is needed: finished points and tables are kept there")
	}
	if c.join {
		return c.runJoin(ctx, t, args)
	}
	path, err := oneFile("batch", args)
	if err != nil {
		return err
	}
	job, err := c.job(path)
	if err != nil {
		return err
	}
	bar := newTicker(t.err, c.quiet)
	job.Progress = bar.show
	r, err := batch.Run(ctx, *job)
	bar.close()
	return c.conclude(ctx, t, r, err)
}

// job puts the batch together.
func (c *batchChoice) job(path string) (*batch.Job, error) {
	draft, err := model.Load(path)
	if err != nil {
		return nil, err
	}
	var file *batch.File
	if c.points != "" {
		if file, err = batch.ReadFile(c.points); err != nil {
			return nil, err
		}
	}
	if file == nil && len(c.axes) == 0 && c.draws == 0 {
		return nil, misusef("batch: which points? --vary copies=20:400:12log, say, or --points FILE, or --draw N")
	}
	base := batch.Base{Copies: c.design.copies, Set: c.design.set, Seed: c.hold.Seed}
	points, err := batch.NewPoints(draft, base, file, c.axes, int(c.draws))
	if err != nil {
		return nil, misusef("batch: %v", err)
	}
	j := &batch.Job{Draft: draft, Points: points, Hold: c.hold, Folder: c.out, Threads: int(c.threads)}
	j.Hold.Memory = bytesOf(c.memory)
	j.Hold.Command = canonical("batch", filepath.Base(path), c.flags)
	if j.Size, err = c.sizeOf(draft); err != nil {
		return nil, err
	}
	if c.shard != "" {
		if j.Shard, err = batch.ParseShard(c.shard); err != nil {
			return nil, misusef("batch: --shard: %v", err)
		}
	}
	return j, nil
}

// runJoin makes the tables of shards.
func (c *batchChoice) runJoin(ctx context.Context, t terminal, dirs []string) error {
	var given []string
	c.flags.Visit(func(f *pflag.Flag) {
		if f.Name != "join" && f.Name != "out" && f.Name != "json" && f.Name != "quiet" {
			given = append(given, "--"+f.Name)
		}
	})
	if given != nil {
		return misusef("batch: --join takes what the shards were made with from their folders; leave %s out", strings.Join(given, ", "))
	}
	if len(dirs) == 0 {
		return misusef("batch: which folders are to be joined? 'holdfast batch --join DIR… --out DIR'")
	}
	r, err := batch.Join(ctx, dirs, c.out)
	return c.conclude(ctx, t, r, err)
}

// conclude prints what a batch has come to.
func (c *batchChoice) conclude(ctx context.Context, t terminal, r *batch.Result, err error) error {
	if r != nil {
		for _, note := range r.Notes {
			fmt.Fprintln(t.err, "note:", note)
		}
	}
	switch {
	case err != nil && ctx.Err() != nil && r != nil:
		return fmt.Errorf("stopped before it was done: %d of %d points are kept in %s; the same command goes on", r.Done, r.Points, r.Folder)
	case err != nil:
		return misuseOf(err)
	case !r.Tables:
		return c.concludeShard(t, r)
	}
	s, err := batch.Summarise(r.Folder)
	if err != nil {
		return err
	}
	if c.asJSON {
		err = writeJSON(t.out, s)
	} else {
		err = writeBatch(t.out, s)
	}
	if err != nil {
		return err
	}
	said := "tables are in"
	if r.Already {
		said = "nothing was left to do: tables are in"
	}
	fmt.Fprintln(t.err, said, r.Folder)
	return failures(s.Statuses[batch.Failed], s.Points, firstFailure(s))
}

// firstFailure says what the first point that failed says.
func firstFailure(s *batch.Summary) string {
	if len(s.Failed) == 0 {
		return ""
	}
	return fmt.Sprintf("; the first, point %d, says: %s", s.Failed[0], s.Message)
}

// failures is the error of a batch in which points failed.
func failures(failed, points int, message string) error {
	if failed == 0 {
		return nil
	}
	return fmt.Errorf("%d of %d points failed (status and message in the table points)%s", failed, points, message)
}

func (c *batchChoice) concludeShard(t terminal, r *batch.Result) error {
	_, err := fmt.Fprintf(t.out, "shard %v: %d of %d points are done, %d of them failed; when all %d shards are, 'holdfast batch --join DIR… --out DIR' makes the tables\n",
		r.Shard, r.Done, r.Points, r.Failed, r.Shard.Count)
	if err != nil {
		return err
	}
	return failures(r.Failed, r.Points, "")
}
