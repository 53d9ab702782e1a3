package main

import (
	"fmt"
	"io"

	"holdfast/analysis/hold"
	"holdfast/analysis/survey"
)

// writeDiagram prints what turning one knob gives.
func writeDiagram(w io.Writer, r *survey.Report) error {
	d := r.Diagram
	if d == nil {
		return nil
	}
	fmt.Fprintf(w, "\nTurning %s from %s to %s, today %s\n", d.Knob, value(d.Low), value(d.High), value(d.Today))
	for _, s := range d.Stretches {
		fmt.Fprintf(w, "  %s from %s to %s\n", stableStates(s.Stable), precise(s.Low), precise(s.High))
	}
	if len(d.Windows) > 0 {
		fmt.Fprintf(w, "\nWindows of %s: where each stable state of today exists\n", d.Knob)
		if err := windowTable(d).write(w); err != nil {
			return err
		}
	}
	if err := writeSpecials(w, r); err != nil {
		return err
	}
	for i := range d.Noise {
		n := &d.Noise[i]
		fmt.Fprintf(w, "\nLinear noise of %s towards the %s at %s = %s\n", n.State, n.Toward, d.Knob, precise(n.End))
		if err := noiseTable(r, n).write(w); err != nil {
			return err
		}
	}
	return nil
}

func stableStates(n int) string {
	switch n {
	case 0:
		return "no stable state in the box"
	case 1:
		return "1 stable state"
	}
	return fmt.Sprintf("%d stable states", n)
}

// precise writes a value to ten digits.
func precise(v hold.Value) string { return digits(float64(v), 10) }

func windowTable(d *survey.Diagram) *table {
	t := &table{}
	t.add("state", "from", "ended by", "below today by", "to", "ended by", "above today by")
	for _, x := range d.Windows {
		t.add(x.State, precise(x.Low.Knob), x.Low.Kind, percent(x.Low.Distance), precise(x.High.Knob), x.High.Kind, percent(x.High.Distance))
	}
	return t
}

// percent writes a value in per cent, "–" where there is none.
func percent(v hold.Value) string {
	if text := value(v); text != "–" {
		return text + " %"
	}
	return "–"
}

// writeSpecials prints the folds and the other special points.
func writeSpecials(w io.Writer, r *survey.Report) error {
	d := r.Diagram
	if len(d.Specials) == 0 {
		_, err := fmt.Fprintf(w, "\nNo fold or other special point in this range\n")
		return err
	}
	fmt.Fprintf(w, "\nSpecial points of %s, with the amounts there\n", d.Knob)
	t := &table{}
	t.add(append([]string{"point", d.Knob}, append(append([]string{}, r.Species...), "")...)...)
	for _, s := range d.Specials {
		row := []string{s.Kind, precise(s.Knob)}
		for _, a := range s.Amounts {
			row = append(row, digits(float64(a), 6))
		}
		t.add(append(row, specialNote(r, &s))...)
	}
	return t.write(w)
}

// specialNote says in a few words what happens at a special point.
func specialNote(r *survey.Report, s *survey.Special) string {
	switch {
	case s.States != "":
		return fmt.Sprintf("two states %s it; slow rate near it %s √distance, 1/%s", s.States, value(s.RateCoefficient), r.TimeUnit)
	case value(s.Frequency) != "–":
		return fmt.Sprintf("oscillates at %s rad/%s", value(s.Frequency), r.TimeUnit)
	}
	return "" // a kink's text is among the warnings
}

func noiseTable(r *survey.Report, n *survey.Noise) *table {
	t := &table{}
	t.add(r.Diagram.Knob, "left to go", r.Readout+", molecules", "sd", "slow rate, 1/"+r.TimeUnit, "correlation time, "+r.TimeUnit)
	for _, x := range n.Rows {
		t.add(digits(float64(x.Knob), 6), percent(x.Distance), value(x.Molecules), value(x.Deviation), value(x.SlowRate), value(x.CorrelationTime))
	}
	return t
}

// writeFoldDiagram prints the fold curves of two knobs.
func writeFoldDiagram(w io.Writer, r *survey.Report) error {
	d := r.FoldDiagram
	if d == nil {
		return nil
	}
	fmt.Fprintf(w, "\nFolds in %s from %s to %s, today %s, and %s from %s to %s, today %s\n", d.First.Name, value(d.First.Low), value(d.First.High),
		value(d.First.Today), d.Second.Name, value(d.Second.Low), value(d.Second.High), value(d.Second.Today))
	if len(d.Curves) == 0 {
		fmt.Fprintln(w, "  no fold in these ranges")
	}
	for i := range d.Curves {
		c := &d.Curves[i]
		fmt.Fprintf(w, "\nFold curve %d: %d points, from %s to %s\n", i+1, len(c.Points), c.Ends[0], c.Ends[1])
		if err := curveTable(r, c).write(w); err != nil {
			return err
		}
	}
	return nil
}

func curveTable(r *survey.Report, c *survey.FoldCurve) *table {
	t := &table{}
	t.add(append([]string{r.FoldDiagram.First.Name, r.FoldDiagram.Second.Name}, append(append([]string{}, r.Species...), "")...)...)
	for _, i := range c.Shown {
		p := &c.Points[i]
		row := []string{precise(p.First), precise(p.Second)}
		for _, a := range p.Amounts {
			row = append(row, digits(float64(a), 6))
		}
		if p.Cusp {
			row = append(row, "cusp")
		}
		t.add(row...)
	}
	return t
}
