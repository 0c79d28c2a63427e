// Package sources describes sources of entangled photon pairs: the two-photon
// state and its measures, what a tangle, a concurrence or a fidelity alone says
// about it, the accidentals in it, and what laboratory data say: a pair rate from
// counts at the source, a state from tomography.
//
// States are written in the order HH, HV, VH, VV, Alice's photon first. Errors
// are bit error probabilities (0 to 1/2) of a pair measured in one basis by
// both, before anything that the link adds. Pure functions return NaN outside
// their domain.
package sources
