package main

import (
	"fmt"
	"io"
	"os"
	"time"

	"github.com/schollz/progressbar/v3"
	"golang.org/x/term"

	"holdfast/analysis/batch"
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

// A ticker shows how far a batch is: on a terminal as a bar, elsewhere as a line now and
// then.
type ticker struct {
	bar   *progressbar.ProgressBar
	to    io.Writer
	every time.Duration
	last  time.Time
}

// lineEvery is the time between two lines of progress where there is no terminal.
const lineEvery = 30 * time.Second

func newTicker(w io.Writer, quiet bool) *ticker {
	t := &ticker{to: w, every: lineEvery, last: time.Now()}
	f, ok := w.(*os.File)
	switch {
	case quiet:
		t.to = io.Discard
	case ok && term.IsTerminal(int(f.Fd())):
		t.bar = progressbar.NewOptions(barSteps, progressbar.OptionSetWriter(w), progressbar.OptionSetWidth(24),
			progressbar.OptionThrottle(100*time.Millisecond), progressbar.OptionClearOnFinish(), progressbar.OptionSetPredictTime(false))
	}
	return t
}

func (t *ticker) show(p batch.Progress) {
	text := fmt.Sprintf("%d of %d points", p.Done, p.Points)
	if p.Failed > 0 {
		text += fmt.Sprintf(", %d failed", p.Failed)
	}
	if p.Left > 0 {
		text += fmt.Sprintf(", about %s left", p.Left.Round(time.Second))
	}
	if t.bar != nil {
		t.bar.Describe(text)
		_ = t.bar.Set(barSteps * p.Done / max(p.Points, 1)) // a bar that cannot be drawn is no reason to stop
		return
	}
	if time.Since(t.last) >= t.every {
		t.last = time.Now()
		fmt.Fprintln(t.to, text)
	}
}

func (t *ticker) close() {
	if t.bar != nil {
		_ = t.bar.Finish()
	}
}

func (b *bar) close() {
	if b.shown != nil {
		_ = b.shown.Finish()
	}
}
