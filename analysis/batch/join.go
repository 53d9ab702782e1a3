package batch

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
)

// A MissingError is a join to which points are missing.
type MissingError struct {
	Points  int      // that are missing
	Of      int      // all points
	Reasons []string // shard by shard, or the points themselves
}

// Error names what is missing.
func (e *MissingError) Error() string {
	return fmt.Sprintf("%d of %d points are missing:\n  %s\nrun these shards (again), and join then", e.Points, e.Of, strings.Join(e.Reasons, "\n  "))
}

// A ConflictError is a point that two folders have with different answers.
type ConflictError struct {
	Point         int64
	Shard         string // that it belongs to, where that is known
	First, Second string // the folders
}

// Error names the point, its shard and the folders.
func (e *ConflictError) Error() string {
	shard := ""
	if e.Shard != "" {
		shard = " of shard " + e.Shard
	}
	return fmt.Sprintf("point %d%s is in both %s and %s, and differs: they were made by different kinds of processors, or one is wrong; leave one folder out", e.Point, shard, e.First, e.Second)
}

// A joiner reads the parts of several folders.
type joiner struct {
	dirs   []string
	id     *identity
	digest string
	shards map[Shard][]string // the folders in which each shard was begun
}

// Join makes the tables of the parts in dirs, which may be one folder that several shards
// shared, in the folder out. They are those of the whole batch made in one go, byte for
// byte. out may be one of dirs.
//
// Parts in several folders are taken once and must be the same (*ConflictError). Points
// that are missing are a *MissingError that names their shards, and then nothing is
// written. Other errors are those of Run.
func Join(ctx context.Context, dirs []string, out string) (*Result, error) {
	j := &joiner{dirs: distinct(dirs), shards: map[Shard][]string{}}
	if err := j.identify(); err != nil {
		return nil, err
	}
	r := &Result{Folder: out}
	r.Points = j.id.Points
	if whole, err := tidy(out, j.id, Shard{}); whole || err != nil {
		r.Tables, r.Already = whole, whole
		return r, err
	}
	if err := j.check(ctx); err != nil {
		return nil, err
	}
	s, err := openStore(out, *j.id, Shard{})
	if err != nil {
		return nil, err
	}
	defer s.close()
	if r.Already, _, err = s.finished(); r.Already || err != nil {
		r.Tables = r.Already
		return r, err
	}
	r.Tables, r.Notes = true, j.notes()
	return r, s.assemble(ctx, j.get)
}

func distinct(dirs []string) (out []string) {
	for _, d := range dirs {
		if d = filepath.Clean(d); !slices.Contains(out, d) {
			out = append(out, d)
		}
	}
	return out
}

// identify sees that all folders hold the same batch, and which shards were begun in each.
func (j *joiner) identify() error {
	if len(j.dirs) == 0 {
		return errors.New("which folders are to be joined?")
	}
	for _, dir := range j.dirs {
		id, err := readIdentity(dir)
		switch {
		case err != nil:
			return err
		case id == nil:
			return &NoBatchError{dir, "holds no batch: " + identityName + " is not there"}
		case j.id == nil:
			j.id, j.digest = id, id.digest()
		default:
			if d := j.id.differences(id); len(d) > 0 {
				return &DifferentError{dir, append(d, "'here' is "+j.dirs[0])}
			}
		}
		if err := j.findShards(dir); err != nil {
			return err
		}
	}
	return nil
}

func (j *joiner) findShards(dir string) error {
	entries, err := os.ReadDir(filepath.Join(dir, partsName))
	if errors.Is(err, fs.ErrNotExist) {
		return nil
	}
	for _, e := range entries {
		var s Shard
		if n, _ := fmt.Sscanf(e.Name(), "shard-%d-of-%d.lock", &s.Index, &s.Count); n == 2 && shardFile(s) == e.Name() {
			j.shards[s] = append(j.shards[s], dir)
		}
	}
	return err
}

// get gives a point from the first folder that has it whole, and holds it against the
// others.
func (j *joiner) get(number int64) (*answer, error) {
	var found *answer
	where := ""
	for _, dir := range j.dirs {
		a, err := getPart(filepath.Join(dir, partsName), j.digest, number)
		switch {
		case errors.Is(err, errDamaged) || err == nil && a == nil:
			continue
		case err != nil:
			return nil, err
		case found == nil:
			found, where = a, dir
		case !found.same(a):
			return nil, &ConflictError{number, j.shardOf(number), where, dir}
		}
	}
	return found, nil
}

// shardOf names the shard of a point, if all shards known are of one division.
func (j *joiner) shardOf(number int64) string {
	count := j.count()
	if count == 0 {
		return ""
	}
	return Shard{int((number-1)%int64(count)) + 1, count}.String()
}

// count is the number of shards, 0 if it is not known or not the same for all.
func (j *joiner) count() int {
	count := 0
	for s := range j.shards {
		if count != 0 && s.Count != count {
			return 0
		}
		count = s.Count
	}
	return count
}

// check sees that every point is there and no two differ.
func (j *joiner) check(ctx context.Context) error {
	var missing []int64
	for number := int64(1); number <= int64(j.id.Points); number++ {
		if ctx.Err() != nil {
			return context.Cause(ctx)
		}
		a, err := j.get(number)
		if err != nil {
			return err
		}
		if a == nil {
			missing = append(missing, number)
		}
	}
	if missing == nil {
		return nil
	}
	return &MissingError{len(missing), j.id.Points, j.reasons(missing)}
}

// reasons names the shards of the missing points, or the points.
func (j *joiner) reasons(missing []int64) (out []string) {
	count := j.count()
	if count == 0 {
		return []string{"points " + listOf(missing)}
	}
	of := map[int][]int64{}
	for _, number := range missing {
		i := int((number-1)%int64(count)) + 1
		of[i] = append(of[i], number)
	}
	for i := 1; i <= count; i++ {
		if of[i] == nil {
			continue
		}
		s := Shard{i, count}
		if j.shards[s] == nil {
			out = append(out, fmt.Sprintf("shard %v: not there", s))
			continue
		}
		all := (j.id.Points - i + count) / count
		out = append(out, fmt.Sprintf("shard %v, in %s: not finished, or damaged: %d of its %d points (%s)", s, strings.Join(j.shards[s], " and "), len(of[i]), all, listOf(of[i])))
	}
	return out
}

// listOf writes the first numbers of a list.
func listOf(numbers []int64) string {
	const most = 8
	var words []string
	for i, n := range numbers {
		if i == most {
			return strings.Join(words, ", ") + ", …"
		}
		words = append(words, fmt.Sprint(n))
	}
	return strings.Join(words, ", ")
}

// notes name the shards that are there twice.
func (j *joiner) notes() (out []string) {
	var all []Shard
	for s, dirs := range j.shards {
		if len(dirs) > 1 {
			all = append(all, s)
		}
	}
	slices.SortFunc(all, func(a, b Shard) int { return a.Index - b.Index })
	for _, s := range all {
		out = append(out, fmt.Sprintf("shard %v is in %s: the points that both have are the same, and are taken once", s, strings.Join(j.shards[s], " and ")))
	}
	return out
}
