// Package separatrix tells which basin a point belongs to: it traces the boundary
// between the basins of two stable states where the compatibility class has two
// dimensions, measures the share of the box that each basin fills in any number of
// dimensions, and labels the lattice of molecule counts for the engines.
package separatrix
