// Package proof proves that a list of resting states is complete.
//
// Prove searches a box of amounts, on the network's conserved totals, by interval
// branch and prune. Rate laws are evaluated on boxes with outward rounding (package
// interval), so a box whose rates cannot all be 0 holds no resting state, by
// proof; boxes are narrowed by hull consistency and by the interval Newton step on
// the preconditioned system, and each state is proved to exist, alone in its box, by
// Krawczyk's test. What can be neither excluded nor proved is given as Unresolved:
// near a fold, at a degenerate state or along a continuum, where the honest answer
// is 'not proved'.
//
// A state in which species are absent lies on a face of the box, where no box around
// it can be searched. It is proved on the face, as a state of the network without
// those species, once it is shown that they stay at exactly 0 there; and no other
// state is near since the rates of change tell all points near it apart.
//
// Species that all rates are linear in (transcripts, most often) are never cut: they
// follow from the others by narrowing. So it is the other species that cost.
//
// The numbers of a design are taken as they are in floating point, and the rates
// of the exact real-number laws with those numbers are what the proof is about.
//
// Methods: Neumaier, Interval Methods for Systems of Equations, Cambridge 1990;
// Moore, Kearfott, Cloud, Introduction to Interval Analysis, SIAM 2009; Krawczyk,
// Computing 4 (1969) 187.
package proof
