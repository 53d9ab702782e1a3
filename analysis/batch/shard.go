package batch

import (
	"errors"
	"fmt"
	"os"
	"strconv"
	"strings"
)

// A Shard is one of several equal parts of a batch: it has the points number Index,
// Index + Count, Index + 2 Count and so on. The zero value is the whole batch.
type Shard struct {
	Index, Count int // 1 ≤ Index ≤ Count
}

// MostShards is the largest number of shards.
const MostShards = 10_000

// Whole tells that the shard is the whole batch.
func (s Shard) Whole() bool { return s.Count == 0 }

// String writes the shard as it is typed: 2/4.
func (s Shard) String() string {
	if s.Whole() {
		return "all"
	}
	return fmt.Sprintf("%d/%d", s.Index, s.Count)
}

// Has tells whether the point of that number belongs to the shard.
func (s Shard) Has(number int64) bool {
	return s.Whole() || (number-int64(s.Index))%int64(s.Count) == 0
}

// ParseShard reads i/n, with i from 1 to n; or "auto", which takes both from the
// environment of a scheduler's job array.
func ParseShard(text string) (Shard, error) {
	if text == "auto" {
		return shardOfArray(os.Getenv)
	}
	index, count, found := strings.Cut(text, "/")
	i, errIndex := strconv.Atoi(strings.TrimSpace(index))
	n, errCount := strconv.Atoi(strings.TrimSpace(count))
	switch {
	case !found || errIndex != nil || errCount != nil:
		return Shard{}, fmt.Errorf("%q is not i/n, as in 2/4, nor auto", text)
	case n < 1 || n > MostShards:
		return Shard{}, fmt.Errorf("%d shards: there can be 1 to %d", n, MostShards)
	case i < 1 || i > n:
		return Shard{}, fmt.Errorf("shard %d of %d: the first is 1 and the last %d", i, n, n)
	}
	return Shard{i, n}, nil
}

// An arrayOf names the variables in which a scheduler tells a task of a job array which
// one it is: its number, the first and last number, the step, and how many there are.
// Those that the scheduler does not give are empty.
type arrayOf struct{ number, first, last, step, count string }

func arrays() []arrayOf {
	return []arrayOf{
		{"SLURM_ARRAY_TASK_ID", "SLURM_ARRAY_TASK_MIN", "SLURM_ARRAY_TASK_MAX", "SLURM_ARRAY_TASK_STEP", "SLURM_ARRAY_TASK_COUNT"},
		{"SGE_TASK_ID", "SGE_TASK_FIRST", "SGE_TASK_LAST", "SGE_TASK_STEPSIZE", ""},
		{"LSB_JOBINDEX", "", "LSB_JOBINDEX_END", "LSB_JOBINDEX_STEP", ""},
		{"PBS_ARRAY_INDEX", "", "", "", ""},
	}
}

// shardOfArray finds the shard in the variables of a job array.
func shardOfArray(get func(string) string) (Shard, error) {
	var names []string
	for _, a := range arrays() {
		names = append(names, a.number)
		if v := get(a.number); v != "" && v != "undefined" && (a.number != "LSB_JOBINDEX" || v != "0") {
			return a.shard(get)
		}
	}
	return Shard{}, fmt.Errorf("auto: this is no task of a job array (none of %s is set); write i/n", strings.Join(names, ", "))
}

func (a arrayOf) shard(get func(string) string) (Shard, error) {
	if a.last == "" {
		return Shard{}, fmt.Errorf("auto: %s tells which task this is but nothing tells of how many; write --shard $%s/n", a.number, a.number)
	}
	var failed error
	read := func(name string, missing int) int {
		text := get(name)
		if name == "" || text == "" {
			return missing
		}
		v, err := strconv.Atoi(text)
		if err != nil {
			failed = errors.Join(failed, fmt.Errorf("auto: %s is %q, not a whole number", name, text))
		}
		return v
	}
	number, first, step := read(a.number, 0), read(a.first, 1), max(read(a.step, 1), 1)
	last := read(a.last, number)
	count := read(a.count, (last-first)/step+1)
	if failed != nil {
		return Shard{}, failed
	}
	if (number-first)%step != 0 || count != (last-first)/step+1 {
		return Shard{}, fmt.Errorf("auto: task %d of %d from %d to %d in steps of %d is no even part; write --shard i/n", number, count, first, last, step)
	}
	return ParseShard(fmt.Sprintf("%d/%d", (number-first)/step+1, count))
}
