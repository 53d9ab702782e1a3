package model

import (
	"fmt"
	"strings"
)

// Equation writes what reaction r does: "2 a → a2". Species that it reads and does
// not consume stand in parentheses on the left.
func (n *Network) Equation(r int) string {
	re := &n.Reactions[r]
	var left []string
	for _, t := range re.Uses {
		left = append(left, n.term(t))
	}
	for _, t := range re.Needs {
		left = append(left, "("+n.term(t)+")")
	}
	var right []string
	for _, t := range re.Makes {
		right = append(right, n.term(t))
	}
	return side(left) + " → " + side(right)
}

func side(terms []string) string {
	if len(terms) == 0 {
		return "∅"
	}
	return strings.Join(terms, " + ")
}

func (n *Network) term(t Term) string {
	name := n.Species[t.Species].Name
	switch {
	case t.Burst > 0:
		return fmt.Sprintf("burst of %s, mean %s", name, number(t.Burst))
	case t.Count != 1:
		return fmt.Sprintf("%d %s", t.Count, name)
	}
	return name
}

// LawText writes the law of reaction r with its constants named.
func (n *Network) LawText(r int) string {
	species, constants := n.nameLists()
	return n.Reactions[r].Free.Format(species, constants)
}
