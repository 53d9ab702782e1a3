// Package sizing finds how a design must be set to hold its states as long as asked:
// the smallest copy number that meets a specification, or the setting of one constant
// nearest to today's that does, with the window of such settings.
//
// The search is for a root of the margin, ln(found/asked), which is nearly linear in
// copies (τ ≈ C·exp(ΩS)) and smooth in a constant up to the fold: outward steps by the
// secant find a setting on either side, and a bracketing method that keeps the worst
// case of bisection narrows it (ITP: Oliveira and Takahashi, ACM Trans. Math. Softw. 47
// (2021) 5). Each evaluation is one job of package hold, by whatever route that takes.
//
// Where dwell times are sampled, the answer is an interval: from the smallest setting
// that may meet the specification to the smallest that surely does, as far as the 95 %
// limits of the evaluations tell. Dwell times need not grow with copies or with a
// constant; neighbours of the answer are evaluated, and what contradicts it is reported.
package sizing
