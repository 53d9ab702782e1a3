// Package zoo holds one set of test networks whose states, laws or passage
// times are known from outside the project, shared by the tests of every engine.
//
// Each function returns a fresh network; the known values stand beside it as
// functions of their own, each with its source. "Published" values were seen in
// the named source; "computed" ones were worked out from the stated model by an
// independent method (tridiagonal recursion in 40-digit arithmetic, a matrix
// exponential, a sparse eigenvector, or quadrature); "from memory" means that the
// attribution was not looked up.
//
// The package serves tests only: a parameter that makes no network (a negative
// constant, say) panics.
package zoo
