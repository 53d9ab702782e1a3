package hold

import (
	"context"
	"fmt"
	"math"
)

const (
	// stagedRarity is the Ω S of the rarest flip that staged runs are made of to find
	// prefactors, stagedFractions the parts of its copies that they are made at. There are
	// two of them, far apart: through three the sampling errors would grow tenfold.
	stagedRarity = 8
	// stagedPrecision is the relative half-width asked of them.
	stagedPrecision = 0.1
)

func stagedFractions() []float64 { return []float64{0.4, 1} }

// stagedPrefactors takes the mean times of some ways from staged runs at two numbers of
// copies.
func (j *job) stagedPrefactors(ctx context.Context, ways []*way) error {
	for _, w := range ways {
		if w.gone() {
			return fmt.Errorf("%s is left for where species are gone, which staged runs do not follow: take --route runs", w.pair.From)
		}
		w.prefactor.Deviations = []float64{}
		w.source = Staged
	}
	events := perRun(j.options.Events, len(ways)*len(stagedFractions()))
	for k, share := range stagedFractions() {
		at, err := j.at(ctx, j.wholeTotals(stagedRarity/ways[0].pair.S*share))
		if err != nil {
			return err
		}
		at.options.Precision = math.Min(at.options.Precision, stagedPrecision)
		r := &stagedJob{job: at}
		for n, w := range ways {
			done := float64(k*len(ways)+n) / float64(len(ways)*len(stagedFractions()))
			j.tell(fmt.Sprintf("action: staged runs at %.4g copies", at.network.Copies), done)
			if err := r.prefactor(ctx, w, events); err != nil {
				return err
			}
		}
		j.report.Work.Events += at.report.Work.Events
		for _, text := range at.report.Warnings {
			j.warn("action: at %.4g copies: %s", at.network.Copies, text)
		}
	}
	return nil
}

// prefactor adds what staged runs say of a way.
func (r *stagedJob) prefactor(ctx context.Context, w *way, events int64) error {
	l, err := r.leave(ctx, w.from, w.to, events)
	switch {
	case ctx.Err() != nil:
		return ctx.Err()
	case err != nil:
		return err
	case l.result == nil:
		return fmt.Errorf("staged runs at %.4g copies found no way from %s to %s, so its prefactor is not known: take --route runs", r.network.Copies, w.pair.From, w.pair.To)
	}
	r.report.Work.Events += l.result.Events
	w.prefactor.Add(r.network.Copies, -math.Log(l.result.Rate), w.pair.S)
	w.prefactor.Deviations = append(w.prefactor.Deviations, l.result.StandardError/l.result.Rate)
	return nil
}
