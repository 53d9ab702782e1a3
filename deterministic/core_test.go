package deterministic

import (
	"context"
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"holdfast/internal/zoo"
	"holdfast/model"
)

// checkCores checks what holds of all cores: they hold their start, which keeps the
// totals; they hold no lattice point of another's bounds or near a saddle; and
// points outside Low and High are outside the shape.
func checkCores(t *testing.T, m *Map) {
	t.Helper()
	for i := range m.Cores {
		c := &m.Cores[i]
		if c.State != m.States[i].Name || !c.Contains(c.Start) {
			t.Errorf("core %d of %s: start %v is not inside", i, c.State, c.Start)
		}
		for _, total := range m.Totals {
			sum := int64(0)
			for k, w := range total.Weights {
				sum += w * c.Start[k]
			}
			if sum != total.Value {
				t.Errorf("%s: start %v has total %d, want %d", c.State, c.Start, sum, total.Value)
			}
		}
		for j := range m.Cores {
			if j != i && m.Cores[j].Contains(c.Start) {
				t.Errorf("core %s holds the start of %s", m.Cores[j].State, c.State)
			}
		}
	}
}

// shared finds a lattice point that two cores of a network of two species have in
// common.
func shared(a, b *model.Core) []int64 {
	for x := a.Low[0]; x <= a.High[0]; x++ {
		for y := a.Low[1]; y <= a.High[1]; y++ {
			if p := []int64{x, y}; a.Contains(p) && b.Contains(p) {
				return p
			}
		}
	}
	return nil
}

func TestCores(t *testing.T) {
	nets := []*model.Network{
		zoo.Latch(100), zoo.Latch(10), zoo.LeaklessLatch(0.45, 0.9, 100), zoo.LeaklessLatch(0.49999, 1, 1000),
		zoo.SymmetricRepression(2.01, 1000), zoo.SymmetricRepression(3, 20), zoo.InducibleRepression(0, 1),
		zoo.InducibleRepression(3.92e-5, 1),
	}
	for k, n := range nets {
		m := survey(t, n)
		checkCores(t, m)
		if p := shared(&m.Cores[0], &m.Cores[1]); p != nil {
			t.Errorf("network %d: both cores hold %v", k, p)
		}
		for i := range m.Cores {
			checkBounds(t, &m.Cores[i])
			for _, s := range m.States[len(m.Cores):] {
				if mahalanobis(&m.Cores[i], s.Molecules) <= 1 {
					t.Errorf("network %d: core %s holds %s", k, m.Cores[i].State, s.Name)
				}
			}
		}
	}
}

// checkBounds checks that no point just outside the bounds is inside the shape.
func checkBounds(t *testing.T, c *model.Core) {
	t.Helper()
	for x := c.Low[0] - 1; x <= c.High[0]+1; x++ {
		for y := c.Low[1] - 1; y <= c.High[1]+1; y++ {
			outside := x < c.Low[0] || x > c.High[0] || y < c.Low[1] || y > c.High[1]
			if p := []float64{float64(x), float64(y)}; outside && x >= 0 && y >= 0 && c.Shape != nil && mahalanobis(c, p) <= 1 {
				t.Errorf("core %s: %v is inside the shape but not the bounds", c.State, p)
			}
		}
	}
}

// mahalanobis is the quadratic form of a core at a point.
func mahalanobis(c *model.Core, p []float64) float64 {
	if c.Shape == nil {
		return math.Inf(1)
	}
	n, q := len(p), 0.0
	for i := range n {
		for j := range n {
			q += (p[i] - c.Center[i]) * c.Shape[i*n+j] * (p[j] - c.Center[j])
		}
	}
	return q
}

// TestCoreShare: for one species the core is one standard deviation either way; in
// two dimensions it holds as large a share, −2 ln(1−0.6827) = 2.2957 squared
// standard deviations (the exponential law of the squared radius).
func TestCoreShare(t *testing.T) {
	c := survey(t, zoo.ImmigrationDeath(10, 0.1)).Cores[0] // Poisson, mean 100
	if c.Low[0] != 90 || c.High[0] != 110 || c.Start[0] != 100 {
		t.Errorf("core %d to %d from %d, want 90 to 110 from 100", c.Low[0], c.High[0], c.Start[0])
	}
	near(t, "squared radius in two dimensions", math.Pow(coreRadius(0, 2), 2), -2*math.Log(1-oneDeviation), 1e-12)
	m, _ := Survey(context.Background(), zoo.ImmigrationDeath(10, 0.1), Options{CoreShare: 0.95})
	// 1.95996 deviations (normal quantile).
	if c := m.Cores[0]; c.Low[0] != 81 || c.High[0] != 119 {
		t.Errorf("core of 95 %%: %d to %d, want 81 to 119", c.Low[0], c.High[0])
	}
}

