package deterministic

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"holdfast/model"
)

// nameStates gives every state its name.
func (m *Map) nameStates() {
	stable := countKind(m.States, Kind.Stable)
	saddles := countKind(m.States, func(k Kind) bool { return k == Saddle })
	next := map[Kind]int{}
	for i := range m.States {
		s := &m.States[i]
		switch {
		case s.Kind.Stable():
			s.Name = stableName(i, stable)
		case s.Kind == Saddle && saddles == 1:
			s.Name = "saddle"
		default:
			next[s.Kind]++
			s.Name = fmt.Sprintf("%v%d", s.Kind, next[s.Kind])
		}
	}
}

func stableName(i, count int) string {
	switch count {
	case 1:
		return "only"
	case 2:
		return [...]string{"low", "high"}[i]
	case 3:
		return [...]string{"low", "middle", "high"}[i]
	}
	return fmt.Sprintf("level%d", i+1)
}

// IsStableName tells whether a stable state may be called so in a design that gives it no
// name itself: only; low, high; low, middle, high; level1, level2 and so on.
func IsStableName(name string) bool {
	for count := 1; count <= 3; count++ {
		for i := range count {
			if name == stableName(i, count) {
				return true
			}
		}
	}
	level, err := strconv.Atoi(strings.TrimPrefix(name, "level"))
	return err == nil && level >= 1 && name == stableName(level-1, math.MaxInt)
}

func countKind(list []State, is func(Kind) bool) int {
	n := 0
	for i := range list {
		if is(list[i].Kind) {
			n++
		}
	}
	return n
}

// speciesNames lists the names in order.
func speciesNames(n *model.Network) []string {
	out := make([]string, len(n.Species))
	for i, s := range n.Species {
		out[i] = s.Name
	}
	return out
}
