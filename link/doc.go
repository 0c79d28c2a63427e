// Package link describes what lies between a photon-pair source and a click:
// loss in decibels, fibre classes, arrival-time spread, depolarisation, and
// the response of a single-photon detector.
//
// It works on plain numbers in one fixed unit each, which ends the name
// (LengthKm, JitterFWHMPs, DarkCountsHz); DB is the only quantity type. It
// knows nothing of keys, of files or of photon-pair states.
package link
