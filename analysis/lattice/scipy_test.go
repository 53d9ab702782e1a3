package lattice

import (
	"encoding/json"
	"math"
	"os"
	"testing"
)

// scipyCase is one entry of testdata/scipy_reference.json, which the script beside
// it wrote with SciPy's sparse LU (versions in the file).
type scipyCase struct {
	Network       string
	Copies        float64
	High          []int64
	Mean          []float64
	End           [][]float64
	ExpectedError []float64 `json:"expected_error"`
}

func (c scipyCase) problem(t *testing.T) Problem {
	p := latchProblem(c.Copies, 1)
	if c.Network == "trio" {
		p = Problem{Network: bind(t, trio(c.Copies), 1), Cores: trioCores()}
	}
	p.Low, p.High, p.Fixed = make([]int64, len(c.High)), c.High, true
	return p
}

// On the same boxes, within ten times what double precision costs SciPy's
// elimination on a nearly singular system, which the file states.
func TestAgainstSciPy(t *testing.T) {
	text, err := os.ReadFile("testdata/scipy_reference.json")
	if err != nil {
		t.Fatal(err)
	}
	var file struct{ Cases []scipyCase }
	if err := json.Unmarshal(text, &file); err != nil {
		t.Fatal(err)
	}
	if len(file.Cases) < 4 {
		t.Fatalf("%d cases, want 4", len(file.Cases))
	}
	for _, c := range file.Cases {
		p := c.problem(t)
		p.MeansOnly = true
		s := solve(t, p)
		for a, want := range c.Mean {
			if relative(s.Mean[a], want) > 10*c.ExpectedError[a] {
				t.Errorf("%s at %v, %s: %v, want %v within %v", c.Network, c.Copies, s.Names[a], s.Mean[a], want, c.ExpectedError[a])
			}
			for b, end := range c.End[a] {
				if math.Abs(s.End[a][b]-end) > 10*c.ExpectedError[a] {
					t.Errorf("%s at %v, %s to %s: %v, want %v", c.Network, c.Copies, s.Names[a], s.Names[b], s.End[a][b], end)
				}
			}
		}
	}
}
