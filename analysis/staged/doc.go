// Package staged finds how often a rare flip happens by splitting exact runs into
// stages.
//
// A run that has left the core of a state A hardly ever gets to the core of
// another, B. So the way is divided by rungs: the rate at which runs that come out of
// A's core meet the first rung is counted, and from states met there new runs are
// made to the next rung or back, and so on. The rate of A→B is the flux out of the
// core times the product of the stages' chances (Allen, Warren, ten Wolde, Phys. Rev.
// Lett. 94 (2005) 018104; the rungs are placed as in Cérou, Guyader, Stoch. Anal.
// Appl. 25 (2007) 417).
//
// What is estimated is the project's own hold time, to the letter. Think of a cell
// that is put back to the start of A whenever it enters another core: its dwells
// follow each other, so the mean dwell is one over the rate at which they end, and that
// rate is the flux at which this cell meets the first rung after it was in A's core,
// times the chance that it goes on to another core before it is in A's core again. Both
// are those of the cell's steady state. Nothing in this asks that flips be rare.
// The runs of the first stage are put back in the same way, and watched only after
// many relaxation times.
//
// Rungs, their numbers of runs and the number of repeats are fixed by pilots that are
// then forgotten, so that the estimate is without bias, whatever the rungs: those of a
// bad coordinate cost time. The interval comes from the spread of independent repeats.
package staged
