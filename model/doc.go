// Package model holds reaction networks: species, constants, reactions, rate
// laws, and the design files that state them.
//
// Load or Parse reads a design file into a Draft; Bind gives its constants and
// copies their values and makes a Network, which is immutable and safe for
// concurrent use. Rate laws are in amounts; copies (Ω) is the number of molecules
// in one unit of amount, so that the propensity of a reaction is Ω v(n/Ω) at
// counts n. Reactions that change a species of fixed count, such as an operator
// site, have the propensity v instead.
//
// A rate law is a tree of Nodes, for those who walk it, and a Program, for those
// who evaluate it often. Derivatives are exact, by automatic differentiation.
//
// From the reactions alone a Network tells its conserved totals, its absorbing
// states and what is worth a look; Describe writes all of it.
//
// # Formulas
//
// A formula has decimal numbers, the names of species and constants, parentheses,
// + − * / and ^ (power: binds tightest, from right to left, and before a sign, so
// that −x^2 is −(x^2)), and the functions exp, log (natural), sqrt, min and max of
// two or more, abs, hill(x, half, n) = xⁿ/(halfⁿ+xⁿ) and its falling twin
// hill_fall(x, half, n) = halfⁿ/(halfⁿ+xⁿ).
package model
