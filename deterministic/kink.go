package deterministic

import (
	"fmt"

	"holdfast/model"
)

// atKink is the difference of what a min, max or abs chooses between, relative to
// their size, below which a point counts as lying at the kink.
const atKink = 1e-9

// kinkAt says which law has no derivative at x, because a min, max or abs changes
// over there; "" where none does.
func (m *Map) kinkAt(x []float64) string {
	for i := range m.Network.Reactions {
		r := &m.Network.Reactions[i]
		text := ""
		r.Law.Walk(func(n *model.Node) {
			if text == "" && changesOver(n, x) {
				text = fmt.Sprintf("the law of reaction %q has no derivative there, at the kink of %s", r.Name, n.Format(speciesNames(m.Network), nil))
			}
		})
		if text != "" {
			return text
		}
	}
	return ""
}

// changesOver tells whether the node is a min, max or abs at its kink.
func changesOver(n *model.Node, x []float64) bool {
	switch n.Op {
	case model.OpMin, model.OpMax:
		a, b := n.Args[0].Eval(x, nil), n.Args[1].Eval(x, nil)
		return abs(a-b) <= atKink*(abs(a)+abs(b))
	case model.OpAbs:
		slope := make([]float64, len(x))
		a, size := n.Args[0].Gradient(x, nil, slope, nil), 0.0
		for i, s := range slope {
			size += abs(s * x[i])
		}
		return abs(a) <= atKink*size
	}
	return false
}
