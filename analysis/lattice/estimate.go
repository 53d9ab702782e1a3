package lattice

import (
	"context"
	"errors"
	"math"
	"slices"
)

// An Estimate is what a problem would take, found before any elimination.
type Estimate struct {
	// States is the number of lattice states, Nodes the same with bursts under
	// way counted separately.
	States, Nodes int
	Box           Box
	// Bytes is the memory needed, Multiplications the work of one elimination,
	// Seconds its time on one core of a usual machine. No machine is measured: the
	// same problem has the same estimate everywhere, and so has what is chosen by it.
	Bytes           int64
	Seconds         float64
	Multiplications float64
	// Allowed is the memory that the problem may take, in bytes.
	Allowed int64
}

// bytesPerNode is the memory that a node takes besides the factors: its counts,
// transitions and places, about six transitions a node.
const bytesPerNode = 450

// residentShare and residentBase turn bytes in use into resident memory, which
// also holds what the collector has not yet given back: the largest of some
// problems of two and three species was 1.33 times the bytes in use (measured).
const (
	residentShare = 1.4
	residentBase  = 20 << 20
)

// Estimate counts the lattice of the first box, which may have to grow, and
// tells what its elimination takes. Errors are those of Solve.
func (p Problem) Estimate(ctx context.Context) (Estimate, error) {
	if err := p.check(); err != nil {
		return Estimate{}, err
	}
	pl, err := p.lay(ctx, firstBox(&p, firstDeviations))
	if err != nil {
		return Estimate{}, err
	}
	return p.estimate(pl), nil
}

// laid is a plan with the box that it belongs to.
type laid struct {
	*plan
	box Box
}

// lay explores the box and plans its elimination, if memory allows.
func (p *Problem) lay(ctx context.Context, b Box) (*laid, error) {
	p.report("counting states", 0)
	if slices.Max(b.High) >= math.MaxInt32 {
		return nil, p.tooMany(int(min(b.volume(), math.MaxInt64/bytesPerNode/8)), b)
	}
	limit := int(min(float64(p.memory())/p.leastPerNode(), math.MaxInt32-1))
	if n := p.fullStates(b); n > 64*float64(limit) {
		return nil, p.tooMany(int(n/64), b)
	}
	c, err := explore(ctx, p.Network, b, p.starts(), limit)
	if errors.Is(err, errTooMany) {
		return nil, p.tooMany(c.nodes(), b)
	}
	if errors.Is(err, errTooDeep) {
		return nil, &DimensionError{c.rank, p.names(c.long())}
	}
	if err != nil {
		return nil, err
	}
	r, err := findRegions(c, p.Cores)
	if err != nil {
		return nil, err
	}
	p.report("ordering", 0)
	l := &laid{newPlan(c, order(c, r.last), r), b}
	if e := p.estimate(l); e.Bytes > p.memory() {
		return nil, &TooLargeError{Estimate: e, Allowed: p.memory()}
	}
	return l, ctx.Err()
}

// fullStates is the number of states in the box where every species moves by itself:
// but for steps larger than 1 each point is then reached. It is 0 where conserved
// totals tie species together, or more than three move, and the states must be counted.
func (p *Problem) fullStates(b Box) float64 {
	long := make([]bool, len(b.Low))
	count := 0
	for s := range long {
		if long[s] = b.High[s]-b.Low[s] >= few; long[s] {
			count++
		}
	}
	ms, phases := moves(p.Network)
	if count > 3 || dimensions(ms, phases, b, long) < count {
		return 0
	}
	return b.volume()
}

// tooMany refuses a lattice whose states alone do not fit.
func (p *Problem) tooMany(nodes int, b Box) error {
	e := Estimate{States: nodes, Nodes: nodes, Box: b, Bytes: int64(nodes) * bytesPerNode * 4}
	e.Multiplications = 10 * math.Pow(float64(e.Nodes), 1.5)
	e.Seconds = e.Multiplications / usualSpeed
	return &TooLargeError{Estimate: e, Allowed: p.memory(), AtLeast: true}
}

func (p *Problem) names(which []bool) []string {
	var out []string
	for s, yes := range which {
		if yes {
			out = append(out, p.Network.Species[s].Name)
		}
	}
	return out
}

// leastPerNode is the memory in bytes that a node takes besides the factors, with the vectors
// of the solution. More states than fit by it alone need not be counted.
func (p *Problem) leastPerNode() float64 {
	vectors := 8 + 8*len(p.Cores)
	return residentShare * float64(bytesPerNode+8*vectors)
}

func (p *Problem) estimate(l *laid) Estimate {
	return Estimate{
		States: l.states(), Nodes: l.nodes(), Box: l.box,
		Bytes:           residentBase + int64(residentShare*float64(8*(l.numbers+2*l.peak))+float64(l.nodes())*p.leastPerNode()),
		Seconds:         l.work/usualSpeed + float64(l.nodes())*4e-6,
		Multiplications: l.work,
		Allowed:         p.memory(),
	}
}

// usualSpeed is how many multiplications one core of a usual machine does in a second
// of an elimination, whose small fronts run at about 0.4 of the speed of large products
// (measured, on a server of the year 2023).
const usualSpeed = 4e9
