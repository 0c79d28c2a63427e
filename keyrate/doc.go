// Package keyrate is the whole model of an entanglement-based link (BBM92):
// from pairs made in the source to secret key.
//
// Everything goes through one function, Link.Key: a Link is a plain value
// without pointers or maps, so it is copied, edited and asked again; an
// OperatingPoint is what an operator can turn. There are no decibels and no
// files here: see package scenarios.
//
// Bases are indexed by Key and Check, arms by Alice and Bob.
package keyrate

// The two arms.
const (
	Alice = iota
	Bob
)

// The two bases: the key basis is the one with the smaller state error.
const (
	KeyBasis = iota
	CheckBasis
)
