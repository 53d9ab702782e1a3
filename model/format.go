package model

import (
	"strconv"
	"strings"
)

// opName is how op is written in a formula; empty for leaves.
func opName(op Op) string {
	return [...]string{
		OpAdd: "+", OpSub: "-", OpMul: "*", OpDiv: "/", OpPow: "^", OpNeg: "-",
		OpExp: "exp", OpLog: "log", OpSqrt: "sqrt", OpMin: "min", OpMax: "max", OpAbs: "abs",
		OpHill: "hill", OpHillFall: "hill_fall",
	}[op]
}

// binding is how tightly an operator holds its operands; leaves and functions
// hold tightest.
func binding(op Op) int {
	switch op {
	case OpAdd, OpSub:
		return 1
	case OpMul, OpDiv:
		return 2
	case OpNeg:
		return 3
	case OpPow:
		return 4
	}
	return 5
}

// Format writes the tree in the formula syntax of design files, with the given
// names of species and constants and no more parentheses than it needs. Parsing
// what it writes gives the same tree.
func (n *Node) Format(species, constants []string) string {
	f := formatter{species: species, constants: constants}
	f.write(n)
	return f.b.String()
}

type formatter struct {
	b                  strings.Builder
	species, constants []string
}

func (f *formatter) write(n *Node) {
	switch n.Op {
	case OpNumber:
		f.b.WriteString(strconv.FormatFloat(n.Value, 'g', -1, 64))
	case OpSpecies:
		f.b.WriteString(f.species[n.Index])
	case OpConstant:
		f.b.WriteString(f.constants[n.Index])
	case OpNeg:
		f.b.WriteByte('-')
		f.operand(n.Args[0], binding(OpNeg))
	case OpAdd, OpSub, OpMul, OpDiv, OpPow:
		f.infix(n)
	default:
		f.call(n)
	}
}

// infix writes an operator between its operands; sums are set wide.
func (f *formatter) infix(n *Node) {
	hold := binding(n.Op)
	left, right := hold, hold+1
	if n.Op == OpPow { // from right to left
		left, right = hold+1, binding(OpNeg)
	}
	f.operand(n.Args[0], left)
	if hold == 1 {
		f.b.WriteString(" " + opName(n.Op) + " ")
	} else {
		f.b.WriteString(opName(n.Op))
	}
	f.operand(n.Args[1], right)
}

// operand puts parentheses around what holds less tightly than least.
func (f *formatter) operand(n *Node, least int) {
	hold := binding(n.Op)
	if n.Op == OpNumber && (n.Value < 0 || strconv.FormatFloat(n.Value, 'g', -1, 64)[0] == '-') {
		hold = binding(OpNeg)
	}
	if hold >= least {
		f.write(n)
		return
	}
	f.b.WriteByte('(')
	f.write(n)
	f.b.WriteByte(')')
}

func (f *formatter) call(n *Node) {
	f.b.WriteString(opName(n.Op) + "(")
	for i, a := range n.Args {
		if i > 0 {
			f.b.WriteString(", ")
		}
		f.write(a)
	}
	f.b.WriteByte(')')
}
