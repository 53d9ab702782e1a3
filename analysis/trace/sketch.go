package trace

import (
	"fmt"
	"io"
	"math"
	"strings"
)

const (
	sketchColumns = 72
	sketchRows    = 14
)

// A Sketch is a chart in characters of one path's readout: for each column of
// time the range of counts seen in it. It is filled row by row in constant memory.
type Sketch struct {
	readout   int
	until     float64
	low, high [sketchColumns]int64
}

// NewSketch gives an empty chart for p's readout.
func NewSketch(p *Paths) *Sketch {
	s := &Sketch{readout: p.Network.Readout, until: p.Until}
	for i := range s.low {
		s.low[i], s.high[i] = math.MaxInt64, -1
	}
	return s
}

// Add takes one sample into the chart.
func (s *Sketch) Add(r Row) {
	c := min(int(r.Time/s.until*sketchColumns), sketchColumns-1)
	n := r.Counts[s.readout]
	s.low[c], s.high[c] = min(s.low[c], n), max(s.high[c], n)
}

// Write draws the chart; columns without a sample stay blank.
func (s *Sketch) Write(w io.Writer, species, unit string) error {
	top := int64(1)
	for _, h := range s.high {
		top = max(top, h)
	}
	var b strings.Builder
	fmt.Fprintf(&b, "  %s, molecules\n", species)
	for row := sketchRows - 1; row >= 0; row-- {
		from := float64(top+1) * float64(row) / sketchRows
		to := float64(top+1) * float64(row+1) / sketchRows
		fmt.Fprintf(&b, "  %8.0f ┤%s\n", math.Ceil(from), strings.TrimRight(s.line(from, to), " "))
	}
	end := fmt.Sprintf("%.4g %s", s.until, unit)
	fmt.Fprintf(&b, "  %8s └%s\n  %8s  0%*s\n", "", strings.Repeat("─", sketchColumns), "", sketchColumns-1, end)
	_, err := io.WriteString(w, b.String())
	return err
}

// line marks the columns whose range meets the counts in [from, to).
func (s *Sketch) line(from, to float64) string {
	var b strings.Builder
	for c := range s.low {
		mark := ' '
		if float64(s.high[c]) >= from && float64(s.low[c]) < to {
			mark = '▪'
		}
		b.WriteRune(mark)
	}
	return b.String()
}
