package batch

import (
	"errors"
	"fmt"
	"maps"
	"math"
	"slices"
	"strings"

	"holdfast/internal/stream"
	"holdfast/model"
)

// Points are the points of a batch: every row of the file with every value of every
// axis, the last axis turning fastest, each as often as there are draws.
type Points struct {
	// Names are what differs from point to point: of the file, of the axes, and the
	// constants that are drawn, in that order.
	Names []string

	draft  *model.Draft
	base   Base
	file   *File // nil: none
	axes   []Axis
	draws  int
	drawn  []int // the constants that are drawn, by index
	length int
}

// A Base is what all points share but for what they vary.
type Base struct {
	Copies float64            // 0: the design's
	Set    map[string]float64 // constants by name, instead of the design's
	Seed   uint64             // of the draws, and of all random numbers
}

// A Point is one of them.
type Point struct {
	Number int64 // from 1
	Copies float64
	Draw   int       // from 1; 0: nothing is drawn
	Values []float64 // of Points.Names
}

// NewPoints puts the points of a design together. Unknown names, names that stand twice
// and too many points are errors.
//
// Draws vary each constant whose uncertainty the design states and that neither the
// file nor an axis varies: its value times the exponential of a normal deviate with that
// standard deviation, a stream for each (seed, draw). So draw 7 is the same at every value
// of the axes.
func NewPoints(draft *model.Draft, base Base, file *File, axes []Axis, draws int) (*Points, error) {
	p := &Points{draft: draft, base: base, file: file, axes: axes, draws: draws, length: 1}
	if file != nil {
		p.Names, p.length = slices.Clone(file.Names), file.Rows
	}
	for _, a := range axes {
		p.Names = append(p.Names, a.Name)
		if len(a.Values) > MostPoints/p.length {
			return nil, tooMany()
		}
		p.length *= len(a.Values)
	}
	if err := p.checkNames(); err != nil {
		return nil, err
	}
	if draws == 0 {
		return p, nil
	}
	if draws < 0 || draws > MostPoints/p.length {
		return nil, tooMany()
	}
	p.length *= draws
	return p, p.chooseDrawn()
}

func tooMany() error {
	return fmt.Errorf("too many points: a batch has at most %d; name fewer values, or make several batches", MostPoints)
}

// checkNames sees that the design knows the names, each once.
func (p *Points) checkNames() error {
	for i, name := range p.Names {
		_, set := p.base.Set[name]
		switch {
		case slices.Contains(p.Names[:i], name):
			return fmt.Errorf("%s is varied twice", name)
		case set, name == Copies && p.base.Copies != 0:
			return fmt.Errorf("%s is set for all points and varied as well; leave one out", name)
		case name != Copies && !p.hasConstant(name):
			return p.unknown(name, Copies)
		}
	}
	for _, name := range slices.Sorted(maps.Keys(p.base.Set)) {
		if !p.hasConstant(name) {
			return p.unknown(name)
		}
	}
	return nil
}

// unknown says that there is no such name, and which there are.
func (p *Points) unknown(name string, more ...string) error {
	names := more
	for _, c := range p.draft.Constants {
		names = append(names, c.Name)
	}
	return fmt.Errorf("no constant is called %q: %s", name, model.NameHint(name, names))
}

func (p *Points) hasConstant(name string) bool { return p.constant(name) >= 0 }

func (p *Points) constant(name string) int {
	return slices.IndexFunc(p.draft.Constants, func(c model.Constant) bool { return c.Name == name })
}

// chooseDrawn lists the constants that are drawn.
func (p *Points) chooseDrawn() error {
	for i, c := range p.draft.Constants {
		if c.Uncertainty > 0 && !slices.Contains(p.Names, c.Name) {
			p.drawn = append(p.drawn, i)
		}
	}
	for _, i := range p.drawn {
		p.Names = append(p.Names, p.draft.Constants[i].Name)
	}
	if p.drawn == nil {
		return errors.New("there is nothing to draw: no constant, but for those varied, has an uncertainty; write it in the design: a = { value = 0.45, uncertainty = 0.1 }")
	}
	return nil
}

// Len is the number of points.
func (p *Points) Len() int { return p.length }

// At gives a point by its index, which is its number less 1.
func (p *Points) At(i int) Point {
	out := Point{Number: int64(i) + 1, Copies: p.base.Copies, Values: make([]float64, 0, len(p.Names))}
	draw := 0
	if p.draws > 0 {
		draw, i = i%p.draws, i/p.draws
		out.Draw = draw + 1
	}
	turn := make([]float64, len(p.axes))
	for k := len(p.axes) - 1; k >= 0; k-- {
		values := p.axes[k].Values
		turn[k], i = values[i%len(values)], i/len(values)
	}
	if p.file != nil {
		out.Values = append(out.Values, p.file.row(i)...)
	}
	out.Values = append(out.Values, turn...)
	if k := slices.Index(p.Names, Copies); k >= 0 {
		out.Copies = out.Values[k]
	}
	if out.Copies == 0 {
		out.Copies = p.draft.Copies
	}
	out.Values = p.appendDrawn(out.Values, draw)
	return out
}

// drawPoint marks the streams of draws among those of the same seed: no point of a batch
// has so high a number.
const drawPoint = 1 << 63

func (p *Points) appendDrawn(values []float64, draw int) []float64 {
	if p.drawn == nil {
		return values
	}
	s := stream.New(p.base.Seed, drawPoint|uint64(draw), 0)
	for i := range p.draft.Constants {
		c := &p.draft.Constants[i]
		if c.Uncertainty == 0 {
			continue
		}
		z := s.Normal() // also for a constant that is varied, so that others do not depend on that
		if slices.Contains(p.drawn, i) {
			values = append(values, readable(p.median(c)*math.Exp(c.Uncertainty*z)))
		}
	}
	return values
}

// median is the value that a constant is drawn about.
func (p *Points) median(c *model.Constant) float64 {
	if v, ok := p.base.Set[c.Name]; ok {
		return v
	}
	return c.Value
}

// Bind gives the network of a point.
func (p *Points) Bind(at Point) (*model.Network, error) {
	set := maps.Clone(p.base.Set)
	if set == nil {
		set = map[string]float64{}
	}
	for i, name := range p.Names {
		if name != Copies {
			set[name] = at.Values[i]
		}
	}
	return p.draft.Bind(at.Copies, set)
}

// settings describe the points for the identity of the batch.
func (p *Points) settings() []Setting {
	var out []Setting
	if p.base.Copies != 0 {
		out = append(out, Setting{"copies", number(p.base.Copies)})
	}
	for _, name := range slices.Sorted(maps.Keys(p.base.Set)) {
		out = append(out, Setting{"with " + name, number(p.base.Set[name])})
	}
	if p.file != nil {
		out = append(out, Setting{"points", fmt.Sprintf("%d of %s (SHA-256 of the values %s)", p.file.Rows, strings.Join(p.file.Names, ", "), p.file.digest()[:12])})
	}
	for _, a := range p.axes {
		out = append(out, Setting{"vary " + a.Name, strings.TrimPrefix(a.Text, a.Name+"=")})
	}
	if p.draws > 0 {
		out = append(out, Setting{"draw", fmt.Sprint(p.draws)})
	}
	return out
}
