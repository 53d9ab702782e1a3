// Package lattice solves the chemical master equation of a switch on its
// lattice of counts: mean dwell times, where a dwell ends, quasi-stationary laws
// and escape rates, committors, the stationary law and the relaxation time, to
// near machine precision however rare a flip is.
//
// The generator on a box is eliminated without a subtraction (Grassmann, Taksar,
// Heyman, Oper. Res. 33 (1985) 1107; O'Cinneide, Numer. Math. 65 (1993) 109), so
// that the relative accuracy of a dwell time of 1e200 is that of one of 1; in a
// nested-dissection order of the lattice (George, SIAM J. Numer. Anal. 10 (1973)
// 345), with dense fronts (Duff and Reid, ACM Trans. Math. Softw. 9 (1983) 302).
// The box grows until a bound on what leaving it can change is below what is
// asked (finite state projection: Munsky and Khammash, J. Chem. Phys. 124 (2006)
// 044104).
//
// One elimination serves every state and direction: the lattice points at which
// cores can be entered, and the starts, are eliminated last.
package lattice
