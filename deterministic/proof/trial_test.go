package proof

import (
	"context"
	"fmt"
	"testing"
	"time"

	"holdfast/internal/zoo"
	"holdfast/model"
)

func TestTrial(t *testing.T) {
	show := func(name string, n *model.Network) {
		lo, hi, ok := Enclose(n)
		fmt.Println(name, "enclose", lo, hi, ok)
		t0 := time.Now()
		r, err := Prove(context.Background(), Problem{Network: n, MaxBoxes: 100000})
		fmt.Println("   ", time.Since(t0), err)
		if err != nil {
			return
		}
		fmt.Println("   ", r)
		for _, x := range r.Roots {
			fmt.Println("      ", x.Point, x.Box[0].Width(), x.Kink, x.Edge)
		}
	}
	show("latch", zoo.Latch(100))
	show("leakless", zoo.LeaklessLatch(0.45, 0.9, 100))
	show("leakless fold", zoo.LeaklessLatch(0.5, 1, 100))
	show("leakless beyond", zoo.LeaklessLatch(0.51, 1, 100))
	show("sym3", zoo.SymmetricRepression(3, 10))
	show("sym1.9", zoo.SymmetricRepression(1.9, 10))
	show("sym2", zoo.SymmetricRepression(2, 10))
	show("schlogl", zoo.Schlogl())
	show("inducible", zoo.InducibleRepression(0, 1))
	show("dimerisation", zoo.Dimerisation())
	show("telegraph", zoo.Telegraph())
	show("birthdeath", zoo.BirthDeath())
	show("chain", zoo.Chain(4, 1, 10))
	show("dimer switch", zoo.DimerSwitch())
}
