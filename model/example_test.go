package model_test

import (
	"fmt"
	"os"

	"holdfast/model"
)

// A design is parsed, bound to numbers, and asked for a propensity.
func Example() {
	text := `
title  = "self-activating gene"
time   = "min"
copies = 50

[species]
protein = { start = 0.2 }

[constants]
leak = 0.05

[[reaction]]
name  = "make"
makes = { protein = 1 }
rate  = "leak + hill(protein, 1, 2)"

[[reaction]]
name = "lose"
uses = { protein = 1 }
mass_action = 0.5
`
	draft, err := model.Parse("gene.toml", []byte(text))
	if err != nil {
		fmt.Println(err)
		return
	}
	network, err := draft.Bind(0, map[string]float64{"leak": 0.1})
	if err != nil {
		fmt.Println(err)
		return
	}
	counts := network.StartCounts()
	for r := range network.Reactions {
		fmt.Printf("%s: %s, %.4g per min\n", network.Equation(r), network.LawText(r), network.Propensity(r, counts))
	}
	// Output:
	// ∅ → protein: leak + hill(protein, 1, 2), 6.923 per min
	// protein → ∅: 0.5*protein, 5 per min
}

// Every error of a file comes at once, with its place and what to type.
func ExampleParse_errors() {
	text := "time = \"min\"\n[species]\nx = { start = -1 }\n" +
		"[[reaction]]\nname = \"make\"\nmakes = { x = 1 }\nrate = \"1 + xx\"\n"
	_, err := model.Parse("bad.toml", []byte(text))
	fmt.Println(err)
	// Output:
	// bad.toml:3:15: start = -1 is not allowed
	//     x = { start = -1 }
	//                   ^
	//     it must be a finite number, not below 0
	//
	// bad.toml:7:13: no species or constant is called "xx"
	//     rate = "1 + xx"
	//                 ^
	//     did you mean "x"? Allowed here: x
}

// Describe writes what a designer would check.
func ExampleNetwork_Describe() {
	draft, err := model.Parse("", []byte("time = \"h\"\ngeneration = 2\n[species]\na = { start = 3 }\nb = {}\n"+
		"[[reaction]]\nname = \"turn\"\nuses = { a = 1 }\nmakes = { b = 1 }\nmass_action = 2\n"))
	if err != nil {
		fmt.Println(err)
		return
	}
	draft.File, draft.Notes = "", nil
	network, err := draft.Bind(0, nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	if err := network.Describe(os.Stdout); err != nil {
		fmt.Println(err)
	}
	// Output:
	// a network without a title
	//
	//   time        h, the unit of every rate
	//   generation  2 h
	//   copies      1, so that amounts are molecules
	//
	// Species
	//   name  start  molecules at the start  scales with copies
	//   a     3      3                       yes                 readout
	//   b     0      0                       yes
	//
	// Constants: none
	//
	// Reactions
	//      name  change  law  propensity at the start
	//   1  turn  a → b   2*a  6 per h
	//
	// Conserved totals
	//   a + b = 3 molecules
	//
	// Absorbing states
	//   with no a left, nothing can happen any more: this state is never left
	//
	// Warnings
	//   a is used up and never made: it can only run out
	//   b is made and never used up: it can only grow
}
