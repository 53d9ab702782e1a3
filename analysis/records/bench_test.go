package records

import (
	"os"
	"path/filepath"
	"runtime"
	"testing"
)

// Ten million dwells: Mrows/s, bytes a row, and the heap in use at the end, which does
// not grow with the rows.
func BenchmarkDwells(b *testing.B) {
	const rows = 10_000_000
	var bytes, heap int64
	for b.Loop() {
		dir := filepath.Join(b.TempDir(), "run")
		f, err := Create(dir, marsh())
		if err != nil {
			b.Fatal(err)
		}
		d, err := NewDwells(f, []string{"low", "high"}, []string{"runs"}, []string{"flipped", "horizon"})
		if err != nil {
			b.Fatal(err)
		}
		for i := range rows {
			if err := d.Append(Dwell{From: i & 1, To: 1 - i&1, Replicate: uint64(i), Time: float64(i), Events: int64(i)}); err != nil {
				b.Fatal(err)
			}
		}
		var m runtime.MemStats
		runtime.ReadMemStats(&m)
		heap = int64(m.Sys)
		if err := f.Finish(Outcome{}); err != nil {
			b.Fatal(err)
		}
		info, err := os.Stat(filepath.Join(dir, "dwells.arrow"))
		if err != nil {
			b.Fatal(err)
		}
		bytes = info.Size()
		if err := os.RemoveAll(dir); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(rows*float64(b.N)/b.Elapsed().Seconds()/1e6, "Mrows/s")
	b.ReportMetric(float64(bytes)/rows, "B/row")
	b.ReportMetric(float64(heap)/(1<<20), "MiB")
}