// TestCoreOperator: an operator of one copy has its most frequent vertex in the
// core, and the shape agrees with the covariance along the class.
func TestCoreOperator(t *testing.T) {
	m := survey(t, zoo.DimerSwitch())
	checkCores(t, m)
	low := m.Cores[0] // readout b: a is high, the operator is at oa2
	if low.Start[5] != 1 || low.Start[4]+low.Start[6]+low.Start[7] != 0 {
		t.Errorf("the operator starts at %v", low.Start[4:])
	}
	// For a vector v = C w in the class, vᵀ C⁺ v = wᵀ C w.
	const n = 8
	cov := m.States[0].Covariance
	w := []float64{1, -2, 0.5, 3, 1, 2, 3, -1}
	v := make([]float64, n)
	want := 0.0
	for i := range n {
		for j := range n {
			v[i] += cov[i*n+j] * w[j]
		}
		want += w[i] * v[i]
	}
	radius := coreRadius(0, 7)
	p := make([]float64, n)
	for i := range n {
		p[i] = low.Center[i] + v[i]
	}
	got := mahalanobis(&low, p)
	if got*radius*radius < want*(1-1e-9) {
		t.Errorf("form %g, want %g or more (a shrunk core)", got*radius*radius, want)
	}
}

// TestCoreAbsorbing: with no noise at all the core is the lattice point.
func TestCoreAbsorbing(t *testing.T) {
	c := survey(t, zoo.LeaklessLatch(0.45, 0.9, 100)).Cores[0]
	for _, p := range [][]int64{{1, 0}, {0, 1}} {
		if c.Contains(p) {
			t.Errorf("the core of 0 holds %v", p)
		}
	}
	if !c.Contains([]int64{0, 0}) {
		t.Error("the core of 0 does not hold it")
	}
}

// TestIndistinct: at one copy both states of a weak switch fall on one lattice
// point; the map comes with the error.
func TestIndistinct(t *testing.T) {
	m, err := Survey(context.Background(), zoo.SymmetricRepression(2.01, 1), Options{})
	var same *IndistinctError
	if !errors.As(err, &same) || m == nil || len(m.Cores) != 2 {
		t.Fatalf("map %v, error %v", m, err)
	}
	if !strings.Contains(err.Error(), "not distinguishable at this copy number") {
		t.Errorf("message %q", err)
	}
}

// declare gives the network with declared cores.
func declare(n *model.Network, cores ...model.DeclaredCore) *model.Network {
	n.Declared = cores
	return n
}

func atLeast(state string, species int, low int64) model.DeclaredCore {
	return model.DeclaredCore{State: state, Ranges: []model.Range{{Species: species, Min: low, Max: math.MaxInt64}}}
}

func atMost(state string, species int, high int64) model.DeclaredCore {
	return model.DeclaredCore{State: state, Ranges: []model.Range{{Species: species, Min: 0, Max: high}}}
}

// TestDeclaredReplaces: a declared core takes the place of a state's own.
func TestDeclaredReplaces(t *testing.T) {
	m := survey(t, declare(zoo.Latch(100), atLeast("high", 1, 150)))
	c := m.Cores[1]
	if c.State != "high" || c.Low[1] != 150 || c.High[1] != math.MaxInt64 || c.Low[0] != 0 || c.Shape != nil {
		t.Fatalf("core %+v", c)
	}
	if !slices.Equal(c.Start, []int64{76, 169}) {
		t.Errorf("start %v, want the nearest to the state, [76 169]", c.Start)
	}
	m = survey(t, declare(zoo.Latch(100), atLeast("high", 1, 200)))
	if got := m.Cores[1].Start; !slices.Equal(got, []int64{76, 200}) {
		t.Errorf("start %v, want [76 200]", got)
	}
	if len(m.States) != 3 {
		t.Errorf("%d states, want 3", len(m.States))
	}
}

