package sde

import (
	"slices"

	"holdfast/model"
)

// A program is a list of operations on registers, each of which holds one number a
// lane. The first registers are the coordinates.
type program struct {
	code      []instruction
	constants []constant
	inputs    []input
	registers int
}

// An input is a register that holds a constant of the network that varies.
type input struct{ constant, register int }

// An instruction puts the value of an operation on registers into a register.
type instruction struct {
	op          opcode
	call        model.Op // for opCall
	to, a, b, c int
	value       float64 // for opPower
}

type opcode uint8

const (
	opAdd opcode = iota
	opSub
	opMul
	opDiv
	opSqrt
	opGuard // NaN below 0
	opCut   // 0 below 0
	opPower // a fixed exponent
	opCall  // model.Apply
)

// A constant is a register that holds the same number in all lanes.
type constant struct {
	register int
	value    float64
}

// A machine runs a program over lanes.
type machine struct {
	*program
	file  []float64 // registers end to end, room lanes each
	room  int
	bound []boundInstruction
}

// A boundInstruction has the registers' lanes in place.
type boundInstruction struct {
	op          opcode
	call        model.Op
	to, a, b, c []float64
	value       float64
}

// newMachine gives a machine with room for lanes, whose number is a multiple of 4.
func newMachine(p *program, room int) *machine {
	m := &machine{program: p, file: make([]float64, p.registers*room), room: room}
	for _, c := range p.constants {
		lanes := m.lanes(c.register, room)
		for i := range lanes {
			lanes[i] = c.value
		}
	}
	m.narrow(room)
	return m
}

// lanes gives the first n lanes of a register.
func (m *machine) lanes(register, n int) []float64 {
	return m.file[register*m.room : register*m.room+n : (register+1)*m.room]
}

// narrow makes the machine run the first n lanes only.
func (m *machine) narrow(n int) {
	m.bound = slices.Grow(m.bound[:0], len(m.code))
	for _, i := range m.code {
		m.bound = append(m.bound, boundInstruction{
			i.op, i.call, m.lanes(i.to, n), m.lanes(i.a, n), m.lanes(i.b, n), m.lanes(i.c, n), i.value,
		})
	}
}

// run evaluates all registers.
func (m *machine) run() {
	for k := range m.bound {
		i := &m.bound[k]
		switch i.op {
		case opAdd:
			addLanes(i.to, i.a, i.b)
		case opSub:
			subLanes(i.to, i.a, i.b)
		case opMul:
			mulLanes(i.to, i.a, i.b)
		case opDiv:
			divLanes(i.to, i.a, i.b)
		case opSqrt:
			sqrtLanes(i.to, i.a)
		case opGuard:
			guardLanes(i.to, i.a)
		case opCut:
			cutLanes(i.to, i.a)
		case opPower:
			powLanes(i.to, i.a, i.value)
		default:
			applyLanes(i.call, i.to, i.a, i.b, i.c)
		}
	}
}
