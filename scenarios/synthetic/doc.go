// Package synthetic generates ensembles whose information is known.
//
// A scenario draws its streams and spike trains from a seed, unit by unit, so
// that the first 256 cells of 1024 are the same as those of 256. Its truth is
// stated apart, as the spectra of its size-resolved trains; what a code carries
// is derived from them elsewhere, and never travels with a recording.
package synthetic
