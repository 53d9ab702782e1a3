package main

import (
	"fmt"
	"io"
	"os"
	"time"

	"github.com/schollz/progressbar/v3"
	"golang.org/x/term"

	"holdfast/analysis/hold"
)

// barSteps is the resolution of a progress bar.
const barSteps = 1000

// A bar shows progress on a terminal; on anything else it shows nothing.
type bar struct {
	shown *progressbar.ProgressBar
}

func newBar(w io.Writer, quiet bool) *bar {
	f, ok := w.(*os.File)
	if quiet || !ok || !term.IsTerminal(int(f.Fd())) {
		return &bar{}
	}
	return &bar{progressbar.NewOptions(barSteps,
		progressbar.OptionSetWriter(w), progressbar.OptionSetWidth(24), progressbar.OptionThrottle(100*time.Millisecond),
		progressbar.OptionSetPredictTime(true), progressbar.OptionClearOnFinish(), progressbar.OptionSetElapsedTime(true))}
}

func (b *bar) holdProgress(p hold.Progress) {
	if b.shown == nil {
		return
	}
	unit := p.Unit
	if unit == "" {
		unit = "events"
	}
	b.shown.Describe(fmt.Sprintf("%s, %s %s", p.Stage, number(float64(p.Events)), unit))
	_ = b.shown.Set(int(p.Share * barSteps)) // a bar that cannot be drawn is no reason to stop
}

func (b *bar) close() {
	if b.shown != nil {
		_ = b.shown.Finish()
	}
}
