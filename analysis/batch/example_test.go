package batch_test

import (
	"context"
	"fmt"
	"os"
	"path/filepath"

	"holdfast/analysis/batch"
	"holdfast/analysis/hold"
	"holdfast/model"
)

// How long the demo latch holds at three copy numbers, in a folder that can be gone on
// with after a kill.
func Example() {
	dir, err := os.MkdirTemp("", "batch")
	if err != nil {
		fmt.Println(err)
		return
	}
	defer func() { _ = os.RemoveAll(dir) }()
	draft, err := model.Load(filepath.Join("..", "..", "testdata", "designs", "latch.toml"))
	if err != nil {
		fmt.Println(err)
		return
	}
	axis, err := batch.ParseAxis("copies=8:18:3log")
	if err != nil {
		fmt.Println(err)
		return
	}
	points, err := batch.NewPoints(draft, batch.Base{Seed: 1}, nil, []batch.Axis{axis}, 0)
	if err != nil {
		fmt.Println(err)
		return
	}
	job := batch.Job{Draft: draft, Points: points, Hold: hold.Options{Command: "example"}, Folder: filepath.Join(dir, "out")}
	if _, err := batch.Run(context.Background(), job); err != nil {
		fmt.Println(err)
		return
	}
	summary, err := batch.Summarise(job.Folder)
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, r := range summary.Rows {
		fmt.Printf("%v copies, %s → %s: %.2f %s\n", r.Copies, r.Dwell.From, r.Dwell.To, r.Dwell.Mean, summary.TimeUnit)
	}
	// Output:
	// 8 copies, low → high: 177.64 min
	// 8 copies, high → low: 47.78 min
	// 12 copies, low → high: 266.96 min
	// 12 copies, high → low: 71.04 min
	// 18 copies, low → high: 471.44 min
	// 18 copies, high → low: 129.90 min
}
