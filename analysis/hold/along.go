package hold

import (
	"context"
	"errors"
	"fmt"

	"holdfast/analysis/action"
	"holdfast/analysis/staged"
	"holdfast/model"
)

// What progress of staged runs can be measured along, besides the count of a species.
const (
	// AlongPath is the path of least action, where there is one.
	AlongPath = "path"
	// AlongLine is the straight line between the two states.
	AlongLine = "line"
)

// checkAlong tells whether progress can be measured as asked.
func (o *Options) checkAlong(n *model.Network) error {
	if o.Along == "" {
		return nil
	}
	if o.Route != Staged && o.Second != Staged {
		return &OptionError{"along", fmt.Sprintf("%q", o.Along), "left out but for staged runs (--route staged): no other route measures progress"}
	}
	if o.Along == AlongPath || o.Along == AlongLine || n.SpeciesIndex(o.Along) >= 0 {
		return nil
	}
	names := append([]string{AlongPath, AlongLine}, speciesNames(n)...)
	return &OptionError{"along", fmt.Sprintf("%q", o.Along), "path, line or a species; " + model.NameHint(o.Along, names)}
}

// along gives what progress from one state to another is measured along.
func (r *stagedJob) along(ctx context.Context, from, to int) (staged.Coordinate, error) {
	states := r.survey.Stable()
	a, b := &states[from], &states[to]
	line := staged.Line(a.Molecules, b.Molecules, a.Covariance)
	switch along := r.options.Along; {
	case along == AlongLine:
		return line, nil
	case along != "" && along != AlongPath:
		return staged.Count(a.Molecules, b.Molecules, r.network.SpeciesIndex(along), along)
	}
	path, err := r.leastAction(ctx, a.Name, b.Name)
	if ctx.Err() != nil {
		return line, context.Cause(ctx)
	}
	if err != nil {
		line.Name += ", since " + err.Error()
		return line, nil
	}
	return path, nil
}

// leastAction gives the path of least action between two states in molecules.
func (r *stagedJob) leastAction(ctx context.Context, from, to string) (staged.Coordinate, error) {
	if r.ways == nil && r.noWays == nil {
		r.ways, r.noWays = action.Survey(ctx, r.survey, action.Options{Tolerance: pathTolerance})
	}
	if r.noWays != nil {
		var fixed *action.FixedNoiseError
		if errors.As(r.noWays, &fixed) {
			return staged.Coordinate{}, fmt.Errorf("there is no path of least action where a reaction (%s) changes a species of fixed count (%s)", fixed.Reaction, fixed.Species)
		}
		return staged.Coordinate{}, r.noWays
	}
	pair := r.ways.Find(from, to)
	if pair == nil || len(pair.Paths) == 0 {
		return staged.Coordinate{}, errors.New("no saddle joins the two")
	}
	if n := r.rivals(pair); n > 1 {
		return staged.Coordinate{}, fmt.Errorf("%d saddles join the two at nearly the same action, and a path over one leads past the others", n)
	}
	return r.molecules(pair.Paths[0])
}

// rivalCost is by how much the action of a path, times the copies, may be above that of the
// cheapest one for it to count: e⁻⁹ is less than any precision that can be asked.
const rivalCost = 9

// rivals counts the paths of a pair that flips may take. Rungs at right angles to one of
// several sort out the runs that go by the others, and no repeat then sees them.
func (r *stagedJob) rivals(pair *action.Pair) int {
	n := 0
	for _, p := range pair.Paths {
		if (p.S-pair.Paths[0].S)*r.network.Copies < rivalCost {
			n++
		}
	}
	return n
}

// pathTolerance is the relative error of the action up to which a path is found:
// it serves to place rungs only.
const pathTolerance = 1e-3

// molecules turns a path in amounts up to its summit into one in molecules; momenta
// belong to amounts, so theirs are divided by the unit.
func (r *stagedJob) molecules(p *action.Path) (staged.Coordinate, error) {
	var points, directions [][]float64
	moves := false
	for k := range p.Points[:p.Summit+1] {
		point, direction := make([]float64, len(p.Points[k])), make([]float64, len(p.Points[k]))
		for i := range point {
			point[i] = p.Points[k][i] * r.network.Unit(i)
			direction[i] = p.Momenta[k][i] / r.network.Unit(i) * r.network.Copies
			moves = moves || direction[i] != 0
		}
		points, directions = append(points, point), append(directions, direction)
	}
	if !moves {
		return staged.Coordinate{}, errors.New("the path of least action has no direction")
	}
	return staged.Path("the path of least action", points, directions), nil
}
