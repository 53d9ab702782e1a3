package records_test

import (
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"

	"holdfast/analysis/records"
)

// A run of an invented design writes three dwells, and they are read back.
func Example() {
	base, err := os.MkdirTemp("", "records")
	if err != nil {
		fmt.Println(err)
		return
	}
	defer func() { _ = os.RemoveAll(base) }()
	dir := filepath.Join(base, "latch")
	if err := write(dir); err != nil {
		fmt.Println(err)
		return
	}
	if err := read(dir); err != nil {
		fmt.Println(err)
	}
	// Output:
	// dwells: 3 rows from "holdfast hold latch.toml --seed 7"
	// low → high after 12.5 min = 0.50 generations
	// low → high after 31 min = 1.24 generations
	// high → censored after 100 min = 4.00 generations
}

func write(dir string) error {
	folder, err := records.Create(dir, records.Provenance{
		Title: "Marsh-sensor latch", Design: "time = \"min\"\n", Seed: 7, Version: "0.1.0",
		Command: records.Command("holdfast", "hold", "latch.toml", "--seed", "7"), TimeUnit: "min", Generation: 25, Copies: 40,
	})
	if err != nil {
		return err
	}
	defer folder.Abandon()
	dwells, err := records.NewDwells(folder, []string{"low", "high"}, []string{"runs"}, []string{"flipped", "horizon"})
	if err != nil {
		return err
	}
	for _, d := range []records.Dwell{
		{From: 0, To: 1, Replicate: 0, Time: 12.5, Events: 301},
		{From: 0, To: 1, Replicate: 1, Time: 31, Events: 777},
		{From: 1, To: records.Censored, Ending: 1, Replicate: 0, Time: 100, Events: 9120},
	} {
		if err := dwells.Append(d); err != nil {
			return err
		}
	}
	return folder.Finish(records.Outcome{Events: 10198, Endings: map[string]int64{"flipped": 2, "horizon": 1}})
}

func read(dir string) error {
	record, err := records.Open(dir)
	if err != nil {
		return err
	}
	fmt.Printf("%s: %d rows from %q\n", record.Manifest.Tables[0].Name, record.Manifest.Tables[0].Rows, record.Manifest.Command)
	table, err := record.Table("dwells")
	if err != nil {
		return err
	}
	defer func() { _ = table.Close() }()
	for {
		batch, err := table.Next()
		if errors.Is(err, io.EOF) {
			return nil
		}
		if err != nil {
			return err
		}
		from, e1 := batch.Labels("from")
		to, e2 := batch.Labels("to")
		time, e3 := batch.Floats("time")
		generations, e4 := batch.Floats("generations")
		if err := errors.Join(e1, e2, e3, e4); err != nil {
			return err
		}
		for i := range batch.Rows() {
			fmt.Printf("%s → %s after %v min = %.2f generations\n", from[i], to[i], time[i], generations[i])
		}
	}
}

// A table of one's own takes a line a column.
func ExampleNewTable() {
	t := records.NewTable("folds")
	t.AddText("constant", "constant that was moved")
	t.AddFloat("value", "", "value of the constant at the fold")
	t.AddInt("unstable", "", "unstable directions beyond it")
	t.Optional()
	for _, c := range t.Columns {
		fmt.Printf("%s: %v, nullable %v\n", c.Name, c.Kind, c.Nullable)
	}
	// Output:
	// constant: text, nullable false
	// value: number, nullable false
	// unstable: whole number, nullable true
}

func ExampleCommand() {
	fmt.Println(records.Command("holdfast", "hold", "my latch.toml", "--with", "drive=1.2", "--seed", "1"))
	// Output: holdfast hold 'my latch.toml' --with drive=1.2 --seed 1
}
