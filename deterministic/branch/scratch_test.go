package branch

import (
	"context"
	"fmt"
	"testing"
	"time"

	"holdfast/deterministic"
	"holdfast/internal/zoo"
	"holdfast/model"
)

func show(n *model.Network, name string, lo, hi float64) {
	k, err := NewKnob(n, name, lo, hi)
	if err != nil {
		fmt.Println(err)
		return
	}
	t := time.Now()
	d, err := Follow(context.Background(), n, k, Options{})
	el := time.Since(t)
	if err != nil {
		fmt.Println(name, err)
		return
	}
	fmt.Println("==", n.Title, name, lo, hi, "time", el, "branches", len(d.Branches), d.Warnings)
	for _, b := range d.Branches {
		fmt.Println(" branch points", len(b.Points))
		for _, m := range b.Marks {
			fmt.Printf("   %v idx %d knob %.14g x %.10g turns %v opens %d rate %.6g freq %.12g %s %s\n", m.Kind, m.Index, m.Knob, m.Amounts, m.Turns, m.Opens, m.RateCoefficient, m.Frequency, m.Species, m.Text)
		}
	}
	for _, w := range d.Windows {
		fmt.Printf("   window %s: %v %g (%.4g%%) .. %v %g (%.4g%%)\n", w.State, w.Low.Mark.Kind, w.Low.Knob, w.Low.Distance, w.High.Mark.Kind, w.High.Knob, w.High.Distance)
	}
}

func TestScratch(t *testing.T) {
	show(zoo.LeakyActivator(0.6, 0.05, 100), "r", 0.1, 1)
	show(zoo.SelfActivator(3, 1, 1, 1, 100), "beta", 0, 5)
	for _, v := range []float64{0, 0.01,1, 1.25, 2.5, 3.75, 5} {
		t := time.Now()
		deterministic.Survey(context.Background(), zoo.SelfActivator(v, 1, 1, 1, 100), deterministic.Options{})
		fmt.Println(v, time.Since(t))
	}
	show(zoo.SymmetricRepression(3, 100), "alpha1*alpha2", 0.5, 80)
	show(zoo.AsymmetricRepression(3, 3, 2.5,2.5,100), "alpha1*alpha2", 0.5, 80)
	show(zoo.AsymmetricRepression(3, 3, 3,3,100), "alpha1*alpha2", 0.5, 80)
	show(zoo.SymmetricRepression(1.5, 100), "alpha1*alpha2", 0.5, 3)
	show(zoo.Latch(100), "copies", 10, 1e4)
}