// TestDeclaredAdds: a declared core of another name is a state of its own, so that
// a one-state design can be held against a first-passage time.
func TestDeclaredAdds(t *testing.T) {
	m, err := Survey(context.Background(), declare(zoo.ImmigrationDeath(1, 0.1), atLeast("target", 0, 19)), Options{})
	if err != nil {
		t.Fatal(err)
	}
	if len(m.Stable()) != 2 || m.States[1].Name != "target" || m.States[1].Kind != Declared {
		t.Fatalf("states %+v", m.States)
	}
	if got := m.Cores[1].Start; got[0] != 19 {
		t.Errorf("start %v, want 19", got)
	}
	checkCores(t, m)
	if own := m.Cores[0]; own.High[0] >= 19 {
		t.Errorf("the state's own core reaches to %d", own.High[0])
	}
	if state, err := m.Basin([]float64{25}); state != 0 || err != nil {
		t.Errorf("basin of 25: %d, %v", state, err)
	}
}

// TestDeclaredAlone: two declared cores of which one is no stable state's are all
// the states: start and target of a passage, or the two ends of a chain whose rate
// equations rest in between. The resting state keeps its basin.
func TestDeclaredAlone(t *testing.T) {
	m, err := Survey(context.Background(), declare(zoo.ImmigrationDeath(1, 0.1), atMost("start", 0, 0), atLeast("target", 0, 19)), Options{})
	if err != nil {
		t.Fatal(err)
	}
	if len(m.Stable()) != 2 || m.Cores[0].State != "start" || m.Cores[1].State != "target" || m.States[2].Name != "only" {
		t.Fatalf("cores %+v", m.Cores)
	}
	if state, err := m.Basin([]float64{25}); state != 2 || err != nil {
		t.Errorf("basin of 25: %d, %v", state, err)
	}
	m, err = Survey(context.Background(), declare(zoo.TwoStateChain(1, 2), atMost("low", 1, 0), atLeast("high", 1, 1)), Options{})
	if err != nil {
		t.Fatal(err)
	}
	if !slices.Equal(m.Cores[0].Start, []int64{1, 0}) || !slices.Equal(m.Cores[1].Start, []int64{0, 1}) {
		t.Errorf("starts %v, %v", m.Cores[0].Start, m.Cores[1].Start)
	}
}

// TestDeclaredShrinksOwn: a state's own core gives way to a declared one.
func TestDeclaredShrinksOwn(t *testing.T) {
	m := survey(t, declare(zoo.ImmigrationDeath(10, 0.1), atLeast("target", 0, 105)))
	if c := m.Cores[0]; c.High[0] >= 105 || !c.Contains([]int64{100}) {
		t.Errorf("own core %d to %d", c.Low[0], c.High[0])
	}
}

// TestDeclaredTotals: the start of a declared core keeps the totals, P + 2 P2 = 100.
func TestDeclaredTotals(t *testing.T) {
	m := survey(t, declare(zoo.Dimerisation(), atLeast("apart", 0, 61)))
	if got := m.Cores[1].Start; got[0]+2*got[1] != 100 || got[0] < 61 {
		t.Errorf("start %v", got)
	}
}

func TestDeclaredErrors(t *testing.T) {
	cases := map[string]*model.Network{
		"overlaps":                 declare(zoo.ImmigrationDeath(1, 0.1), atLeast("up", 0, 15), atLeast("far", 0, 19)),
		"hold the resting state":   declare(zoo.ImmigrationDeath(1, 0.1), atMost("down", 0, 12)),
		"no counts within":         declare(zoo.Dimerisation(), atLeast("many", 1, 51)),
		"no counts within its ran": declare(zoo.Dimerisation(), model.DeclaredCore{State: "odd", Ranges: []model.Range{{Species: 0, Min: 33, Max: 33}}}),
	}
	for want, n := range cases {
		_, err := Survey(context.Background(), n, Options{})
		var core *CoreError
		if !errors.As(err, &core) || !strings.Contains(err.Error(), want) {
			t.Errorf("%q: error %v", want, err)
		}
	}
}
