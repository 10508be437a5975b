// Package inspect describes a recording and what is wrong with it, before a day
// is spent on ranking.
//
// Run reads the trains once and fills a Document: what was read, rates,
// intervals against the burst threshold, events by size, how many bursts chance
// alone would make, pairs of units that look like one cell or like copies, and
// the shape, the steadiness and the spectrum of every stream. Whatever is
// suspicious is a warning that says how bad it is and what to do.
package inspect
