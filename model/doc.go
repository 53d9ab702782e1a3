// Package model holds reaction networks: species, constants, reactions, rate
// laws, and the design files that state them.
//
// A design file becomes a Draft, and a Draft bound to values of its constants
// and of copies becomes a Network, which is immutable. Rate laws are in amounts;
// copies (Ω) is the number of molecules in one unit of amount.
package model
