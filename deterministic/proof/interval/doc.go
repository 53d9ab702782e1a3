// Package interval is arithmetic on closed intervals of real numbers with outward
// rounding: the result of every operation holds every value that the operation
// takes on real numbers of its arguments.
//
// The four operations and the square root round in the right direction by an
// error-free transformation: the exact rounding error, or its sign, is found in
// floating point (Dekker, Numer. Math. 18 (1971) 224; Ogita, Rump, Oishi, SIAM J.
// Sci. Comput. 26 (2005) 1955), and the bound is moved to the next floating-point
// number only where the error has the wrong sign. So an operation on numbers whose
// result is a floating-point number gives that number alone.
//
// The exponential, the logarithm and powers do not trust the library's functions,
// which are not rounded correctly. They are worked out in pairs of floating-point
// numbers, about 106 bits, with a proven bound of the error; see doubled.go.
//
// Intervals and their operations: Moore, Kearfott, Cloud, Introduction to Interval
// Analysis, SIAM 2009.
package interval
