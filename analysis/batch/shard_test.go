package batch

import (
	"strings"
	"testing"
)

// Variables as the schedulers' manuals name them: Slurm sbatch(1) "job array environment
// variables", Grid Engine qsub(1) -t, LSF "job array environment variables", PBS
// Professional user's guide, ch. 9 (from memory; Slurm's are tried in TestSlurm).
func TestShardOfArray(t *testing.T) {
	for _, c := range []struct{ variables, want string }{
		{"SLURM_ARRAY_TASK_ID=3 SLURM_ARRAY_TASK_MIN=1 SLURM_ARRAY_TASK_MAX=4 SLURM_ARRAY_TASK_STEP=1 SLURM_ARRAY_TASK_COUNT=4", "3/4"},
		{"SLURM_ARRAY_TASK_ID=0 SLURM_ARRAY_TASK_MIN=0 SLURM_ARRAY_TASK_MAX=3 SLURM_ARRAY_TASK_STEP=1 SLURM_ARRAY_TASK_COUNT=4", "1/4"},
		{"SLURM_ARRAY_TASK_ID=15 SLURM_ARRAY_TASK_MIN=5 SLURM_ARRAY_TASK_MAX=20 SLURM_ARRAY_TASK_STEP=5 SLURM_ARRAY_TASK_COUNT=4", "3/4"},
		{"SLURM_ARRAY_TASK_ID=5 SLURM_ARRAY_TASK_MIN=1 SLURM_ARRAY_TASK_MAX=9 SLURM_ARRAY_TASK_STEP=1 SLURM_ARRAY_TASK_COUNT=3", "no even part"},
		{"SLURM_ARRAY_TASK_ID=x SLURM_ARRAY_TASK_MIN=1 SLURM_ARRAY_TASK_MAX=9", "not a whole number"},
		{"SGE_TASK_ID=2 SGE_TASK_FIRST=1 SGE_TASK_LAST=4 SGE_TASK_STEPSIZE=1", "2/4"},
		{"SGE_TASK_ID=undefined SGE_TASK_FIRST=undefined", "no task of a job array"},
		{"LSB_JOBINDEX=2 LSB_JOBINDEX_END=8 LSB_JOBINDEX_STEP=1", "2/8"},
		{"LSB_JOBINDEX=0", "no task of a job array"},
		{"PBS_ARRAY_INDEX=2", "write --shard $PBS_ARRAY_INDEX/n"},
		{"", "no task of a job array"},
	} {
		variables := map[string]string{}
		for word := range strings.FieldsSeq(c.variables) {
			name, value, _ := strings.Cut(word, "=")
			variables[name] = value
		}
		s, err := shardOfArray(func(name string) string { return variables[name] })
		if got := s.String(); err == nil && got != c.want || err != nil && !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s: %s, %v; want %s", c.variables, got, err, c.want)
		}
	}
}

// The shards of a batch have every point once.
func TestShardsCover(t *testing.T) {
	for count := 1; count < 12; count++ {
		for number := int64(1); number < 40; number++ {
			in := 0
			for i := 1; i <= count; i++ {
				if (Shard{i, count}).Has(number) {
					in++
				}
			}
			if in != 1 {
				t.Errorf("point %d is in %d of %d shards", number, in, count)
			}
		}
	}
}

// The order of work has every point once.
func TestSpread(t *testing.T) {
	for n := range 200 {
		todo := make([]int, n)
		for i := range todo {
			todo[i] = 3 * i
		}
		seen := map[int]bool{}
		for _, i := range spread(todo) {
			seen[i] = true
		}
		if len(seen) != n {
			t.Errorf("%d of %d points", len(seen), n)
		}
	}
}

func TestFirstDifference(t *testing.T) {
	for _, c := range [][3]string{
		{"a\nb", "a\nc", `line 2 was "b" and is "c"`},
		{"a", "a\nb", "line 2 is new: b"},
		{"a\nb", "a", "line 2 is gone: b"},
	} {
		if got := firstDifference(c[0], c[1]); got != c[2] {
			t.Errorf("%q, %q: %s, want %s", c[0], c[1], got, c[2])
		}
	}
}
